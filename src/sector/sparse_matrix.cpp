#include "chainmark/sector/sparse_matrix.hpp"

#include <algorithm>
#include <cmath>

#include "chainmark/base/error.hpp"
#include "chainmark/base/numerics.hpp"

namespace chainmark::sector {
namespace {

double conjugated(std::complex<double> x, double) {
    return x.real();
}
std::complex<double> conjugated(std::complex<double> x, std::complex<double>) {
    return std::conj(x);
}

/// Calls entry(column, value, sum of |contributions|) for every element of one row. H is Hermitian,
/// so the row of `state` is the conjugate of its column: where the strings take `state` to.
template <class Scalar, class Entry>
void visit_row(const SectorBasis& basis,
               const std::vector<BitTerm>& terms,
               std::uint64_t state,
               Entry&& entry) {
    std::size_t i = 0;
    while (i < terms.size()) {
        const std::uint64_t flip = terms[i].flip;
        std::complex<double> sum = 0.0;
        double weight = 0.0;
        for (; i < terms.size() && terms[i].flip == flip; ++i) {
            if (terms[i].acts_on(state)) {
                sum += terms[i].amplitude(state);
                weight += std::abs(terms[i].coefficient);
            }
        }
        if (weight != 0.0) {
            entry(basis.rank(state ^ flip), conjugated(sum, Scalar{}), weight);
        }
    }
}

}  // namespace

template <class Scalar>
SparseMatrix<Scalar> build_matrix(const SectorBasis& basis,
                                  const std::vector<BitTerm>& terms,
                                  int threads) {
    const std::int64_t dim = basis.dim();
    CHAINMARK_EXPECTS(dim <= std::numeric_limits<std::int32_t>::max());
    SparseMatrix<Scalar> matrix;
    matrix.n_terms = terms.size();
    matrix.row_start.assign(static_cast<std::size_t>(dim) + 1, 0);
#pragma omp parallel for num_threads(threads) schedule(static)
    for (std::int64_t row = 0; row < dim; ++row) {
        std::int64_t count = 0;
        visit_row<Scalar>(
            basis, terms, basis.state(row), [&](std::int64_t, Scalar, double) { ++count; });
        matrix.row_start[static_cast<std::size_t>(row) + 1] = count;
    }
    for (std::size_t row = 0; row < static_cast<std::size_t>(dim); ++row) {
        matrix.row_start[row + 1] += matrix.row_start[row];
    }
    matrix.column.resize(static_cast<std::size_t>(matrix.row_start.back()));
    matrix.value.resize(matrix.column.size());
    double largest = 0.0;
#pragma omp parallel for num_threads(threads) schedule(static) reduction(max : largest)
    for (std::int64_t row = 0; row < dim; ++row) {
        std::size_t at = static_cast<std::size_t>(matrix.row_start[static_cast<std::size_t>(row)]);
        double sum = 0.0;
        const auto store = [&](std::int64_t column, Scalar value, double weight) {
            matrix.column[at] = static_cast<std::int32_t>(column);
            matrix.value[at] = value;
            sum += weight;
            ++at;
        };
        visit_row<Scalar>(basis, terms, basis.state(row), store);
        largest = std::max(largest, sum);
    }
    matrix.row_sum = largest;
    return matrix;
}

template <class Scalar>
void SparseMatrix<Scalar>::apply(const Scalar* x, Scalar* y, int threads) const {
    // Below this many elements waking the second thread costs more than its help.
    constexpr std::size_t worth_threads = 200000;
    const std::int64_t rows = dim();
    const int used = value.size() < worth_threads ? 1 : threads;
#pragma omp parallel for num_threads(used) schedule(static)
    for (std::int64_t row = 0; row < rows; ++row) {
        Scalar sum(0);
        for (std::int64_t i = row_start[static_cast<std::size_t>(row)];
             i < row_start[static_cast<std::size_t>(row) + 1];
             ++i) {
            const auto at = static_cast<std::size_t>(i);
            sum += value[at] * x[column[at]];
        }
        y[row] = sum;
    }
}

template <class Scalar>
typename SparseMatrix<Scalar>::Dense SparseMatrix<Scalar>::as_dense() const {
    Dense dense = Dense::Zero(dim(), dim());
    for (std::size_t row = 0; row + 1 < row_start.size(); ++row) {
        for (std::int64_t i = row_start[row]; i < row_start[row + 1]; ++i) {
            const auto at = static_cast<std::size_t>(i);
            dense(static_cast<Eigen::Index>(row), column[at]) += value[at];
        }
    }
    return dense;
}

template <class Scalar>
double SparseMatrix<Scalar>::residual_noise() const {
    // An element of H and of H v is a sum of at most n_terms contributions, so
    // |fl(Hv) - Hv| <= (n_terms + 2) u sum |contribution| |v|, and the matrix of sums of
    // |contributions| has a norm of at most its largest row sum.
    return static_cast<double>(n_terms + 2) * epsilon / 2 * row_sum;
}

template struct SparseMatrix<double>;
template struct SparseMatrix<std::complex<double>>;
template SparseMatrix<double> build_matrix(const SectorBasis&, const std::vector<BitTerm>&, int);
template SparseMatrix<std::complex<double>> build_matrix(const SectorBasis&,
                                                         const std::vector<BitTerm>&,
                                                         int);

}  // namespace chainmark::sector
