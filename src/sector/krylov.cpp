#include "chainmark/sector/krylov.hpp"

#include <cmath>
#include <random>
#include <span>
#include <stdexcept>

#include <Spectra/SymEigsSolver.h>
#include <fmt/format.h>

#include "chainmark/base/numerics.hpp"

namespace chainmark::sector {
namespace {

constexpr int krylov_vectors = 20;
constexpr int most_restarts = 500;

/// The deflated and shifted matrix as Spectra wants it.
class Operator {
public:
    using Scalar = double;

    Operator(const SparseMatrix<double>& matrix,
             const std::vector<EigenPair>& found,
             const Context& context)
        : matrix_(matrix), found_(found), context_(context), shift_(matrix.row_sum + 1.0) {}

    Eigen::Index rows() const { return matrix_.dim(); }
    Eigen::Index cols() const { return matrix_.dim(); }

    void perform_op(const double* in, double* out) const {
        poll(context_);
        matrix_.apply(in, out, context_.threads);
        const Eigen::Map<const Eigen::VectorXd> x(in, rows());
        Eigen::Map<Eigen::VectorXd> y(out, rows());
        y -= shift_ * x;
        for (const EigenPair& pair : found_) {
            y += (shift_ - pair.value) * pair.vector.dot(x) * pair.vector;
        }
    }

private:
    const SparseMatrix<double>& matrix_;
    const std::vector<EigenPair>& found_;
    const Context& context_;
    double shift_;
};

Eigen::VectorXd start_vector(Eigen::Index dim) {
    std::mt19937_64 generator(20240229);
    Eigen::VectorXd start(dim);
    for (double& x : start) {
        x = static_cast<double>(generator() >> 11) * 0x1p-53 - 0.5;
    }
    return start;
}

/// Unit vector, Rayleigh quotient and residual measured with the matrix itself.
EigenPair measured(const SparseMatrix<double>& matrix, Eigen::VectorXd vector, int threads) {
    const auto size = static_cast<std::size_t>(vector.size());
    const std::span<const double> v(vector.data(), size);
    vector /= std::sqrt(accurate_dot(v, v));
    Eigen::VectorXd image(vector.size());
    matrix.apply(vector.data(), image.data(), threads);
    EigenPair pair;
    pair.value = accurate_dot(v, std::span<const double>(image.data(), size));
    pair.residual = (image - pair.value * vector).norm() + matrix.residual_noise();
    pair.vector = std::move(vector);
    return pair;
}

}  // namespace

EigenPair lowest_outside(const SparseMatrix<double>& matrix,
                         const std::vector<EigenPair>& found,
                         const Context& context) {
    constexpr double tolerance = 1e-14;
    Operator op(matrix, found, context);
    const Eigen::Index vectors = std::min<Eigen::Index>(krylov_vectors, matrix.dim());
    Spectra::SymEigsSolver<Operator> solver(op, 1, vectors);
    const Eigen::VectorXd start = start_vector(matrix.dim());
    solver.init(start.data());
    solver.compute(Spectra::SortRule::SmallestAlge, most_restarts, tolerance);
    if (solver.info() != Spectra::CompInfo::Successful || solver.eigenvectors().cols() != 1) {
        throw std::runtime_error(
            fmt::format("the eigensolver did not converge in {} restarts", most_restarts));
    }
    return measured(matrix, solver.eigenvectors().col(0), context.threads);
}

double krylov_bytes(double dim) {
    return dim * 8 * (krylov_vectors + 12);
}

}  // namespace chainmark::sector
