#include <algorithm>

#include "fermion/support.hpp"

// All 2^L levels against an explicit matrix, on every kind of chain that the route covers.

namespace chainmark::test {
namespace {

namespace em = explicit_matrix;

std::vector<double> levels_of(const Reference& reference) {
    std::vector<double> levels;
    for (std::size_t n = 0; n < reference.value.data.size(); ++n) {
        levels.push_back(reference.value.real_at(n));
    }
    return levels;
}

void check_spectrum(const Model& model) {
    const em::Spectrum expected = em::diagonalize(em::hamiltonian(model));
    const Reference found = fermion(problem_of(model), QuantityId::spectrum);
    REQUIRE(found.value.data.size() == static_cast<std::size_t>(expected.energies.size()));
    REQUIRE(found.bound.size() == found.value.data.size());
    REQUIRE(found.complete == Completeness::proved);
    for (std::size_t n = 0; n < found.bound.size(); ++n) {
        CHECK_NEAR(found.value.real_at(n),
                   expected.energies(static_cast<Eigen::Index>(n)),
                   bound(found.bound[n] + expected.error));
    }
}

TEST_CASE("rings: all levels, both signs of J, even and odd L, fields") {
    for (const int sites : {3, 4, 5, 6, 7, 8}) {
        for (const double coupling : {1.0, -0.7}) {
            for (const double field : {0.0, 0.31, -1.4}) {
                check_spectrum(xx_model(ring(sites), coupling, field));
            }
        }
    }
}

TEST_CASE("rings with a twist, among them the antiperiodic one") {
    for (const int sites : {3, 4, 5, 8}) {
        for (const double twist : {pi, 0.4, -2.9, 7.0}) {
            check_spectrum(xx_model(ring(sites, twist), 1.3, 0.2));
        }
    }
}

TEST_CASE("a ring with one complex hop everywhere") {
    Model model = xx_model(ring(6, 0.3), 1.0, 0.1);
    std::fill(model.hop.begin(), model.hop.end(), Complex(0.3, -0.8));
    check_spectrum(model);
}

TEST_CASE("open chains") {
    for (const int sites : {1, 2, 3, 4, 5, 8}) {
        for (const double coupling : {1.0, -2.5}) {
            check_spectrum(xx_model(open_chain(sites), coupling, 0.6));
        }
    }
    Model complex_hop = xx_model(open_chain(5), 1.0, 0.1);
    std::fill(complex_hop.hop.begin(), complex_hop.hop.end(), Complex(0.3, -0.8));
    check_spectrum(complex_hop);
}

TEST_CASE("random couplings and site fields") {
    for (unsigned seed = 1; seed <= 6; ++seed) {
        for (const bool complex_hops : {false, true}) {
            check_spectrum(random_model(ring(7, seed % 2 == 0 ? 0.0 : 1.1), seed, complex_hops));
            check_spectrum(random_model(ring(8), seed, complex_hops));
            check_spectrum(random_model(open_chain(6), seed, complex_hops));
            check_spectrum(random_model(open_chain(2), seed, complex_hops));
        }
    }
}

TEST_CASE("without couplings every level is a field level") {
    check_spectrum(xx_model(ring(5), 0.0, 0.5));
    check_spectrum(xx_model(open_chain(4), 0.0, 0.0));
}

// Labels: H + a (T + T+)/2 + b (T - T+)/(2i) + c Sz has the levels
// E + a cos k - b sin k + c Sz with T = exp(-ik), k = (2 pi n + phi N)/L.
void check_labels(const Model& model) {
    const int sites = model.chain.length();
    const double a = 0.317;
    const double b = 0.513;
    const double c = 0.119;
    const em::Matrix shift = em::translation(model.chain);
    em::Matrix matrix = em::hamiltonian(model);
    CHECK((shift * matrix - matrix * shift).cwiseAbs().maxCoeff() < 1e-13);
    matrix += a / 2 * (shift + shift.adjoint());
    matrix += Complex(0, -b / 2) * (shift - shift.adjoint());
    for (int state = 0; state < matrix.rows(); ++state) {
        matrix(state, state) += c * em::total_sz(state, sites);
    }
    const em::Spectrum expected = em::diagonalize(matrix);
    const Reference found = fermion(problem_of(model), QuantityId::spectrum);
    std::vector<double> levels = levels_of(found);
    for (std::size_t n = 0; n < levels.size(); ++n) {
        const Labels& labels = found.labels.at(n);
        const double ups = labels.sz.value() + sites / 2.0;
        const int number = labels.momentum.value();
        CHECK(2 * number > -sites);
        CHECK(2 * number <= sites);
        const double k = (2 * pi * number + model.chain.twist * ups) / sites;
        levels[n] += a * std::cos(k) - b * std::sin(k) + c * labels.sz.value();
    }
    std::sort(levels.begin(), levels.end());
    for (std::size_t n = 0; n < levels.size(); ++n) {
        CHECK_NEAR(levels[n],
                   expected.energies(static_cast<Eigen::Index>(n)),
                   allow(expected.error + 64 * epsilon, "explicit matrix and labels"));
    }
}

TEST_CASE("labels: Sz and momentum of every level of a uniform ring") {
    for (const int sites : {3, 4, 5, 6, 7, 8}) {
        check_labels(xx_model(ring(sites), 1.0, 0.2));
        check_labels(xx_model(ring(sites, 0.4), -1.0));
        check_labels(xx_model(ring(sites, pi), 0.8));
    }
    const Reference open = fermion(xx_problem(open_chain(5), 1.0), QuantityId::spectrum);
    CHECK(open.labels.front().sz.has_value());
    CHECK_FALSE(open.labels.front().momentum.has_value());
}

TEST_CASE("levels: the n lowest are the first n of the spectrum") {
    const Problem problem = xx_problem(ring(9), 1.0, 0.1);
    const Reference all = fermion(problem, QuantityId::spectrum);
    for (const int count : {1, 2, 7, 100, 512}) {
        Options options;
        options.count = count;
        const Reference some = fermion(problem, QuantityId::levels, options);
        REQUIRE(some.value.data.size() == at(count));
        for (std::size_t n = 0; n < at(count); ++n) {
            CHECK(some.value.data[n] == all.value.data[n]);
        }
    }
}

TEST_CASE("many levels of a long chain: complete among one-magnon states") {
    // Beyond saturation the levels of J = 1, h = 3 begin with all up and then one down spin of
    // each momentum, -hL/2 + h - J cos k; two down spins cost at least 2 (h - 1) = 4 = h + 1, the
    // cost of the last of these.
    const int sites = 1000;
    Options options;
    options.count = sites + 1;
    const Reference found = fermion(xx_problem(ring(sites), 1.0, 3.0), QuantityId::levels, options);
    CHECK_NEAR(value(found), -1.5 * sites, bound(found.bound[0]));
    std::vector<double> expected;
    for (int m = 0; m < sites; ++m) {  // N = L - 1 is odd: periodic momenta
        expected.push_back(-1.5 * sites + 3.0 - std::cos(2 * pi * m / sites));
    }
    std::sort(expected.begin(), expected.end());
    for (int n = 1; n < sites; ++n) {
        CHECK_NEAR(found.value.real_at(at(n)),
                   expected[at(n - 1)],
                   bound(found.bound[at(n)] + 8 * epsilon * 1.5 * sites));
        CHECK(found.labels[at(n)].sz == sites / 2.0 - 1);
    }
}

std::vector<double> spectrum_of(const Chain& chain, double coupling, double field) {
    return levels_of(fermion(xx_problem(chain, coupling, field), QuantityId::spectrum));
}

double largest_difference(const std::vector<double>& a, const std::vector<double>& b) {
    double largest = 0.0;
    for (std::size_t n = 0; n < a.size(); ++n) {
        largest = std::max(largest, std::abs(a[n] - b[n]));
    }
    return largest;
}

TEST_CASE("symmetries of the spectrum") {
    // Turning all spins over gives h -> -h on every chain; turning every second spin about z gives
    // J -> -J where the chain has two sublattices, and that an odd ring has not. Elementary.
    const double allowed = 64 * epsilon;
    for (const int sites : {3, 4, 7, 10}) {
        const std::vector<double> plain = spectrum_of(ring(sites), 1.0, 0.3);
        CHECK(largest_difference(plain, spectrum_of(ring(sites), 1.0, -0.3)) < allowed);
        const double other_sign = largest_difference(plain, spectrum_of(ring(sites), -1.0, 0.3));
        CHECK((other_sign < allowed) == (sites % 2 == 0));
        CHECK((other_sign > 0.01) == (sites % 2 == 1));
        const std::vector<double> open = spectrum_of(open_chain(sites), 1.0, 0.3);
        CHECK(largest_difference(open, spectrum_of(open_chain(sites), -1.0, 0.3)) < allowed);
    }
}

TEST_CASE("trace moments of a spectrum of twelve sites") {
    // Tr H = 0 and Tr H^2 = 2^L (L J^2/8 + L h^2/4): each bond (J/2)(S+S- + S-S+) squares to
    // (J/2)^2 on half of the states, each Sz to 1/4. Elementary.
    const double coupling = 1.3;
    const double field = 0.45;
    const int sites = 12;
    const std::vector<double> levels = spectrum_of(ring(sites), coupling, field);
    double first = 0.0;
    double second = 0.0;
    for (const double level : levels) {
        first += level;
        second += level * level;
    }
    const double count = std::exp2(sites);
    const double expected = sites * (coupling * coupling / 8 + field * field / 4);
    CHECK_NEAR(first / count, 0.0, rounding(10.0, 10));
    CHECK_NEAR(second / count, expected, rounding(expected, 100));
}

}  // namespace
}  // namespace chainmark::test
