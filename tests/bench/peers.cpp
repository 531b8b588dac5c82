#include "bench/peers.hpp"

#include <cmath>
#include <random>
#include <stdexcept>

#include <Eigen/Eigenvalues>
#include <Spectra/SymEigsSolver.h>

#include "chainmark/base/big_vector.hpp"

namespace chainmark::bench {
namespace {

/// x -> scale x, the current vector; y -> -keep y, the one before, ready to receive the product.
void normalize(BigVector<double>& x, BigVector<double>& y, double scale, double keep) {
    const auto size = static_cast<std::int64_t>(x.size());
    double* const a = x.data();
    double* const b = y.data();
#pragma omp parallel for simd schedule(static)
    for (std::int64_t i = 0; i < size; ++i) {
        a[i] *= scale;
        b[i] *= -keep;
    }
}

double dot(const BigVector<double>& x, const BigVector<double>& y) {
    const auto size = static_cast<std::int64_t>(x.size());
    const double* const a = x.data();
    const double* const b = y.data();
    double sum = 0.0;
#pragma omp parallel for simd schedule(static) reduction(+ : sum)
    for (std::int64_t i = 0; i < size; ++i) {
        sum += a[i] * b[i];
    }
    return sum;
}

/// y -= factor x; returns ||y||.
double subtract(const BigVector<double>& x, BigVector<double>& y, double factor) {
    const auto size = static_cast<std::int64_t>(x.size());
    const double* const a = x.data();
    double* const b = y.data();
    double sum = 0.0;
#pragma omp parallel for simd schedule(static) reduction(+ : sum)
    for (std::int64_t i = 0; i < size; ++i) {
        b[i] -= factor * a[i];
        sum += b[i] * b[i];
    }
    return std::sqrt(sum);
}

class ThreadedProduct {
public:
    using Scalar = double;
    explicit ThreadedProduct(const CsrMatrix& matrix) : matrix_(matrix) {}
    Eigen::Index rows() const { return matrix_.rows(); }
    Eigen::Index cols() const { return matrix_.cols(); }
    void perform_op(const double* x, double* y) const { multiply(matrix_, x, y); }

private:
    const CsrMatrix& matrix_;
};

}  // namespace

Solved plain_lanczos(const CsrMatrix& matrix, double tolerance) {
    constexpr int most_steps = 1000;
    constexpr int steps_between_tests = 4;
    const auto size = static_cast<std::size_t>(matrix.rows());
    BigVector<double> x(size);
    BigVector<double> y(size, 0.0);
    std::mt19937_64 generator(1);
    std::uniform_real_distribution<double> number(-0.5, 0.5);
    for (double& one : x) {
        one = number(generator);
    }
    std::vector<double> alpha;
    std::vector<double> beta;
    double norm = std::sqrt(dot(x, x));
    double keep = 0.0;
    for (int step = 1; step <= most_steps; ++step) {
        // y = H x - beta x_before,  alpha = <x|y>,  y -= alpha x,  beta = ||y||
        normalize(x, y, 1.0 / norm, keep);
        add_product(matrix, x.data(), y.data());
        alpha.push_back(dot(x, y));
        norm = keep = subtract(x, y, alpha.back());
        std::swap(x, y);
        if (step % steps_between_tests == 0) {
            Eigen::SelfAdjointEigenSolver<Eigen::MatrixXd> small;
            small.computeFromTridiagonal(Eigen::Map<const Eigen::VectorXd>(alpha.data(), step),
                                         Eigen::Map<const Eigen::VectorXd>(beta.data(), step - 1));
            const double residual = norm * std::abs(small.eigenvectors()(step - 1, 0));
            if (residual <= tolerance) {
                return {{small.eigenvalues()[0]}, residual, step};
            }
        }
        beta.push_back(norm);
    }
    throw std::runtime_error("plain Lanczos did not converge");
}

Solved by_spectra(const CsrMatrix& matrix, int count) {
    ThreadedProduct op(matrix);
    Spectra::SymEigsSolver<ThreadedProduct> solver(op, count, 20);
    solver.init();
    solver.compute(Spectra::SortRule::SmallestAlge, 1000, 1e-12, Spectra::SortRule::SmallestAlge);
    if (solver.info() != Spectra::CompInfo::Successful) {
        throw std::runtime_error("Spectra did not converge");
    }
    const Eigen::VectorXd values = solver.eigenvalues();
    const Eigen::VectorXd vector = solver.eigenvectors(1);
    Eigen::VectorXd image(vector.size());
    multiply(matrix, vector.data(), image.data());
    return {{values.begin(), values.end()},
            (image - values[0] * vector).norm(),
            static_cast<int>(solver.num_operations())};
}

}  // namespace chainmark::bench
