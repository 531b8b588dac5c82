#include "chainmark/sector/block.hpp"

#include <algorithm>

#include "chainmark/base/hermitian_eigen.hpp"
#include "chainmark/base/numerics.hpp"

namespace chainmark::sector {

void Block::enumerate() {
    if (!basis_) {
        basis_ = std::make_unique<SectorBasis>(sector_, length_);
        dim_ = basis_->dim();
    }
}

void Block::extend(std::size_t count,
                   const std::vector<BitTerm>& terms,
                   bool real,
                   const Context& context) {
    enumerate();
    const auto wanted = std::min(count, static_cast<std::size_t>(dim_));
    if (known() >= wanted) {
        return;
    }
    CHAINMARK_EXPECTS(real || dim_ <= complex_dense_limit);
    if (!real || dim_ <= dense_limit) {
        solve_completely(terms, real, context);
    }
    while (known() < wanted) {
        add_next(terms, context);
    }
}

void Block::solve_completely(const std::vector<BitTerm>& terms, bool real, const Context& context) {
    enumerate();
    if (all_known()) {
        return;
    }
    if (real) {
        solve_as<double>(terms, context);
    } else {
        solve_as<std::complex<double>>(terms, context);
    }
}

template <class Scalar>
void Block::solve_as(const std::vector<BitTerm>& terms, const Context& context) {
    poll(context);
    const auto matrix = build_matrix<Scalar>(*basis_, terms, context.threads);
    const auto dense = matrix.as_dense();
    HermitianEigen<Scalar> solution = hermitian_eigen(dense);
    poll(context);
    const Eigen::VectorXd residuals =
        (dense * solution.vectors - solution.vectors * solution.values.asDiagonal())
            .colwise()
            .norm()
            .transpose()
            .array() +
        matrix.residual_noise();
    const Eigen::VectorXd bounds = cluster_bounds(solution.values, residuals);
    energies_.assign(solution.values.begin(), solution.values.end());
    bounds_.assign(bounds.begin(), bounds.end());
    residuals_.assign(residuals.begin(), residuals.end());
    pairs_.clear();
    if constexpr (std::is_same_v<Scalar, double>) {
        real_vectors_ = std::move(solution.vectors);
    } else {
        complex_vectors_ = std::move(solution.vectors);
    }
}

void Block::add_next(const std::vector<BitTerm>& terms, const Context& context) {
    if (!matrix_) {
        matrix_ = std::make_unique<SparseMatrix<double>>(
            build_matrix<double>(*basis_, terms, context.threads));
    }
    pairs_.push_back(lowest_outside(*matrix_, pairs_, context));
    // A copy that an earlier solve could not separate may come out a rounding below its twin.
    std::sort(pairs_.begin(), pairs_.end(), [](const EigenPair& a, const EigenPair& b) {
        return a.value < b.value;
    });
    const auto count = static_cast<Eigen::Index>(pairs_.size());
    Eigen::VectorXd values(count);
    Eigen::VectorXd residuals(count);
    for (Eigen::Index i = 0; i < count; ++i) {
        values[i] = pairs_[static_cast<std::size_t>(i)].value;
        residuals[i] = pairs_[static_cast<std::size_t>(i)].residual;
    }
    const Eigen::VectorXd bounds = cluster_bounds(values, residuals);
    energies_.assign(values.begin(), values.end());
    residuals_.assign(residuals.begin(), residuals.end());
    bounds_.assign(bounds.begin(), bounds.end());
}

Eigen::VectorXcd Block::vector(std::size_t level) const {
    if (!pairs_.empty()) {
        return pairs_[level].vector.cast<std::complex<double>>();
    }
    const auto column = static_cast<Eigen::Index>(level);
    if (complex_vectors_.size() > 0) {
        return complex_vectors_.col(column);
    }
    return real_vectors_.col(column).cast<std::complex<double>>();
}

}  // namespace chainmark::sector
