#include <algorithm>

#include "fermion/support.hpp"

// Bounds must hold always and must not be idle: compared with sums in extended precision.

namespace chainmark::test {
namespace {

using Wide = long double;
constexpr Wide wide_pi = std::numbers::pi_v<Wide>;

/// Lowest energy over all N, each with its own momenta, by sums written out in extended precision.
Wide recomputed_energy(const Chain& chain, double coupling, double field) {
    const int sites = chain.length();
    const Wide h = field;
    Wide lowest = h * sites / 2;
    for (const int parity : {0, 1}) {
        std::vector<Wide> modes;
        for (int m = 0; m < sites; ++m) {
            const Wide k =
                chain.is_ring()
                    ? (2 * wide_pi * (m + (parity == 0 ? 0.5L : 0.0L)) + chain.twist) / sites
                    : wide_pi * (m + 1) / (sites + 1);
            modes.push_back(coupling * std::cos(k) - h);
        }
        std::sort(modes.begin(), modes.end());
        Wide sum = h * sites / 2;
        for (int n = 1; n <= sites; ++n) {
            sum += modes[at(n - 1)];
            if (n % 2 == parity) {
                lowest = std::min(lowest, sum);
            }
        }
    }
    return lowest;
}

/// Collects error and bound of many answers.
class Tally {
public:
    void add(double found, Wide expected, double allowed) {
        const double error = static_cast<double>(std::abs(found - expected));
        CHECK(error <= allowed);
        worst_ = std::max(worst_, error / allowed);
    }

    /// The largest error was at least this part of its bound.
    double worst() const { return worst_; }

private:
    double worst_ = 0.0;
};

TEST_CASE("energies of uniform chains stay within their bounds") {
    std::mt19937_64 generator(20240611);
    std::uniform_real_distribution<double> uniform(-2.0, 2.0);
    std::uniform_int_distribution<int> length(3, 400);
    Tally tally;
    for (int sample = 0; sample < 400; ++sample) {
        const int sites = length(generator);
        const double twist = sample % 4 == 0 ? uniform(generator) : 0.0;
        const Chain chain = sample % 4 == 1 ? open_chain(sites) : ring(sites, twist);
        const double coupling = uniform(generator);
        const double field = sample % 5 == 0 ? 0.0 : uniform(generator);
        const Reference found =
            fermion(xx_problem(chain, coupling, field), QuantityId::ground_energy);
        tally.add(value(found), recomputed_energy(chain, coupling, field), found.bound[0]);
    }
    MESSAGE("largest error over bound: " << tally.worst());
    CHECK(tally.worst() > 0.1);
}

TEST_CASE("mode energies stay within their bounds") {
    Tally tally;
    std::mt19937_64 generator(7);
    std::uniform_real_distribution<double> uniform(-2.0, 2.0);
    for (int sample = 0; sample < 50; ++sample) {
        const int sites = 3 + 7 * sample;
        const double coupling = uniform(generator);
        const double field = uniform(generator);
        Options options;
        options.parity = Parity::odd;
        const Reference found =
            fermion(xx_problem(ring(sites), coupling, field), QuantityId::mode_energies, options);
        std::vector<Wide> expected;
        for (int m = 0; m < sites; ++m) {
            expected.push_back(coupling * std::cos(2 * wide_pi * m / sites) - Wide(field));
        }
        std::sort(expected.begin(), expected.end());
        for (std::size_t i = 0; i < expected.size(); ++i) {
            tally.add(found.value.real_at(i), expected[i], found.bound[i]);
        }
    }
    CHECK(tally.worst() > 0.1);
}

/// The uniform chain again, but with a site field on the last site so small that it changes nothing
/// within the test, to force the general solver: its answers are checked by closed forms.
Problem disguised(const Chain& chain, double coupling, double field) {
    Model model = xx_model(chain, coupling, field);
    model.onsite.back() = 1e-300;
    return problem_of(model);
}

TEST_CASE("measured bounds of the general solver hold, and are less than 10^4 times the error") {
    Tally tally;
    for (const int sites : {4, 7, 16, 31, 64, 120}) {
        for (const bool is_ring : {true, false}) {
            const Chain chain = is_ring ? ring(sites, 0.3) : open_chain(sites);
            const Reference found = fermion(disguised(chain, 1.0, 0.13), QuantityId::ground_energy);
            CHECK(found.basis == Basis::residual);
            tally.add(value(found), recomputed_energy(chain, 1.0, 0.13), found.bound[0]);
        }
    }
    MESSAGE("largest error over bound: " << tally.worst());
    CHECK(tally.worst() > 1e-4);
}

TEST_CASE("expectation values of the general solver agree with those of the closed forms") {
    Options options;
    options.distance = {1, 2, 5};
    for (const int sites : {8, 13, 40}) {
        for (const bool is_ring : {true, false}) {
            const Chain chain = is_ring ? ring(sites) : open_chain(sites);
            for (const double field : {0.05, 0.4}) {
                const Problem general = disguised(chain, 1.0, field);
                const Problem closed = xx_problem(chain, 1.0, field);
                for (const QuantityId id : {QuantityId::spin_correlation,
                                            QuantityId::local_magnetization,
                                            QuantityId::gap}) {
                    const Reference a = fermion(general, id, options);
                    const Reference b = fermion(closed, id, options);
                    CHECK(a.degeneracy == b.degeneracy);
                    for (std::size_t i = 0; i < a.bound.size(); ++i) {
                        CHECK_NEAR(
                            a.value.real_at(i), b.value.real_at(i), bound(a.bound[i] + b.bound[i]));
                        CHECK(b.bound[i] < 1e-15);
                        CHECK(a.bound[i] < 1e-10);
                    }
                }
            }
        }
    }
}

}  // namespace
}  // namespace chainmark::test
