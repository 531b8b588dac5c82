#pragma once

#include <complex>
#include <optional>
#include <string>
#include <vector>

#include "chainmark/dense/full_matrix.hpp"
#include "chainmark/operators/chain.hpp"

/// Permutations of basis states with phases, on a subset of the basis.
namespace chainmark::dense {

/// Some of the basis states of a chain.
class Subset {
public:
    /// Those whose digits sum to `up_count`, or whose digit sum has `parity` (-1)^sum; all if
    /// neither is given.
    Subset(const Chain& chain, std::optional<int> up_count, std::optional<int> parity);

    const Chain& chain() const { return chain_; }
    Eigen::Index size() const { return static_cast<Eigen::Index>(states_.size()); }
    const std::vector<int>& digits(Eigen::Index i) const {
        return digits_[static_cast<std::size_t>(i)];
    }
    Eigen::Index state(Eigen::Index i) const { return states_[static_cast<std::size_t>(i)]; }
    int up_count(Eigen::Index i) const;
    /// Place of the state with these digits; -1 where it is not in the subset.
    Eigen::Index find(const std::vector<int>& digits) const;

    /// Whether no element of `matrix` leads out of the subset.
    bool is_closed_under(const FullMatrix<std::complex<double>>& matrix) const;

    /// The rows and columns of `matrix` that belong to the subset.
    FullMatrix<std::complex<double>> block_of(const FullMatrix<std::complex<double>>& matrix) const;

private:
    Chain chain_;
    std::vector<Eigen::Index> states_;
    std::vector<std::vector<int>> digits_;
    std::vector<Eigen::Index> place_;  ///< of every basis state, or -1
};

/// U|i> = phase_i |to_i>
struct BasisMap {
    std::vector<Eigen::Index> to;
    std::vector<std::complex<double>> phase;

    FullMatrix<std::complex<double>> matrix() const;
};

/// Nothing where the map leads out of the subset.
std::optional<BasisMap> translation(const Subset& subset, int sites);
std::optional<BasisMap> reflection(const Subset& subset);
std::optional<BasisMap> inversion(const Subset& subset);

/// Whether U H U^-1 = H but for rounding, `weight` being the scale of H.
bool commutes(const BasisMap& map, const FullMatrix<std::complex<double>>& h, double weight);

}  // namespace chainmark::dense
