#include "chainmark/base/lu_factors.hpp"

#include "chainmark/base/error.hpp"

// LAPACK's own names. NOLINTBEGIN(readability-identifier-naming)
extern "C" {
void dgetrf_(const int* m, const int* n, double* a, const int* lda, int* pivots, int* info);
void zgetrf_(
    const int* m, const int* n, std::complex<double>* a, const int* lda, int* pivots, int* info);
}
// NOLINTEND(readability-identifier-naming)

namespace chainmark {
namespace {

template <class Scalar, class Routine>
LuFactors<Scalar> factors_by(Routine routine,
                             Eigen::Matrix<Scalar, Eigen::Dynamic, Eigen::Dynamic> matrix) {
    CHAINMARK_EXPECTS(matrix.rows() == matrix.cols());
    const int n = static_cast<int>(matrix.rows());
    std::vector<int> pivots(static_cast<std::size_t>(n));
    int info = 0;
    if (n > 0) {
        routine(&n, &n, matrix.data(), &n, pivots.data(), &info);
    }
    CHAINMARK_EXPECTS(info >= 0);  // positive: the first zero on the diagonal of U
    LuFactors<Scalar> factors{std::move(matrix), {}};
    for (const int pivot : pivots) {
        factors.exchanged.push_back(pivot - 1);
    }
    return factors;
}

}  // namespace

LuFactors<double> lu_factors(Eigen::MatrixXd matrix) {
    return factors_by<double>(dgetrf_, std::move(matrix));
}

LuFactors<std::complex<double>> lu_factors(Eigen::MatrixXcd matrix) {
    return factors_by<std::complex<double>>(zgetrf_, std::move(matrix));
}

}  // namespace chainmark
