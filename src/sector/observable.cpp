#include "chainmark/sector/observable.hpp"

#include <algorithm>
#include <cmath>

#include "chainmark/base/numerics.hpp"

namespace chainmark::sector {
namespace {

using Complex = std::complex<double>;

/// The factor at its site 0 ... L-1. Element (to, from) raises by to - from and takes the phase
/// of the boundary to that power for every time around the ring.
PlacedMatrix brought_back(PlacedMatrix factor, const Chain& chain) {
    const auto dim = factor.matrix.dim();
    for (; factor.site >= chain.length(); factor.site -= chain.length()) {
        for (std::size_t to = 0; to < dim; ++to) {
            for (std::size_t from = 0; from < dim; ++from) {
                const SiteMatrix::Entry phase(to > from ? chain.wrap_phase()
                                                        : std::conj(chain.wrap_phase()));
                for (std::size_t k = std::min(to, from); k < std::max(to, from); ++k) {
                    factor.matrix.entries[to * dim + from] *= phase;
                }
            }
        }
    }
    return factor;
}

/// Upper bound of the largest singular value: sqrt(largest row sum * largest column sum).
double norm_of(const SiteMatrix& matrix) {
    const auto dim = matrix.dim();
    std::vector<double> rows(dim, 0.0);
    std::vector<double> columns(dim, 0.0);
    for (std::size_t to = 0; to < dim; ++to) {
        for (std::size_t from = 0; from < dim; ++from) {
            const auto size = static_cast<double>(std::abs(matrix.entries[to * dim + from]));
            rows[to] += size;
            columns[from] += size;
        }
    }
    return std::sqrt(*std::max_element(rows.begin(), rows.end()) *
                     *std::max_element(columns.begin(), columns.end()));
}

/// A and B of each part of A_i B_j.
std::vector<std::pair<SiteMatrix, SiteMatrix>> parts_of(Axes axes, int two_s) {
    const auto along = [two_s](Axis axis) {
        return std::pair(spin_matrix(axis, two_s), spin_matrix(axis, two_s));
    };
    switch (axes) {
        case Axes::xx:
            return {along(Axis::x)};
        case Axes::yy:
            return {along(Axis::y)};
        case Axes::zz:
            return {along(Axis::z)};
        case Axes::plus_minus:
            return {{SiteMatrix::raising(two_s), SiteMatrix::lowering(two_s)}};
        case Axes::dot:
            break;
    }
    return {along(Axis::x), along(Axis::y), along(Axis::z)};
}

}  // namespace

std::vector<Term> terms_of(const StringSum& sum) {
    std::vector<Term> terms;
    for (const auto& [string, coefficient] : sum) {
        if (!string.empty()) {
            terms.push_back({string, coefficient});
        }
    }
    return terms;
}

void add_product(Observable& observable,
                 Complex weight,
                 const std::vector<PlacedMatrix>& product,
                 const Chain& chain) {
    std::vector<PlacedMatrix> placed;
    double norm = std::abs(weight);
    for (const PlacedMatrix& factor : product) {
        placed.push_back(brought_back(factor, chain));
        norm *= norm_of(factor.matrix);
    }
    for (const WideTerm& term : expand(placed, chain.two_s)) {
        observable.strings[term.string] += weight * Complex(term.coefficient);
    }
    observable.norm += norm;
}

double norm_of(const OperatorString& string, int two_s) {
    double norm = 1.0;
    for (const SiteFactor& factor : string) {
        if (factor.op.is_diagonal()) {
            double peak = 0.0;
            for (int digit = 0; digit <= two_s; ++digit) {
                peak = std::max(peak, std::abs(gram_value(two_s, factor.op.degree, digit)));
            }
            norm *= peak;
        }
    }
    return norm;
}

SiteMatrix spin_matrix(Axis axis, int two_s) {
    switch (axis) {
        case Axis::x:
            return SiteMatrix::sx(two_s);
        case Axis::y:
            return SiteMatrix::sy(two_s);
        case Axis::z:
            break;
    }
    return SiteMatrix::sz(two_s);
}

std::vector<std::vector<std::pair<int, int>>> pairs_of(const Chain& chain, const Options& options) {
    std::vector<std::vector<std::pair<int, int>>> result;
    for (const auto& pair : options.pairs) {
        result.push_back({pair});
    }
    for (const int r : options.distance) {
        result.emplace_back();
        const int firsts = chain.is_ring() ? chain.length() : chain.length() - r;
        for (int i = 0; i < firsts; ++i) {
            result.back().emplace_back(i, i + r);
        }
    }
    return result;
}

Observable observable_of(const PairSum& sum, const Chain& chain) {
    Observable observable;
    for (const PairTerm& term : sum) {
        add_product(observable, term.weight, {term.a, term.b}, chain);
    }
    return observable;
}

std::vector<PairSum> correlations(const Chain& chain, const Options& options) {
    const auto parts = parts_of(options.axes, chain.two_s);
    std::vector<PairSum> sums;
    for (const auto& pairs : pairs_of(chain, options)) {
        PairSum& sum = sums.emplace_back();
        const Complex weight = 1.0 / static_cast<double>(pairs.size());
        for (const auto& [i, j] : pairs) {
            for (const auto& [a, b] : parts) {
                sum.push_back({{i, a}, {j, b}, weight});
            }
        }
    }
    return sums;
}

std::vector<PairSum> structure_factors(const Chain& chain, const Options& options) {
    const auto parts = parts_of(options.axes, chain.two_s);
    const int length = chain.length();
    std::vector<PairSum> sums(static_cast<std::size_t>(length));
    for (int n = 0; n < length; ++n) {
        for (int i = 0; i < length; ++i) {
            for (int j = 0; j < length; ++j) {
                // The same turn for i - j and j - i, so that the sum is Hermitian to the last bit.
                const double angle = 2 * pi * (n * std::abs(i - j) % length) / length;
                const Complex weight = std::polar(1.0 / length, i > j ? -angle : angle);
                for (const auto& [a, b] : parts) {
                    sums[static_cast<std::size_t>(n)].push_back({{i, a}, {j, b}, weight});
                }
            }
        }
    }
    return sums;
}

std::vector<Observable> local_spins(const Chain& chain, Axis axis) {
    std::vector<Observable> result(static_cast<std::size_t>(chain.length()));
    for (int site = 0; site < chain.length(); ++site) {
        add_product(result[static_cast<std::size_t>(site)],
                    1.0,
                    {{site, spin_matrix(axis, chain.two_s)}},
                    chain);
    }
    return result;
}

Observable mean_sz(const Chain& chain) {
    Observable result;
    for (int site = 0; site < chain.length(); ++site) {
        add_product(result, 1.0 / chain.length(), {{site, SiteMatrix::sz(chain.two_s)}}, chain);
    }
    return result;
}

std::vector<Observable> factors_of(const PairSum& sum, const Chain& chain) {
    std::vector<Observable> factors;
    for (const PairTerm& term : sum) {
        add_product(factors.emplace_back(), 1.0, {term.a}, chain);
        add_product(factors.emplace_back(), 1.0, {term.b}, chain);
    }
    return factors;
}

void subtract_products(Average& average, const PairSum& sum, const std::vector<Average>& factors) {
    for (std::size_t t = 0; t < sum.size(); ++t) {
        const Average& a = factors[2 * t];
        const Average& b = factors[2 * t + 1];
        const Complex product = a.value * b.value;
        const double error = std::abs(a.value) * b.bound + std::abs(b.value) * a.bound +
                             a.bound * b.bound + 4 * epsilon * std::abs(product);
        average.value -= sum[t].weight * product;
        average.bound += std::abs(sum[t].weight) * error;
    }
    average.range.reset();
}

}  // namespace chainmark::sector
