#pragma once

#include <complex>
#include <cstdint>
#include <vector>

#include <Eigen/Core>

#include "chainmark/sector/basis.hpp"
#include "chainmark/sector/bit_terms.hpp"

namespace chainmark::sector {

/// H in one sector, every row stored (compressed rows).
template <class Scalar>
struct SparseMatrix {
    using Vector = Eigen::Matrix<Scalar, Eigen::Dynamic, 1>;
    using Dense = Eigen::Matrix<Scalar, Eigen::Dynamic, Eigen::Dynamic>;

    std::vector<std::int64_t> row_start;  ///< dim + 1 entries
    std::vector<std::int32_t> column;
    std::vector<Scalar> value;
    /// Largest sum over a row of |contributions|, before they cancel: an upper bound of ||H|| and
    /// the scale of its rounding.
    double row_sum = 0.0;
    std::size_t n_terms = 0;  ///< strings that were summed

    std::int64_t dim() const { return static_cast<std::int64_t>(row_start.size()) - 1; }

    /// y = H x, O(non-zeros), on `threads` threads. x, y: dim.
    void apply(const Scalar* x, Scalar* y, int threads) const;

    Dense as_dense() const;

    /// Upper bound of the rounding error of ||H v - theta v|| for a unit vector v.
    double residual_noise() const;
};

/// Builds the rows directly, twice over the basis: once to count, once to fill.
template <class Scalar>
SparseMatrix<Scalar> build_matrix(const SectorBasis& basis,
                                  const std::vector<BitTerm>& terms,
                                  int threads);

extern template struct SparseMatrix<double>;
extern template struct SparseMatrix<std::complex<double>>;
extern template SparseMatrix<double> build_matrix(const SectorBasis&,
                                                  const std::vector<BitTerm>&,
                                                  int);
extern template SparseMatrix<std::complex<double>> build_matrix(const SectorBasis&,
                                                                const std::vector<BitTerm>&,
                                                                int);

}  // namespace chainmark::sector
