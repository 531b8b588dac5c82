#pragma once

#include <map>
#include <mutex>
#include <vector>

#include <Eigen/Core>

#include "chainmark/sector/observable.hpp"
#include "chainmark/sector/solution.hpp"
#include "chainmark/sector/string_symmetry.hpp"

namespace chainmark::sector {

/// Averages of a string in the eigenstates of one family: <S> of the Hermitian parts of
/// S = A + i B, both averaged over the translations and reflections.
struct StringValues {
    Eigen::VectorXd real;
    Eigen::VectorXd imaginary;  ///< empty where H is real: zero
};

/// All levels of the sectors that share their energies and averages.
struct LevelFamily {
    double sz = 0.0;                                  ///< where Sz is conserved
    double copies = 1.0;                              ///< sectors in the family
    std::size_t twin = 0;                             ///< the block
    std::map<OperatorString, StringValues> averages;  ///< by representative
};

/// What the response of M to a field needs of one block beside the levels (see `Thermal`).
struct BlockResponse {
    Eigen::VectorXd diagonal;   ///< <n|M|n>
    Eigen::VectorXd far;        ///< sum over distant m of |<n|M|m>|^2 / (E_m - E_n)
    Eigen::VectorXd far_sizes;  ///< the same with |E_m - E_n|
    Eigen::VectorXd squares;    ///< <n|M^2|n>
    struct Pair {
        std::int32_t n, m;  ///< n < m
        double strength;    ///< |<n|M|m>|^2
    };
    std::vector<Pair> near;
};

/// Every level of a solution, and what thermal averages need of the eigenvectors, taken while each
/// block's vectors are there. One spectrum serves all temperatures and, where Sz is conserved, all
/// fields.
class ThermalSpectrum {
public:
    struct BlockLevels {
        Eigen::VectorXd energies;  ///< without constant and uniform field
        Eigen::VectorXd bounds;
        double residual =
            0.0;  ///< bounds ||dH|| where the computed eigenpairs are exact for H + dH
        BlockResponse response;
    };

    /// `strings`: what averages will be asked of. `response`: whether that of M will be; the
    /// solution must then be without inversion, which does not commute with M.
    ThermalSpectrum(Solution& solution,
                    const Chain& chain,
                    const std::vector<Observable>& observables,
                    bool response);

    const std::vector<LevelFamily>& families() const { return families_; }
    const BlockLevels& block(const LevelFamily& family) const { return blocks_.at(family.twin); }
    const std::map<std::size_t, BlockLevels>& blocks() const { return blocks_; }
    const Solution& solution() const { return solution_; }
    const Chain& chain() const { return chain_; }
    /// Symmetries of every state of the sweep: no inversion, which a field breaks.
    const StringSymmetry& symmetry() const { return symmetry_; }
    double rounding() const { return rounding_; }

private:
    void take_levels(std::size_t twin, const Block& block);
    void take_averages(std::size_t twin, const Context& context);
    void take_response(std::size_t twin, const Block& block, const Context& context);

    const Solution& solution_;
    Chain chain_;
    StringSymmetry symmetry_;
    std::vector<OperatorString> representatives_;
    std::vector<LevelFamily> families_;
    std::vector<std::size_t> family_sector_;  ///< one sector of each family
    std::map<std::size_t, BlockLevels> blocks_;
    double rounding_ = 0.0;  ///< of one element of H
};

}  // namespace chainmark::sector
