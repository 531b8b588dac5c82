#include "chainmark/dense/sectors.hpp"

#include <cmath>
#include <map>
#include <numeric>

#include <Eigen/Eigenvalues>
#include <fmt/format.h>

#include "chainmark/base/hermitian_eigen.hpp"
#include "chainmark/base/numerics.hpp"
#include "chainmark/dense/basis_maps.hpp"

namespace chainmark::dense {
namespace {

using Complex = std::complex<double>;
using Matrix = FullMatrix<Complex>;

/// A projector, or why there is none.
struct Projector {
    std::string name;  ///< "momentum 3"
    Matrix matrix;
    std::string refusal;
};

/// (1 + sign U)/2 for a map with U^2 = 1.
Projector of_involution(std::string name,
                        const std::optional<BasisMap>& map,
                        int sign,
                        const Matrix& h,
                        double weight) {
    if (!map) {
        return {name, {}, fmt::format("{} does not commute with Sz or the parity", name)};
    }
    if (!commutes(*map, h, weight)) {
        return {name, {}, fmt::format("H does not commute with {}", name)};
    }
    Matrix identity(h.rows(), h.cols());
    identity.setIdentity();
    return {fmt::format("{} {:+}", name, sign),
            (identity + static_cast<double>(sign) * map->matrix()) / 2.0,
            ""};
}

/// By how much H changes N_up: 0 where it keeps it, 2 where it keeps the parity, else 1.
int up_count_step(const Subset& subset, const Matrix& h) {
    int step = 0;
    for (Eigen::Index row = 0; row < h.rows(); ++row) {
        for (Matrix::InnerIterator it(h, row); it; ++it) {
            step = std::gcd(step, std::abs(subset.up_count(row) - subset.up_count(it.col())));
        }
    }
    return step == 0 ? 0 : step % 2 == 0 ? 2 : 1;
}

/// P_n = (t/L) sum_r (exp(i k t) T^t)^r, k = (2 pi n + twist N)/L. The twist's part of the phase
/// goes into the map, whose power L/t is then the identity.
Projector of_momentum(int n, const Subset& subset, const Matrix& h, double weight) {
    const Chain& chain = subset.chain();
    Projector result{fmt::format("momentum {}", n), {}, ""};
    if (!chain.is_ring()) {
        result.refusal = "an open chain has no momentum";
        return result;
    }
    const int step = up_count_step(subset, h);
    if (chain.twist != 0.0 && step == 1) {
        result.refusal = "momentum with a twist needs H to conserve the parity of the up count";
        return result;
    }
    for (int sites = 1; sites < chain.length(); ++sites) {
        if (chain.length() % sites != 0) {
            continue;
        }
        BasisMap map = *translation(subset, sites);
        if (!commutes(map, h, weight)) {
            continue;
        }
        for (Eigen::Index i = 0; i < subset.size(); ++i) {
            const int count = step == 0 ? subset.up_count(i) : subset.up_count(i) % 2;
            const double k = (2 * pi * n + chain.twist * count) / chain.length();
            map.phase[static_cast<std::size_t>(i)] *= std::polar(1.0, k * sites);
        }
        const int order = chain.length() / sites;
        const Matrix turned = map.matrix();
        Matrix power(h.rows(), h.cols());
        power.setIdentity();
        result.matrix = power;
        for (int r = 1; r < order; ++r) {
            power = (turned * power).eval();
            result.matrix += power;
        }
        result.matrix /= static_cast<double>(order);
        return result;
    }
    result.refusal = "no translation by fewer than L sites commutes with H";
    return result;
}

/// The projectors that the labels beside sz and parity stand for.
std::vector<Projector> projectors_of(const Labels& labels,
                                     const Subset& subset,
                                     const Matrix& h,
                                     double weight) {
    std::vector<Projector> result;
    if (labels.momentum) {
        result.push_back(of_momentum(*labels.momentum, subset, h, weight));
    }
    if (labels.reflection) {
        result.push_back(
            of_involution("reflection", reflection(subset), *labels.reflection, h, weight));
    }
    if (labels.inversion) {
        result.push_back(
            of_involution("inversion", inversion(subset), *labels.inversion, h, weight));
    }
    return result;
}

/// Why the projectors have no common range to speak of; empty if they commute.
std::string conflict(const std::vector<Projector>& projectors) {
    for (std::size_t a = 0; a < projectors.size(); ++a) {
        if (!projectors[a].refusal.empty()) {
            return projectors[a].refusal;
        }
        for (std::size_t b = 0; b < a; ++b) {
            const Matrix& p = projectors[a].matrix;
            const Matrix& q = projectors[b].matrix;
            const Matrix commutator = Matrix(p * q) - Matrix(q * p);
            if (commutator.norm() > 1e-10 * std::sqrt(static_cast<double>(p.rows()))) {
                return fmt::format(
                    "{} does not commute with {}", projectors[a].name, projectors[b].name);
            }
        }
    }
    return "";
}

/// Groups of rows that nonzero elements connect.
std::vector<std::vector<Eigen::Index>> orbits_of(const Matrix& p) {
    std::vector<Eigen::Index> root(static_cast<std::size_t>(p.rows()));
    std::iota(root.begin(), root.end(), Eigen::Index{0});
    const auto find = [&](Eigen::Index i) {
        while (root[static_cast<std::size_t>(i)] != i) {
            i = root[static_cast<std::size_t>(i)];
        }
        return i;
    };
    for (Eigen::Index row = 0; row < p.rows(); ++row) {
        for (Matrix::InnerIterator it(p, row); it; ++it) {
            const Eigen::Index a = find(row);
            const Eigen::Index b = find(it.col());
            root[static_cast<std::size_t>(std::max(a, b))] = std::min(a, b);
        }
    }
    std::map<Eigen::Index, std::vector<Eigen::Index>> groups;
    for (Eigen::Index row = 0; row < p.rows(); ++row) {
        groups[find(row)].push_back(row);
    }
    std::vector<std::vector<Eigen::Index>> result;
    for (auto& [first, rows] : groups) {
        result.push_back(std::move(rows));
    }
    return result;
}

/// An orthonormal basis of the range of a projector, orbit by orbit: its eigenvectors of eigenvalue
/// 1. Rows in the whole basis of digits.
Matrix range_of(const Matrix& p, const Subset& subset) {
    std::vector<Eigen::Triplet<Complex>> elements;
    int columns = 0;
    for (const auto& orbit : orbits_of(p)) {
        const auto size = static_cast<Eigen::Index>(orbit.size());
        Eigen::MatrixXcd block(size, size);
        for (Eigen::Index i = 0; i < size; ++i) {
            for (Eigen::Index j = 0; j < size; ++j) {
                block(i, j) =
                    p.coeff(orbit[static_cast<std::size_t>(i)], orbit[static_cast<std::size_t>(j)]);
            }
        }
        const Eigen::SelfAdjointEigenSolver<Eigen::MatrixXcd> solver(block);
        for (Eigen::Index e = 0; e < size; ++e) {
            if (solver.eigenvalues()[e] < 0.5) {
                continue;
            }
            for (Eigen::Index i = 0; i < size; ++i) {
                const Eigen::Index state = subset.state(orbit[static_cast<std::size_t>(i)]);
                elements.emplace_back(
                    static_cast<int>(state), columns, solver.eigenvectors()(i, e));
            }
            ++columns;
        }
    }
    Matrix range(full_dim(subset.chain().length(), subset.chain().two_s), columns);
    range.setFromTriplets(elements.begin(), elements.end());
    return range;
}

/// H within the range, with residuals measured in the whole space.
SectorSpectrum solve_in(const Matrix& range, const Matrix& h, double noise, double constant) {
    const Eigen::MatrixXcd projected =
        Eigen::MatrixXcd(Matrix(range.adjoint()) * Matrix(h * range));
    const auto solution = hermitian_eigen(projected);
    SectorSpectrum result;
    result.energies = solution.values;
    result.states = range * solution.vectors;
    const Eigen::MatrixXcd image = h * result.states;
    result.residuals.resize(result.energies.size());
    for (Eigen::Index i = 0; i < result.energies.size(); ++i) {
        const Complex energy = result.energies[i];
        result.residuals[i] = (image.col(i) - energy * result.states.col(i)).norm() + noise;
    }
    result.bounds = cluster_bounds(result.energies, result.residuals);
    result.energies.array() += constant;
    result.bounds.array() += epsilon * (std::abs(constant) + result.energies.array().abs());
    return result;
}

}  // namespace

SectorSpectrum sector_spectrum(const Problem& problem,
                               const Labels& labels,
                               const Context& context) {
    const Chain& chain = problem.chain;
    const int length = chain.length();
    const TermList list = full_terms(problem);
    const Matrix full = full_matrix<Complex>(list.terms, length, chain.two_s);
    const MatrixScale scale = scale_of(list.terms, length, chain.two_s);
    poll(context);

    std::optional<int> up_count;
    if (labels.sz) {
        const double count = *labels.sz + length * chain.spin();
        if (count != std::round(count) || count < 0 || count > length * chain.two_s) {
            return {fmt::format("no state has Sz = {}", *labels.sz), {}, {}, {}, {}};
        }
        up_count = static_cast<int>(count);
    }
    const Subset subset(chain, up_count, labels.parity);
    if (subset.size() == 0) {
        return {"no state has these labels", {}, {}, {}, {}};
    }
    if (!subset.is_closed_under(full)) {
        return {labels.sz ? "H does not conserve Sz" : "H does not conserve the parity of N_up",
                {},
                {},
                {},
                {}};
    }
    const Matrix h = subset.block_of(full);
    const std::vector<Projector> projectors = projectors_of(labels, subset, h, scale.weight);
    if (std::string reason = conflict(projectors); !reason.empty()) {
        return {std::move(reason), {}, {}, {}, {}};
    }
    Matrix product(subset.size(), subset.size());
    product.setIdentity();
    for (const Projector& projector : projectors) {
        product = (product * projector.matrix).eval();
    }
    const Matrix range = range_of(product, subset);
    if (range.cols() == 0) {
        return {"no state has these labels", {}, {}, {}, {}};
    }
    poll(context);
    return solve_in(range, full, scale.noise, list.constant);
}

}  // namespace chainmark::dense
