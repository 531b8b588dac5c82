#include "bench/csr.hpp"

#include <algorithm>

#include "chainmark/base/parallel.hpp"

namespace chainmark::bench {
namespace {

using Vector = Eigen::Map<Eigen::VectorXd>;
using ConstVector = Eigen::Map<const Eigen::VectorXd>;

}  // namespace

CsrRow csr_row(const sector::HalvesBasis& basis,
               const sector::PackedOperator& op,
               sector::Word word) {
    std::vector<sector::Word> words(op.most_hops() + 1);
    std::vector<std::uint32_t> which(op.most_hops() + 1);
    const auto count = static_cast<std::size_t>(op.neighbours(word, words.data(), which.data()));
    CsrRow row;
    if (!op.diagonal().empty()) {
        row.emplace_back(static_cast<std::int32_t>(basis.rank(word)), op.diagonal_element(word));
    }
    for (std::size_t i = 0; i < count; ++i) {
        row.emplace_back(static_cast<std::int32_t>(basis.rank(words[i])),
                         op.amplitudes()[which[i]].real());
    }
    std::sort(row.begin(), row.end());
    return row;
}

CsrMatrix csr_matrix(const sector::HalvesBasis& basis,
                     const sector::PackedOperator& op,
                     const Context& context) {
    CsrMatrix matrix(basis.dim(), basis.dim());
    std::int32_t* const start = matrix.outerIndexPtr();
    start[0] = 0;
    const auto for_each_row = [&](auto&& use) {
        parallel_for(basis.highs().size(), context.threads, [&](std::size_t h) {
            basis.for_each_in(h, h + 1, [&](std::int64_t index, sector::Word word) {
                use(index, csr_row(basis, op, word));
            });
        });
    };
    for_each_row([&](std::int64_t index, const CsrRow& row) {
        start[index + 1] = static_cast<std::int32_t>(row.size());
    });
    for (std::int64_t i = 0; i < basis.dim(); ++i) {
        start[i + 1] += start[i];
    }
    matrix.resizeNonZeros(start[basis.dim()]);
    std::int32_t* const column = matrix.innerIndexPtr();
    double* const value = matrix.valuePtr();
    for_each_row([&](std::int64_t index, const CsrRow& row) {
        std::int32_t at = start[index];
        for (const auto& element : row) {
            column[at] = element.first;
            value[at++] = element.second;
        }
    });
    return matrix;
}

void multiply(const CsrMatrix& matrix, const double* x, double* y) {
    Vector(y, matrix.rows()).noalias() = matrix * ConstVector(x, matrix.cols());
}

void add_product(const CsrMatrix& matrix, const double* x, double* y) {
    Vector(y, matrix.rows()).noalias() += matrix * ConstVector(x, matrix.cols());
}

double csr_bytes(const CsrMatrix& matrix) {
    return 12.0 * static_cast<double>(matrix.nonZeros()) +
           (4.0 + 16.0) * static_cast<double>(matrix.rows());
}

}  // namespace chainmark::bench
