#include "chainmark/fermion/bulk_correlations.hpp"

#include <algorithm>
#include <cmath>

#include <Eigen/Core>
#include <Eigen/QR>

#include "chainmark/fermion/bulk.hpp"

namespace chainmark::fermion {
namespace {

using RealMatrix = Eigen::Matrix<Real, Eigen::Dynamic, Eigen::Dynamic>;

/// sin(pi x) for x >= 0, exactly 0 for whole x.
Real sine_of_turns(Real x) {
    const Real rest = std::fmod(x, 2.0L);
    const Real part = rest - std::round(rest);
    return std::fmod(std::round(rest), 2.0L) == 0.0L ? std::sin(real_pi * part)
                                                     : -std::sin(real_pi * part);
}

/// How far apart the query's sites lie at most.
int reach_of(const Options& options) {
    int reach = 0;
    for (const auto& [i, j] : options.pairs) {
        reach = std::max(reach, std::abs(i - j));
    }
    for (const int r : options.distance) {
        reach = std::max(reach, r);
    }
    return reach;
}

/// Determinant by reflections, each of determinant -1.
Real determinant(const RealMatrix& matrix) {
    const Eigen::HouseholderQR<RealMatrix> qr(matrix);
    Real product = 1.0L;
    for (Eigen::Index i = 0; i < matrix.rows(); ++i) {
        const bool reflected = qr.hCoeffs()(i) != 0.0L;
        product *= reflected ? -qr.matrixQR()(i, i) : qr.matrixQR()(i, i);
    }
    return product;
}

/// |det(G + E) - det G| for a contraction G with n rows, the elements of E below `error`, and the
/// rounding of the factorization, which is a change of G by at most 4 n eps of its norm. The
/// cofactors of a contraction form a contraction, so the difference is at most
/// |E|_tr (1 + |E|)^(n-1) with the trace norm |E|_tr <= sqrt(n) |E|_F <= n^(3/2) error.
Real determinant_error(Eigen::Index rows, Real error) {
    const Real n = static_cast<Real>(rows);
    const Real frobenius = n * error + 4 * n * real_epsilon * std::sqrt(n);
    return std::sqrt(n) * frobenius * std::exp(n * frobenius);
}

/// f(i, j) for the pairs of a query and, for its distances, the mean over the places of a cell.
template <class Function>
std::vector<Bounded> over_pairs(const Options& options, int cell, const Function& f) {
    std::vector<Bounded> numbers;
    for (const auto& [i, j] : options.pairs) {
        numbers.push_back(f(i, j));
    }
    for (const int r : options.distance) {
        Bounded mean;
        for (int i = 0; i < cell; ++i) {
            const Bounded term = f(i, i + r);
            mean.value += term.value / static_cast<Real>(cell);
            mean.error += (term.error + (cell > 1 ? real_epsilon : 0.0L)) / static_cast<Real>(cell);
        }
        numbers.push_back(mean);
    }
    return numbers;
}

Bounded quarter(const Bounded& x) {
    return {x.value / 4, x.error / 4};
}

}  // namespace

Contractions::Contractions(const Bands& bands, const std::optional<Real>& temperature, int reach)
    : cell_(bands.cell()),
      reach_(reach),
      closed_(bands.chain().is_uniform_xx() && !temperature),
      table_(static_cast<std::size_t>(bands.cell()) * width()) {
    if (closed_) {
        fill_uniform_xx(bands);
        return;
    }
    for (int from = 0; from < cell_; ++from) {
        integrate_place(bands, temperature, from);
    }
}

std::size_t Contractions::index(int i, int j) const {
    const int place = ((i % cell_) + cell_) % cell_;
    return static_cast<std::size_t>(place) * width() + static_cast<std::size_t>(j - i + reach_);
}

/// With n = m + 1/2 up spins a site: G(0) = 2n - 1 and G(r) = (+-1)^r 2 sin(pi n r)/(pi r), the
/// sign that of -J; 0 at J = h = 0, the average over all states.
void Contractions::fill_uniform_xx(const Bands& bands) {
    const InfiniteChain& chain = bands.chain();
    if (chain.is_decoupled() && chain.field == 0.0L) {
        return;
    }
    constexpr Real few = 16 * real_epsilon;
    const Real m = ground_magnetization(bands).value.value;
    for (int r = -reach_; r <= reach_; ++r) {
        const Real distance = std::abs(static_cast<Real>(r));
        const bool negative = chain.jx > 0 && r % 2 != 0;
        const Real kernel =
            r == 0 ? 2 * m : 2 * sine_of_turns((m + 0.5L) * distance) / (real_pi * distance);
        table_[index(0, r)] = {negative ? -kernel : kernel, few};
    }
}

/// All G(i, i + r) of one place: the symbol once a node, cos(nk) and sin(nk) by turning on.
void Contractions::integrate_place(const Bands& bands,
                                   const std::optional<Real>& temperature,
                                   int from) {
    constexpr int most_refinements = 3;
    Features features = bands.features(temperature);
    const int cells = reach_ / cell_ + 1;
    features.longest_panel = 4.0L / static_cast<Real>(cells);
    const Real rounding = real_epsilon * (16 * (1 + std::log(bands.condition())) + 4.0L * cells);
    for (int refinement = 0; refinement <= most_refinements; ++refinement) {
        const std::vector<Node> mesh = momentum_mesh(features, refinement);
        Real worst = 0.0L;
        for (int to = 0; to < cell_; ++to) {
            worst = std::max(worst, integrate_places(bands, temperature, from, to, mesh));
        }
        for (Bounded& entry : row(from)) {
            entry.error += rounding;
        }
        if (worst <= rounding) {
            return;
        }
    }
}

/// The entries from `from` to `to` of every cell within reach; the largest difference of the rules.
Real Contractions::integrate_places(const Bands& bands,
                                    const std::optional<Real>& temperature,
                                    int from,
                                    int to,
                                    const std::vector<Node>& mesh) {
    // Sites j = i + r with r = cell n + to - from, |r| <= reach; n and -n share cos(nk).
    const int most = reach_ / cell_ + 1;
    std::vector<CompensatedSum> even(static_cast<std::size_t>(most + 1));
    std::vector<CompensatedSum> odd = even;
    std::vector<CompensatedSum> even_coarse = even;
    std::vector<CompensatedSum> odd_coarse = even;
    for (const Node& node : mesh) {
        const Symbol symbol = bands.symbol(from, to, node, temperature);
        const Real turn_cos = node.cos();
        const Real turn_sin = node.sin();
        Real c = 1.0L;
        Real s = 0.0L;
        for (std::size_t n = 0; n < even.size(); ++n) {
            even[n].add(node.weight * symbol.even * c);
            odd[n].add(node.weight * symbol.odd * s);
            even_coarse[n].add(node.coarse * symbol.even * c);
            odd_coarse[n].add(node.coarse * symbol.odd * s);
            const Real next = c * turn_cos - s * turn_sin;
            s = s * turn_cos + c * turn_sin;
            c = next;
        }
    }
    Real worst = 0.0L;
    for (int n = -most; n <= most; ++n) {
        const int r = cell_ * n + to - from;
        if (std::abs(r) > reach_) {
            continue;
        }
        const auto at = static_cast<std::size_t>(std::abs(n));
        const Real sign = n < 0 ? -1.0L : 1.0L;
        const Real fine = (even[at].value() + sign * odd[at].value()) / real_pi;
        const Real coarse = (even_coarse[at].value() + sign * odd_coarse[at].value()) / real_pi;
        table_[index(from, from + r)] = {-fine, std::abs(fine - coarse)};
        worst = std::max(worst, std::abs(fine - coarse));
    }
    return worst;
}

std::span<Bounded> Contractions::row(int place) {
    return std::span(table_).subspan(static_cast<std::size_t>(place) * width(), width());
}

Bounded Contractions::product(const std::vector<int>& rows, const std::vector<int>& columns) const {
    const auto size = static_cast<Eigen::Index>(rows.size());
    RealMatrix matrix(size, size);
    for (Eigen::Index l = 0; l < size; ++l) {
        for (Eigen::Index m = 0; m < size; ++m) {
            matrix(l, m) =
                at(rows[static_cast<std::size_t>(l)], columns[static_cast<std::size_t>(m)]);
        }
    }
    return {determinant(matrix), determinant_error(size, largest_error())};
}

Real Contractions::largest_error() const {
    Real largest = 0.0L;
    for (const Bounded& entry : table_) {
        largest = std::max(largest, entry.error);
    }
    return largest;
}

Correlations::Correlations(const Bands& bands,
                           const std::optional<Real>& temperature,
                           const Options& options)
    : options_(options),
      cell_(bands.cell()),
      contractions_(bands, temperature, reach_of(options)) {}

std::vector<Bounded> Correlations::values() const {
    return over_pairs(options_, cell_, [this](int i, int j) { return pair(i, j); });
}

Bounded Correlations::pair(int i, int j) const {
    const auto plus = [](const Bounded& a, const Bounded& b) {
        return Bounded{a.value + b.value, a.error + b.error + real_epsilon};
    };
    switch (options_.axes) {
        case Axes::zz:
            return zz(i, j);
        case Axes::xx:
            return transverse(i, j, Axis::x);
        case Axes::yy:
            return transverse(i, j, Axis::y);
        case Axes::plus_minus:
            if (i == j) {  // S+ S- = 1/2 + Sz
                return plus({0.5L, 0.0L},
                            {contractions_.at(i, i) / 2, contractions_.error(i, i) / 2});
            }
            return plus(transverse(i, j, Axis::x), transverse(i, j, Axis::y));
        case Axes::dot:
            return plus(plus(transverse(i, j, Axis::x), transverse(i, j, Axis::y)), zz(i, j));
    }
    return {};
}

Bounded Correlations::zz(int i, int j) const {
    const Contractions& g = contractions_;
    const Real product = g.at(i, i) * g.at(j, j) / 4;
    const Real error =
        (g.error(i, i) + g.error(j, j) + g.error(i, j) + g.error(j, i)) / 4 + real_epsilon;
    if (i == j) {
        return {0.25L - (options_.connected ? product : 0.0L), options_.connected ? error : 0.0L};
    }
    const Real exchange = g.at(i, j) * g.at(j, i) / 4;
    return {(options_.connected ? 0.0L : product) - exchange, error};
}

Bounded Correlations::transverse(int i, int j, Axis axis) const {
    if (i == j) {
        return {0.25L, 0.0L};
    }
    std::vector<int> sites;
    std::vector<int> next;
    for (int l = std::min(i, j); l < std::max(i, j); ++l) {
        sites.push_back(l);
        next.push_back(l + 1);
    }
    return quarter(axis == Axis::x ? contractions_.product(sites, next)
                                   : contractions_.product(next, sites));
}

namespace {

Bounded string_order(const Contractions& contractions, int i, int j, Axis axis) {
    std::vector<int> sites;
    std::vector<int> next;
    const int step = axis == Axis::z ? 1 : 2;
    if (axis != Axis::z && (j - i) % 2 == 0) {
        return {0.0L, 0.0L};
    }
    for (int l = i; l <= j; l += step) {
        sites.push_back(l);
        next.push_back(axis == Axis::z ? l : l + 1);
    }
    return quarter(axis == Axis::y ? contractions.product(next, sites)
                                   : contractions.product(sites, next));
}

}  // namespace

std::vector<Bounded> string_orders(const Bands& bands, const Options& options) {
    const Contractions contractions(bands, std::nullopt, reach_of(options));
    return over_pairs(options, bands.cell(), [&](int i, int j) {
        return string_order(contractions, i, j, options.axis);
    });
}

}  // namespace chainmark::fermion
