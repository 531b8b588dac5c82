#include "chainmark/base/hermitian_eigen.hpp"

#include <cmath>
#include <stdexcept>
#include <vector>

#include <fmt/format.h>

// LAPACK's own names. NOLINTBEGIN(readability-identifier-naming)
extern "C" {
void dsyevd_(const char* job,
             const char* triangle,
             const int* n,
             double* a,
             const int* lda,
             double* w,
             double* work,
             const int* lwork,
             int* iwork,
             const int* liwork,
             int* info);
void zheevd_(const char* job,
             const char* triangle,
             const int* n,
             std::complex<double>* a,
             const int* lda,
             double* w,
             std::complex<double>* work,
             const int* lwork,
             double* rwork,
             const int* lrwork,
             int* iwork,
             const int* liwork,
             int* info);
}
// NOLINTEND(readability-identifier-naming)

namespace chainmark {
namespace {

void check(int info, const char* routine) {
    if (info != 0) {
        throw std::runtime_error(fmt::format("LAPACK {} failed with info = {}", routine, info));
    }
}

/// `job`: "N" for the values alone, "V" to overwrite the matrix by the vectors, too.
Eigen::VectorXd run_dsyevd(const char* job, Eigen::MatrixXd& matrix) {
    const int n = static_cast<int>(matrix.rows());
    Eigen::VectorXd values(n);
    int info = 0;
    const auto call = [&](double* work, int lwork, int* iwork, int liwork) {
        dsyevd_(
            job, "L", &n, matrix.data(), &n, values.data(), work, &lwork, iwork, &liwork, &info);
        check(info, "dsyevd");
    };
    double work_size = 0;
    int iwork_size = 0;
    call(&work_size, -1, &iwork_size, -1);
    const int lwork = static_cast<int>(work_size);
    std::vector<double> work(static_cast<std::size_t>(lwork));
    std::vector<int> iwork(static_cast<std::size_t>(iwork_size));
    call(work.data(), lwork, iwork.data(), iwork_size);
    return values;
}

}  // namespace

HermitianEigen<double> hermitian_eigen(Eigen::MatrixXd matrix) {
    HermitianEigen<double> result;
    result.values = run_dsyevd("V", matrix);
    result.vectors = std::move(matrix);
    return result;
}

Eigen::VectorXd symmetric_eigenvalues(Eigen::MatrixXd matrix) {
    return run_dsyevd("N", matrix);
}

HermitianEigen<std::complex<double>> hermitian_eigen(Eigen::MatrixXcd matrix) {
    const int n = static_cast<int>(matrix.rows());
    HermitianEigen<std::complex<double>> result;
    result.values.resize(n);
    int info = 0;
    int query = -1;
    std::complex<double> work_size = 0;
    double rwork_size = 0;
    int iwork_size = 0;
    zheevd_("V",
            "L",
            &n,
            matrix.data(),
            &n,
            result.values.data(),
            &work_size,
            &query,
            &rwork_size,
            &query,
            &iwork_size,
            &query,
            &info);
    check(info, "zheevd");
    const int lwork = static_cast<int>(work_size.real());
    const int lrwork = static_cast<int>(rwork_size);
    std::vector<std::complex<double>> work(static_cast<std::size_t>(lwork));
    std::vector<double> rwork(static_cast<std::size_t>(lrwork));
    std::vector<int> iwork(static_cast<std::size_t>(iwork_size));
    zheevd_("V",
            "L",
            &n,
            matrix.data(),
            &n,
            result.values.data(),
            work.data(),
            &lwork,
            rwork.data(),
            &lrwork,
            iwork.data(),
            &iwork_size,
            &info);
    check(info, "zheevd");
    result.vectors = std::move(matrix);
    return result;
}

namespace {

/// Calls each(first, count) for every maximal run of overlapping intervals value +- bound.
template <class Each>
void for_each_cluster(const Eigen::VectorXd& values, const Eigen::VectorXd& bounds, Each&& each) {
    Eigen::Index first = 0;
    while (first < values.size()) {
        double reach = values[first] + bounds[first];
        Eigen::Index last = first + 1;
        while (last < values.size() && values[last] - bounds[last] <= reach) {
            reach = std::max(reach, values[last] + bounds[last]);
            ++last;
        }
        each(first, last - first);
        first = last;
    }
}

}  // namespace

Eigen::VectorXd cluster_bounds(const Eigen::VectorXd& values, const Eigen::VectorXd& residuals) {
    Eigen::VectorXd joined(values.size());
    for_each_cluster(values, residuals, [&](Eigen::Index first, Eigen::Index count) {
        joined.segment(first, count).setConstant(residuals.segment(first, count).norm());
    });
    return joined;
}

Eigen::VectorXd rank_bounds(const Eigen::VectorXd& values, const Eigen::VectorXd& bounds) {
    Eigen::VectorXd joined(values.size());
    for_each_cluster(values, bounds, [&](Eigen::Index first, Eigen::Index count) {
        joined.segment(first, count).setConstant(bounds.segment(first, count).maxCoeff());
    });
    return joined;
}

}  // namespace chainmark
