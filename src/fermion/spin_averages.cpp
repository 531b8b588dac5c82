#include "chainmark/fermion/spin_averages.hpp"

#include <cmath>

#include "chainmark/fermion/answers.hpp"
#include "chainmark/fermion/spin_strings.hpp"

namespace chainmark::fermion {
namespace {

std::size_t at(int i) {
    return static_cast<std::size_t>(i);
}

/// The pairs (first + s, second + s), s = 0 ... count-1, whose mean is wanted; the second site may
/// lie past the end of a ring.
struct PairFamily {
    int first = 0;
    int second = 0;
    int count = 1;
};

std::vector<PairFamily> pair_families(const Options& options, const Chain& chain) {
    std::vector<PairFamily> families;
    for (const auto& [first, second] : options.pairs) {
        families.push_back({first, second, 1});
    }
    for (const int r : options.distance) {
        families.push_back({0, r, chain.is_ring() ? chain.length() : chain.length() - r});
    }
    return families;
}

/// What is averaged for a pair of sites, and a bound on its norm.
struct PairOperator {
    std::function<std::vector<PauliTerm>(int, int)> terms;
    Real norm = 0.0L;
};

PairOperator correlation_of(Axes axes, const Chain& chain) {
    return {[axes, &chain](int i, int j) { return pair_terms(axes, chain, i, j); },
            pair_norm(axes)};
}

/// A mean of complex numbers with bounds, rounding included.
class MeanSum {
public:
    void add(const std::complex<Real>& value, Real error) {
        real_.add(value.real());
        imaginary_.add(value.imag());
        error_ += error;
    }
    Average mean(Real count) const {
        return {{real_.value() / count, imaginary_.value() / count}, error_ / count};
    }

private:
    CompensatedSum real_;
    CompensatedSum imaginary_;
    Real error_ = 0.0L;
};

Average measure_terms(const std::vector<PauliTerm>& terms, const StringMeasure& measure) {
    Average sum;
    for (const PauliTerm& term : terms) {
        const Average average = measure(term.string);
        const std::complex<Real> weight(term.coefficient);
        sum.value += weight * average.value;
        sum.error += std::abs(weight) * average.error;
    }
    return sum;
}

class Means {
public:
    Means(const Mixture& mixture, const Chain& chain, const Context& context)
        : mixture_(mixture), chain_(chain), context_(context) {}

    /// For each family the mean over its pairs; one pair where all are equal.
    std::vector<Average> of(const std::vector<PairFamily>& families, const PairOperator& op) const {
        std::vector<Average> means(families.size());
        mixture_.each([&](Real weight, const StringMeasure& measure) {
            for (std::size_t f = 0; f < families.size(); ++f) {
                const Average mean = family_mean(families[f], op, measure);
                means[f].value += weight * mean.value;
                means[f].error += weight * mean.error;
            }
        });
        for (Average& mean : means) {
            mean.error += op.norm * (mixture_.relative_error() + 16 * real_epsilon);
        }
        return means;
    }

    /// Subtracts the mean of <A_i><B_j>, which only Sz has.
    void connect(std::vector<Average>& means, const std::vector<PairFamily>& families) const {
        const std::vector<Average> sz = sz_profile(mixture_, chain_, context_);
        for (std::size_t f = 0; f < families.size(); ++f) {
            const PairFamily& family = families[f];
            MeanSum sum;
            const int count = shown(family);
            for (int s = 0; s < count; ++s) {
                const Average& a = sz[at(family.first + s)];
                const Average& b = sz[at((family.second + s) % chain_.length())];
                sum.add(
                    a.value * b.value,
                    std::abs(a.value) * b.error + std::abs(b.value) * a.error + a.error * b.error);
            }
            const Average mean = sum.mean(static_cast<Real>(count));
            means[f].value -= mean.value;
            means[f].error += mean.error + 4 * real_epsilon;
        }
    }

private:
    int shown(const PairFamily& family) const { return mixture_.homogeneous() ? 1 : family.count; }

    Average family_mean(const PairFamily& family,
                        const PairOperator& op,
                        const StringMeasure& measure) const {
        MeanSum sum;
        const int count = shown(family);
        for (int s = 0; s < count; ++s) {
            poll(context_);
            const Average pair =
                measure_terms(op.terms(family.first + s, family.second + s), measure);
            sum.add(pair.value, pair.error);
        }
        return sum.mean(static_cast<Real>(count));
    }

    const Mixture& mixture_;
    const Chain& chain_;
    const Context& context_;
};

bool has_sz(Axes axes) {
    return axes == Axes::zz || axes == Axes::dot;
}

void make_real(std::vector<Average>& averages) {
    for (Average& average : averages) {
        average.value = average.value.real();
    }
}

}  // namespace

std::vector<Average> sz_profile(const Mixture& mixture,
                                const Chain& chain,
                                const Context& context) {
    const int sites = chain.length();
    const int distinct = mixture.homogeneous() ? 1 : sites;
    std::vector<PairFamily> families;
    for (int j = 0; j < distinct; ++j) {
        families.push_back({j, j, 1});
    }
    const PairOperator sz{[](int j, int) {
                              return std::vector<PauliTerm>{{0.5, {{j, Axis::z}}}};
                          },
                          0.5L};
    std::vector<Average> profile = Means(mixture, chain, context).of(families, sz);
    profile.resize(at(sites), profile.front());
    make_real(profile);
    return profile;
}

std::vector<Average> correlations(const Mixture& mixture,
                                  const Chain& chain,
                                  const Options& options,
                                  const Context& context) {
    const std::vector<PairFamily> families = pair_families(options, chain);
    const Means means(mixture, chain, context);
    std::vector<Average> averages = means.of(families, correlation_of(options.axes, chain));
    if (options.connected && has_sz(options.axes)) {
        means.connect(averages, families);
    }
    if (options.axes != Axes::plus_minus) {
        make_real(averages);
    }
    return averages;
}

std::vector<Average> order_strings(const Mixture& mixture,
                                   const Chain& chain,
                                   const Options& options,
                                   const Context& context) {
    const PairOperator strings{
        [&](int i, int j) {
            return std::vector<PauliTerm>{order_string(options.axis, chain, i, j)};
        },
        order_string_norm};
    std::vector<Average> averages =
        Means(mixture, chain, context).of(pair_families(options, chain), strings);
    make_real(averages);
    return averages;
}

std::vector<Average> structure_factors(const Mixture& mixture,
                                       const Chain& chain,
                                       const Options& options,
                                       const Context& context) {
    const int sites = chain.length();
    std::vector<PairFamily> families;
    for (int r = 0; r < sites; ++r) {
        families.push_back({0, r, sites - r});
    }
    const Means means(mixture, chain, context);
    std::vector<Average> sums = means.of(families, correlation_of(options.axes, chain));
    if (options.connected && has_sz(options.axes)) {
        means.connect(sums, families);
    }
    Real error = 0.0L;
    for (int r = 0; r < sites; ++r) {
        const Real share = static_cast<Real>(sites - r) / static_cast<Real>(sites);
        sums[at(r)].value *= share;
        error += (r == 0 ? 1 : 2) * share * (sums[at(r)].error + 8 * real_epsilon);
    }
    std::vector<Average> factors;
    for (int n = 0; n < sites; ++n) {
        poll(context);
        CompensatedSum sum;
        sum.add(sums[0].value.real());
        for (int r = 1; r < sites; ++r) {
            const std::int64_t turns = 2 * std::int64_t{n} * r;
            sum.add(2 * (cos_pi(turns, sites) * sums[at(r)].value.real() -
                         sin_pi(turns, sites) * sums[at(r)].value.imag()));
        }
        factors.push_back({sum.value(), error});
    }
    return factors;
}

Reference average_reference(const std::vector<Average>& averages, bool complex, Basis basis) {
    Reference reference;
    reference.value = Value::array(std::vector<double>(averages.size()));
    reference.value.complex = complex;
    reference.basis = basis;
    for (std::size_t e = 0; e < averages.size(); ++e) {
        const std::complex<Real>& value = averages[e].value;
        reference.value.data[e] = {static_cast<double>(value.real()),
                                   static_cast<double>(value.imag())};
        reference.bound.push_back(rounded_bound({std::abs(value), averages[e].error}));
    }
    return reference;
}

}  // namespace chainmark::fermion
