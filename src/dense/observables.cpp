#include "chainmark/dense/observables.hpp"

#include <array>
#include <cmath>

#include "chainmark/base/error.hpp"
#include "chainmark/base/numerics.hpp"

namespace chainmark::dense {
namespace {

constexpr std::array<Axis, 3> all_axes = {Axis::x, Axis::y, Axis::z};

struct MatrixPair {
    LocalMatrix a;
    LocalMatrix b;
};

/// The operators A and B of every part of <A_i B_j>.
std::vector<MatrixPair> matrices_of(Axes axes, int two_s) {
    const auto same = [&](Axis axis) -> MatrixPair {
        return {spin_component(axis, two_s), spin_component(axis, two_s)};
    };
    switch (axes) {
        case Axes::xx:
            return {same(Axis::x)};
        case Axes::yy:
            return {same(Axis::y)};
        case Axes::zz:
            return {same(Axis::z)};
        case Axes::plus_minus:
            return {{raising(two_s), raising(two_s).adjoint()}};
        case Axes::dot:
            break;
    }
    return {same(Axis::x), same(Axis::y), same(Axis::z)};
}

/// The operator `matrix` at `site`, which may lie past the end of a ring.
Factor placed(const Chain& chain, int site, LocalMatrix matrix) {
    CHAINMARK_EXPECTS(site >= 0 && (chain.is_ring() || site < chain.length()));
    while (site >= chain.length()) {
        site -= chain.length();
        matrix = carried_around(matrix, chain.wrap_phase());
    }
    return {site, std::move(matrix)};
}

/// For each element of an answer the pairs of sites whose mean it is; the second site may lie past
/// the end of a ring.
std::vector<std::vector<std::pair<int, int>>> pairs_of(const Chain& chain, const Options& options) {
    std::vector<std::vector<std::pair<int, int>>> elements;
    for (const auto& pair : options.pairs) {
        elements.push_back({pair});
    }
    for (const int distance : options.distance) {
        elements.emplace_back();
        for (int i = 0; i < chain.length(); ++i) {
            if (chain.is_ring() || i + distance < chain.length()) {
                elements.back().emplace_back(i, i + distance);
            }
        }
    }
    return elements;
}

/// <S_i> along x, y and z for every site.
using LocalSpins = std::vector<std::array<Average, 3>>;

LocalSpins measure_spins(const Chain& chain, const Measure& measure) {
    LocalSpins spins(static_cast<std::size_t>(chain.length()));
    for (int site = 0; site < chain.length(); ++site) {
        for (std::size_t k = 0; k < 3; ++k) {
            const Factor factor{site, spin_component(all_axes[k], chain.two_s)};
            spins[static_cast<std::size_t>(site)][k] = measure({{1.0, {factor}}});
        }
    }
    return spins;
}

/// The average of a combination of Sx, Sy and Sz, A = sum_k S_k Tr(S_k A) / Tr(S_k^2).
Average average_of(const Factor& factor, const LocalSpins& spins, int two_s) {
    Average sum;
    for (std::size_t k = 0; k < 3; ++k) {
        const LocalMatrix component = spin_component(all_axes[k], two_s);
        const std::complex<double> share =
            (component * factor.matrix).trace() / component.squaredNorm();
        const Average& spin = spins[static_cast<std::size_t>(factor.site)][k];
        sum.value += share * spin.value;
        sum.bound += std::abs(share) * (spin.bound + 4 * epsilon * std::abs(spin.value));
    }
    return sum;
}

}  // namespace

std::vector<Product> mean_spin(Axis axis, const Chain& chain) {
    std::vector<Product> products;
    for (int site = 0; site < chain.length(); ++site) {
        products.push_back({1.0 / chain.length(), {{site, spin_component(axis, chain.two_s)}}});
    }
    return products;
}

std::vector<PairSum> correlations(const Chain& chain, const Options& options) {
    const std::vector<MatrixPair> parts = matrices_of(options.axes, chain.two_s);
    std::vector<PairSum> sums;
    for (const auto& pairs : pairs_of(chain, options)) {
        sums.emplace_back();
        for (const auto& [i, j] : pairs) {
            for (const MatrixPair& part : parts) {
                sums.back().push_back({placed(chain, i, part.a),
                                       placed(chain, j, part.b),
                                       1.0 / static_cast<double>(pairs.size())});
            }
        }
    }
    return sums;
}

std::vector<PairSum> structure_factors(const Chain& chain, const Options& options) {
    const int length = chain.length();
    const std::vector<MatrixPair> parts = matrices_of(options.axes, chain.two_s);
    std::vector<PairSum> sums(static_cast<std::size_t>(length));
    for (int n = 0; n < length; ++n) {
        for (int i = 0; i < length; ++i) {
            for (int j = 0; j < length; ++j) {
                const int turns = n * (i - j) % length;  // of 1/L
                const std::complex<double> weight =
                    std::polar(1.0 / length, -2 * pi * turns / length);
                for (const MatrixPair& part : parts) {
                    sums[static_cast<std::size_t>(n)].push_back({{i, part.a}, {j, part.b}, weight});
                }
            }
        }
    }
    return sums;
}

std::vector<std::vector<Product>> strings(const Chain& chain, const Options& options) {
    const LocalMatrix end = spin_component(options.axis, chain.two_s);
    const LocalMatrix between = string_factor(options.axis, chain.two_s);
    std::vector<std::vector<Product>> result;
    for (const auto& pairs : pairs_of(chain, options)) {
        result.emplace_back();
        for (const auto& [i, j] : pairs) {
            Product product{1.0 / static_cast<double>(pairs.size()), {placed(chain, i, end)}};
            for (int k = i + 1; k < j; ++k) {
                product.factors.push_back(placed(chain, k, between));
            }
            product.factors.push_back(placed(chain, j, end));
            result.back().push_back(std::move(product));
        }
    }
    return result;
}

std::vector<Average> measure_pairs(const std::vector<PairSum>& sums,
                                   bool connected,
                                   const Chain& chain,
                                   const Measure& measure) {
    std::vector<Average> averages;
    for (const PairSum& sum : sums) {
        std::vector<Product> products;
        for (const PairTerm& term : sum) {
            products.push_back({term.weight, {term.a, term.b}});
        }
        averages.push_back(measure(products));
    }
    if (!connected) {
        return averages;
    }
    const LocalSpins spins = measure_spins(chain, measure);
    for (std::size_t e = 0; e < sums.size(); ++e) {
        averages[e].range.reset();
        for (const PairTerm& term : sums[e]) {
            const Average a = average_of(term.a, spins, chain.two_s);
            const Average b = average_of(term.b, spins, chain.two_s);
            const double sizes = std::abs(a.value) * b.bound + std::abs(b.value) * a.bound +
                                 a.bound * b.bound + 2 * epsilon * std::abs(a.value * b.value);
            averages[e].value -= term.weight * a.value * b.value;
            averages[e].bound += std::abs(term.weight) * sizes;
        }
    }
    return averages;
}

}  // namespace chainmark::dense
