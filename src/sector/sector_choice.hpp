#pragma once

#include <string>

#include "chainmark/sector/solution.hpp"

namespace chainmark::sector {

/// The sectors that hold the states with the quantum numbers a query asks for.
///
/// A sector need not resolve every one of them: reflection takes momentum k to -k, and inversion Sz
/// to -Sz. Of such a pair of sectors each level has one even and one odd combination, so either of
/// the two stands for what is asked for.
struct SectorChoice {
    std::string refusal;         ///< why there is no such space; then nothing else is filled in
    std::vector<bool> accepted;  ///< by sector
    std::vector<bool> combined;  ///< its states are to be combined with another sector's
    Labels wanted;
    double dim = 0.0;  ///< of the space

    Solution::Accept accept() const {
        return [this](std::size_t sector) { return static_cast<bool>(accepted[sector]); };
    }
    /// Labels of a level found in a sector.
    Labels labels(const Solution& solution, std::size_t sector) const;
};

/// Every sector where nothing is asked for.
SectorChoice choose_sectors(const Problem& problem,
                            const Solution& solution,
                            const std::optional<Labels>& wanted);

}  // namespace chainmark::sector
