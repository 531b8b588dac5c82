#pragma once

#include <optional>
#include <string>

#include "chainmark/fermion/fixed_number_levels.hpp"
#include "chainmark/fermion/ground_space.hpp"

namespace chainmark::fermion {

/// Why the levels of a user's sector are not given; empty where they are: Sz where it is conserved,
/// the parity of the up count, the momentum of a uniform ring (with pairs: without twist).
std::string sector_refusal(const Labels& wanted, const QuadraticForm& form);

/// The states with the wanted quantum numbers in ascending order. A momentum is picked out of the
/// states of all momenta. The solution must outlive it.
class SectorLevels {
public:
    SectorLevels(const Solution& solution, double field, const Labels& wanted);

    /// Nothing where the sector has no more, or where 2^22 states in a row had other momenta.
    std::optional<State> next(const Context& context);

    /// True where the latter happened.
    bool gave_up() const { return gave_up_; }

    Labels labels(const State& state) const { return levels_.labels(state); }
    Real error() const { return levels_.error(); }

private:
    Levels levels_;
    std::optional<FixedNumberLevels> fixed_;
    Labels wanted_;
    bool empty_ = false;  ///< Sz and parity exclude each other
    bool gave_up_ = false;
};

}  // namespace chainmark::fermion
