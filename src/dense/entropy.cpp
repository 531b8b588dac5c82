#include "chainmark/dense/entropy.hpp"

#include <algorithm>
#include <cmath>
#include <numbers>

#include "chainmark/base/error.hpp"
#include "chainmark/base/hermitian_eigen.hpp"
#include "chainmark/base/numerics.hpp"
#include "chainmark/dense/full_matrix.hpp"

namespace chainmark::dense {
namespace {

struct Place {
    Eigen::Index row;
    Eigen::Index col;
};

/// Where the amplitudes stand in psi as a matrix: rows are the digits of the block's sites, columns
/// those of the others.
std::vector<Place> places(const Chain& chain, const std::vector<int>& block) {
    std::vector<Place> result;
    const Eigen::Index dim = full_dim(chain.length(), chain.two_s);
    for (Eigen::Index state = 0; state < dim; ++state) {
        Place place{0, 0};
        Place factor{1, 1};
        Eigen::Index rest = state;
        for (int site = 0; site < chain.length(); ++site) {
            const Eigen::Index digit = rest % chain.site_dim();
            rest /= chain.site_dim();
            if (std::find(block.begin(), block.end(), site) != block.end()) {
                place.row += digit * factor.row;
                factor.row *= chain.site_dim();
            } else {
                place.col += digit * factor.col;
                factor.col *= chain.site_dim();
            }
        }
        result.push_back(place);
    }
    return result;
}

double von_neumann(const Eigen::VectorXd& p) {
    double sum = 0.0;
    for (const double share : p) {
        sum -= share > 0 ? share * std::log(share) : 0.0;
    }
    return std::max(0.0, sum);
}

double audenaert(double distance, double dim) {
    const double t = std::min(distance, 1 - 1 / dim);  // the largest bound is reached there
    return t > 0 && dim > 1 ? t * std::log(dim - 1) - t * std::log(t) - (1 - t) * std::log1p(-t)
                            : 0.0;
}

/// The eigenvalues of K of the header for those of rho.
Eigen::VectorXd slopes(const Eigen::VectorXd& p, int order) {
    if (order == 1) {
        return p.unaryExpr([](double x) { return x > 0 ? -std::log(x) : 0.0; });
    }
    const double n = order;
    return n / (n - 1) / p.array().pow(n).sum() * p.array().pow(n - 1);
}

/// Value, and bound of what a trace distance costs.
Estimate entropy_of(const Eigen::VectorXd& p, int order, double distance) {
    const auto dim = static_cast<double>(p.size());
    if (order == 1) {
        return {von_neumann(p), audenaert(distance, dim)};
    }
    const double n = order;
    const double largest = p.maxCoeff();
    const double log_sum = n * std::log(largest) + std::log((p / largest).array().pow(n).sum());
    // relative change of sum p_i^n
    const double change = 2 * distance / largest;
    const double factor = n * change * std::pow(1 + change, n - 1);
    return {std::max(0.0, log_sum / (1 - n)),
            factor < 0.5 ? -std::log1p(-factor) / (n - 1) : std::log(dim)};
}

}  // namespace

Estimate entanglement_entropy(const Eigen::VectorXcd& psi,
                              const Chain& chain,
                              const Options& options,
                              const StateError& error) {
    CHAINMARK_EXPECTS(!options.block.empty() && options.order >= 1);
    const std::vector<Place> at = places(chain, options.block);
    const int in_block = static_cast<int>(options.block.size());
    Eigen::MatrixXcd matrix(full_dim(in_block, chain.two_s),
                            full_dim(chain.length() - in_block, chain.two_s));
    for (Eigen::Index state = 0; state < psi.size(); ++state) {
        const Place place = at[static_cast<std::size_t>(state)];
        matrix(place.row, place.col) = psi[state];
    }
    // The smaller of the two reduced states: both have the same eigenvalues but for zeros.
    const bool of_rows = matrix.rows() < matrix.cols();
    const Eigen::MatrixXcd reduced = of_rows ? Eigen::MatrixXcd(matrix * matrix.adjoint())
                                             : Eigen::MatrixXcd(matrix.adjoint() * matrix);
    const auto solution = hermitian_eigen(reduced);
    Eigen::VectorXd p = solution.values.cwiseMax(0.0);
    p /= p.sum();

    const Eigen::MatrixXcd k =
        solution.vectors * slopes(p, options.order).asDiagonal() * solution.vectors.adjoint();
    const Eigen::MatrixXcd turned =
        of_rows ? Eigen::MatrixXcd(k * matrix) : Eigen::MatrixXcd(matrix * k);
    Eigen::VectorXcd k_psi(psi.size());
    for (Eigen::Index state = 0; state < psi.size(); ++state) {
        const Place place = at[static_cast<std::size_t>(state)];
        k_psi[state] = turned(place.row, place.col);
    }
    // rounding: each eigenvalue within a few units of the last place of the largest
    const double distance =
        4 * error.tilt * error.tilt + 4 * epsilon * static_cast<double>(p.size());
    Estimate result = entropy_of(p, options.order, std::min(1.0, distance));
    result.bound += 2 * error.overlap(k_psi) + 8 * epsilon * result.value;
    if (options.log2) {
        result.value /= std::numbers::ln2;
        result.bound = result.bound / std::numbers::ln2 + epsilon * result.value;
    }
    return result;
}

}  // namespace chainmark::dense
