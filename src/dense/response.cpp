#include "chainmark/dense/response.hpp"

#include <algorithm>
#include <cmath>

#include <Eigen/Eigenvalues>

#include "chainmark/base/numerics.hpp"

namespace chainmark::dense {
namespace {

/// Relative to ||M||: a spread of P M P below it may be rounding, above the other it is none.
constexpr double surely_equal = 1e-9;
constexpr double surely_split = 1e-6;

}  // namespace

template <class Scalar>
std::variant<Estimate, Splits, Unclear> second_order(const Ground& ground,
                                                     const FullSpectrum<Scalar>& spectrum) {
    const auto dim = static_cast<Eigen::Index>(ground.degeneracy);
    const double norm = spectrum.total_sz().cwiseAbs().maxCoeff();
    // m_0(:, g) = <n|M|g> for all n, rows in the order of the levels
    Eigen::MatrixXcd m_0(spectrum.dim(), dim);
    Eigen::VectorX<Eigen::Index> order(spectrum.dim());
    for (Eigen::Index n = 0; n < order.size(); ++n) {
        order[n] = ground.levels[static_cast<std::size_t>(n)].vector;
    }
    double ground_squares = 0.0;
    double all_squares = 0.0;
    for (Eigen::Index g = 0; g < dim; ++g) {
        const Eigen::Index vector = order[g];
        const Eigen::VectorXcd image = spectrum.total_sz().cwiseProduct(spectrum.state(vector));
        m_0.col(g) = spectrum.components(image)(order);
        ground_squares += std::pow(spectrum.residual(vector), 2);
    }
    for (const Eigen::Index vector : order) {
        all_squares += std::pow(spectrum.residual(vector), 2);
    }
    const Eigen::MatrixXcd inside = m_0.topRows(dim);
    const double mean = inside.trace().real() / static_cast<double>(dim);
    const double spread = (inside - mean * Eigen::MatrixXcd::Identity(dim, dim)).norm() / norm;
    if (spread > surely_equal) {
        return spread > surely_split ? std::variant<Estimate, Splits, Unclear>(Splits{})
                                     : Unclear{};
    }
    const double energy = ground.levels.front().energy;
    Eigen::MatrixXcd y = m_0;  // <n|y_g>
    y.topRows(dim).setZero();
    for (Eigen::Index n = dim; n < y.rows(); ++n) {
        y.row(n) /= ground.levels[static_cast<std::size_t>(n)].energy - energy;
    }
    const Eigen::MatrixXcd k = m_0.adjoint() * y;
    const Eigen::SelfAdjointEigenSolver<Eigen::MatrixXcd> solver((k + k.adjoint()) / 2.0);
    const Eigen::VectorXcd state = solver.eigenvectors().col(dim - 1);
    const Eigen::VectorXcd first_order = y * state;

    Eigen::VectorXcd coefficients(y.rows());
    coefficients(order) = first_order;
    const Eigen::VectorXcd moved = spectrum.combination(coefficients);
    const Eigen::VectorXcd turned =
        spectrum.components(spectrum.total_sz().cwiseProduct(moved) - mean * moved)(order);
    double change = 0.0;
    for (Eigen::Index n = dim; n < turned.size(); ++n) {
        const double distance = ground.levels[static_cast<std::size_t>(n)].energy - energy;
        change += std::norm(turned[n] / distance);
    }
    const double kappa = solver.eigenvalues()[dim - 1];
    const double length = first_order.norm();
    const double bound = std::sqrt(all_squares) * length * length +
                         2 * std::sqrt(ground_squares * change) +
                         64 * epsilon * (kappa + norm * length);
    return Estimate{2 * kappa, 2 * bound};
}

template std::variant<Estimate, Splits, Unclear> second_order(const Ground&,
                                                              const FullSpectrum<double>&);
template std::variant<Estimate, Splits, Unclear> second_order(
    const Ground&, const FullSpectrum<std::complex<double>>&);

}  // namespace chainmark::dense
