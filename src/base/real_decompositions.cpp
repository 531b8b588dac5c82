#include "chainmark/base/real_decompositions.hpp"

#include <stdexcept>
#include <vector>

#include <fmt/format.h>

// LAPACK's own names. NOLINTBEGIN(readability-identifier-naming)
extern "C" {
void dgesdd_(const char* job,
             const int* m,
             const int* n,
             double* a,
             const int* lda,
             double* s,
             double* u,
             const int* ldu,
             double* vt,
             const int* ldvt,
             double* work,
             const int* lwork,
             int* iwork,
             int* info);
void dgehrd_(const int* n,
             const int* low,
             const int* high,
             double* a,
             const int* lda,
             double* tau,
             double* work,
             const int* lwork,
             int* info);
void dorghr_(const int* n,
             const int* low,
             const int* high,
             double* a,
             const int* lda,
             const double* tau,
             double* work,
             const int* lwork,
             int* info);
void dgetrf_(const int* m, const int* n, double* a, const int* lda, int* pivots, int* info);
void dgemm_(const char* transpose_a,
            const char* transpose_b,
            const int* m,
            const int* n,
            const int* k,
            const double* alpha,
            const double* a,
            const int* lda,
            const double* b,
            const int* ldb,
            const double* beta,
            double* c,
            const int* ldc);
}
// NOLINTEND(readability-identifier-naming)

namespace chainmark {
namespace {

void check(int info, const char* routine) {
    if (info != 0) {
        throw std::runtime_error(fmt::format("LAPACK {} failed with info = {}", routine, info));
    }
}

/// Asks for the best size of the work space (length -1), then runs.
template <class Call>
void with_work_space(const char* routine, Call&& call) {
    double size = 0;
    check(call(&size, -1), routine);
    const int length = static_cast<int>(size);
    std::vector<double> work(static_cast<std::size_t>(length));
    check(call(work.data(), length), routine);
}

}  // namespace

SingularValues singular_values(Eigen::MatrixXd matrix) {
    const int n = static_cast<int>(matrix.rows());
    SingularValues result{Eigen::VectorXd(n), Eigen::MatrixXd(n, n), Eigen::MatrixXd(n, n)};
    std::vector<int> integers(8 * static_cast<std::size_t>(n));
    with_work_space("dgesdd", [&](double* work, int length) {
        int info = 0;
        dgesdd_("A",
                &n,
                &n,
                matrix.data(),
                &n,
                result.values.data(),
                result.u.data(),
                &n,
                result.v.data(),
                &n,
                work,
                &length,
                integers.data(),
                &info);
        return info;
    });
    result.v.transposeInPlace();
    return result;
}

Hessenberg hessenberg(Eigen::MatrixXd matrix) {
    const int n = static_cast<int>(matrix.rows());
    const int low = 1;
    Eigen::VectorXd tau(n);
    with_work_space("dgehrd", [&](double* work, int length) {
        int info = 0;
        dgehrd_(&n, &low, &n, matrix.data(), &n, tau.data(), work, &length, &info);
        return info;
    });
    Hessenberg result{matrix.diagonal(-1), {}};
    with_work_space("dorghr", [&](double* work, int length) {
        int info = 0;
        dorghr_(&n, &low, &n, matrix.data(), &n, tau.data(), work, &length, &info);
        return info;
    });
    result.q = std::move(matrix);
    return result;
}

int determinant_sign(Eigen::MatrixXd matrix) {
    const int n = static_cast<int>(matrix.rows());
    std::vector<int> pivots(static_cast<std::size_t>(n));
    int info = 0;
    dgetrf_(&n, &n, matrix.data(), &n, pivots.data(), &info);
    if (info > 0) {
        return 0;
    }
    check(info, "dgetrf");
    int sign = 1;
    for (int i = 0; i < n; ++i) {
        const bool exchanged = pivots[static_cast<std::size_t>(i)] != i + 1;
        sign = exchanged != (matrix(i, i) < 0) ? -sign : sign;
    }
    return sign;
}

Eigen::MatrixXd times_transpose(const Eigen::MatrixXd& a, const Eigen::MatrixXd& b) {
    const int m = static_cast<int>(a.rows());
    const int n = static_cast<int>(b.rows());
    const int k = static_cast<int>(a.cols());
    const double one = 1.0;
    const double zero = 0.0;
    Eigen::MatrixXd product(m, n);
    dgemm_("N", "T", &m, &n, &k, &one, a.data(), &m, b.data(), &n, &zero, product.data(), &m);
    return product;
}

}  // namespace chainmark
