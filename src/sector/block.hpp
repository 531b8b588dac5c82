#pragma once

#include <memory>
#include <optional>
#include <string>
#include <vector>

#include <Eigen/Core>

#include "chainmark/base/context.hpp"
#include "chainmark/sector/basis.hpp"
#include "chainmark/sector/krylov.hpp"
#include "chainmark/sector/sparse_matrix.hpp"

namespace chainmark::sector {

/// The lowest levels of one sector, found one after the other as they are asked for.
///
/// Up to `dense_limit` states the sector is solved completely by LAPACK. Above, levels come one by
/// one from Krylov solves, each with all found vectors moved away, so every new level is the lowest
/// of what remains: a list is complete up to its last level (tested, not proved).
class Block {
public:
    /// Largest sector that is solved completely.
    static constexpr std::int64_t dense_limit = 1000;          ///< real matrices
    static constexpr std::int64_t complex_dense_limit = 1500;  ///< complex ones have no other way

    Block(SectorLabel sector, int length) : sector_(sector), length_(length) {}

    const SectorLabel& sector() const { return sector_; }

    /// Makes the `count` lowest levels known, or all where there are fewer.
    /// Throws std::runtime_error without convergence, Interrupted on a stop request.
    void extend(std::size_t count,
                const std::vector<BitTerm>& terms,
                bool real,
                const Context& context);

    /// All levels at once, for sectors above `dense_limit` too: O(dim^3).
    void solve_completely(const std::vector<BitTerm>& terms, bool real, const Context& context);

    std::size_t known() const { return energies_.size(); }
    bool all_known() const { return static_cast<std::int64_t>(known()) == dim_; }
    double energy(std::size_t level) const { return energies_[level]; }
    double bound(std::size_t level) const { return bounds_[level]; }

    /// ||H v - E v|| of a level's vector.
    double residual(std::size_t level) const { return residuals_[level]; }

    /// Amplitudes over basis(), unit norm.
    Eigen::VectorXcd vector(std::size_t level) const;
    const SectorBasis& basis() const { return *basis_; }

    /// Drops the stored matrix; it is built again if more levels are asked for.
    void forget_matrix() { matrix_.reset(); }

private:
    void enumerate();
    template <class Scalar>
    void solve_as(const std::vector<BitTerm>& terms, const Context& context);
    void add_next(const std::vector<BitTerm>& terms, const Context& context);

    SectorLabel sector_;
    int length_;
    std::int64_t dim_ = -1;  ///< -1 until first used
    std::unique_ptr<SectorBasis> basis_;
    std::unique_ptr<SparseMatrix<double>> matrix_;
    std::vector<EigenPair> pairs_;  ///< Krylov levels
    Eigen::MatrixXd real_vectors_;  ///< complete solution of a real matrix
    Eigen::MatrixXcd complex_vectors_;
    std::vector<double> energies_;
    std::vector<double> bounds_;
    std::vector<double> residuals_;
};

}  // namespace chainmark::sector
