#include <algorithm>

#include <Eigen/Eigenvalues>
#include <Eigen/LU>

#include "fermion/support.hpp"

// Long chains without a conserved Sz, by closed forms and by matrices written down here.
//   [Pf]  P. Pfeuty, Ann. Phys. (NY) 57, 79 (1970).
//   [BG]  T. W. Burkhardt, I. Guim, J. Phys. A 18, L33 (1985).
//   [KTM] J. Kurmann, H. Thomas, G. Mueller, Physica A 112, 235 (1982).

namespace chainmark::test {
namespace {

using Wide = long double;
constexpr Wide wide_pi = std::numbers::pi_v<Wide>;

/// J [(1+gamma) Sx Sx + (1-gamma) Sy Sy], its list written down at once.
Problem long_xy_problem(const Chain& chain, double coupling, double gamma, double field) {
    constexpr SiteOperator plus = SiteOperator::plus;
    constexpr SiteOperator minus = SiteOperator::minus;
    TermList list;
    const auto bond = [&](int i, int j) {
        list.terms.push_back({{{i, plus}, {j, plus}}, coupling * gamma / 2});
        list.terms.push_back({{{i, plus}, {j, minus}}, coupling / 2});
        list.terms.push_back({{{i, minus}, {j, plus}}, coupling / 2});
        list.terms.push_back({{{i, minus}, {j, minus}}, coupling * gamma / 2});
    };
    for (int j = 0; j + 1 < chain.length(); ++j) {
        bond(j, j + 1);
    }
    if (chain.is_ring()) {
        bond(0, chain.length() - 1);
    }
    return {.chain = chain, .terms = std::make_shared<TermList>(list), .field = field};
}

/// -Jp sum sx sx - hp sum sz in Pauli matrices, Jp = 1.
Problem long_ising(const Chain& chain, double hp) {
    return long_xy_problem(chain, -2.0, 1.0, 2 * hp);
}

void check_close(const Reference& found, Wide expected, double widest) {
    const auto number = static_cast<double>(expected);
    CHECK_NEAR(value(found), number, bound(found.bound[0] + epsilon * std::abs(number)));
    CHECK(found.bound[0] < widest);
}

TEST_CASE("critical Ising rings of 10^6 and 99,999 sites [Pf]") {
    for (const int sites : {1'000'000, 99'999}) {
        const Batch batch{.problems = {long_ising(ring(sites), 1.0)},
                          .queries = {query(QuantityId::ground_energy),
                                      query(QuantityId::gap),
                                      query(QuantityId::magnetization)}};
        const Answers answers = fermion_route().evaluate(batch, Context{});
        const auto found = [&](std::size_t q) { return std::get<Reference>(answers[0][q]); };
        const Wide angle = wide_pi / (4 * static_cast<Wide>(sites));
        check_close(found(0), -2 / std::sin(2 * angle), 1e-8);
        check_close(found(1), 2 * std::tan(angle), 1e-9);
        check_close(found(2), 0.5L / (sites * std::sin(2 * angle)), 1e-14);
    }
}

TEST_CASE("open critical Ising chains [BG]") {
    for (const int sites : {1, 2, 50, 301}) {
        const Wide expected = 1 - 1 / std::sin(wide_pi / (2 * (2 * static_cast<Wide>(sites) + 1)));
        check_close(fermion(long_ising(open_chain(sites), 1.0), QuantityId::ground_energy),
                    expected,
                    1e-10);
    }
}

TEST_CASE("long XY rings at the factorizing field: E0 = -L/2, twofold [KTM]") {
    for (const double gamma : {0.28, 0.6}) {
        const double field = std::sqrt(1 - gamma * gamma);
        for (const int sites : {1000, 1001}) {
            const double coupling = sites % 2 == 0 ? 1.0 : -1.0;
            const Reference found = fermion(long_xy_problem(ring(sites), coupling, gamma, field),
                                            QuantityId::ground_energy);
            check_close(found, -sites / 2.0L, 1e-12);
            CHECK(found.degeneracy == 2);
        }
        // Frustrated: w_k = 1 - h cos k, so -L/2 again without filled modes, but one must be
        // filled, k = 0 with 1 - h (derived).
        check_close(
            fermion(long_xy_problem(ring(1001), 1.0, gamma, field), QuantityId::ground_energy),
            -500.5L + (1 - static_cast<Wide>(field)),
            1e-12);
    }
}

TEST_CASE("the gap of the infinite chain: 2 |hp - 1|, or 4 |hp - 1| between kinks on a ring [Pf]") {
    const int sites = 50'000;
    const Reference disordered = fermion(long_ising(ring(sites), 1.5), QuantityId::gap);
    CHECK_NEAR(value(disordered), 1.0, allow(1e-7, "1/L^2"));
    CHECK(disordered.degeneracy == 1);
    const Reference ordered = fermion(long_ising(ring(sites), 0.5), QuantityId::gap);
    CHECK_NEAR(value(ordered), 2.0, allow(1e-7, "1/L^2"));
    CHECK(ordered.degeneracy == 2);
}

/// H = sum_j bond_j sx_j sx_{j+1} + field_j sz_j in Pauli matrices, random. With
/// sz_j = -i g_{2j} g_{2j+1} and sx_j sx_{j+1} = -i g_{2j+2} g_{2j+1}, the wrap bond with a factor
/// -P, H = -i sum M_ij g_{2i} g_{2j+1}, M_jj = field_j, M_{j+1,j} = bond_j.
struct RandomIsing {
    Problem problem;
    std::vector<double> bonds;
    std::vector<double> fields;
};

RandomIsing random_ising(const Chain& chain, unsigned seed) {
    std::mt19937_64 generator(seed);
    std::uniform_real_distribution<double> uniform(-1.0, 1.0);
    RandomIsing model;
    TermCollector collector(chain);
    const int sites = chain.length();
    for (int j = 0; j < (chain.is_ring() ? sites : sites - 1); ++j) {
        model.bonds.push_back(uniform(generator));
        collector.add(4 * model.bonds.back(), {{j, SiteMatrix::sx()}, {j + 1, SiteMatrix::sx()}});
    }
    for (int j = 0; j < sites; ++j) {
        model.fields.push_back(uniform(generator));
        collector.add(2 * model.fields.back(), {{j, SiteMatrix::sz()}});
    }
    model.problem = {.chain = chain,
                     .terms = std::make_shared<TermList>(collector.finish().value()),
                     .field = 0.0};
    return model;
}

/// Lowest level of a class: minus the sum of singular values of M, from the eigenvalues +-s of the
/// 2L x 2L matrix (0 M; M^T 0); the cheapest mode is filled where the sign of det M, the parity of
/// the state without filled modes, is not the class's.
double lowest_of_class(const RandomIsing& model, int parity) {
    const auto sites = static_cast<Eigen::Index>(model.fields.size());
    Eigen::MatrixXd m = Eigen::MatrixXd::Zero(sites, sites);
    for (Eigen::Index j = 0; j < sites; ++j) {
        m(j, j) = model.fields[static_cast<std::size_t>(j)];
    }
    for (std::size_t b = 0; b < model.bonds.size(); ++b) {
        const auto j = static_cast<Eigen::Index>(b);
        const bool wraps = j + 1 == sites;
        m((j + 1) % sites, j) += wraps ? -parity * model.bonds[b] : model.bonds[b];
    }
    Eigen::MatrixXd twofold = Eigen::MatrixXd::Zero(2 * sites, 2 * sites);
    twofold.topRightCorner(sites, sites) = m;
    twofold.bottomLeftCorner(sites, sites) = m.transpose();
    const Eigen::VectorXd values =
        Eigen::SelfAdjointEigenSolver<Eigen::MatrixXd>(twofold).eigenvalues();
    const Eigen::VectorXd upper = values.tail(sites);
    const double det = Eigen::PartialPivLU<Eigen::MatrixXd>(m).determinant();
    return -upper.sum() + (det * parity < 0 ? 2 * upper[0] : 0.0);
}

TEST_CASE("random Ising chains: the lowest level of each parity against singular values") {
    for (unsigned seed = 1; seed <= 8; ++seed) {
        for (const int sites : {5, 24, 61}) {
            for (const bool is_ring : {true, false}) {
                const Chain chain = is_ring ? ring(sites) : open_chain(sites);
                const RandomIsing model = random_ising(chain, seed);
                std::vector<double> both;
                for (const int parity : {1, -1}) {
                    Options options;
                    options.sector = Labels{.parity = parity};
                    const Reference found = fermion(model.problem, QuantityId::levels, options);
                    both.push_back(lowest_of_class(model, parity));
                    CHECK_NEAR(value(found), both.back(), allow(1e-12, "the matrix written here"));
                    CHECK(found.bound[0] < 1e-11);
                    CHECK(found.labels.front().parity == parity);
                }
                const Reference ground = fermion(model.problem, QuantityId::ground_energy);
                CHECK_NEAR(value(ground),
                           std::min(both[0], both[1]),
                           allow(1e-12, "the matrix written here"));
            }
        }
    }
}

TEST_CASE("mode energies with pairs: k = 0 and pi keep their sign") {
    const auto modes = [](double hp, Parity parity) {
        Options options;
        options.parity = parity;
        const Reference found =
            fermion(long_ising(ring(6), hp), QuantityId::mode_energies, options);
        std::vector<double> energies;
        for (const Complex& energy : found.value.data) {
            energies.push_back(energy.real());
        }
        return energies;
    };
    for (const double hp : {0.3, 1.7}) {
        // e_k = -2 cos k - 2 hp at k = 0 and pi.
        std::vector<double> odd = {-2 - 2 * hp, 2 - 2 * hp};
        std::vector<double> even;
        for (int m = 0; m < 6; ++m) {
            const auto size = [&](double k) {
                return 2 * std::sqrt(1 + hp * hp + 2 * hp * std::cos(k));
            };
            even.push_back(size(pi * (2 * m + 1) / 6));
            if (m != 0 && m != 3) {
                odd.push_back(size(2 * pi * m / 6));
            }
        }
        std::sort(odd.begin(), odd.end());
        std::sort(even.begin(), even.end());
        for (const Parity parity : {Parity::even, Parity::odd}) {
            const std::vector<double> found = modes(hp, parity);
            const std::vector<double>& expected = parity == Parity::even ? even : odd;
            for (std::size_t i = 0; i < expected.size(); ++i) {
                CHECK_NEAR(found[i], expected[i], rounding(4.0, 8));
            }
        }
    }
}

}  // namespace
}  // namespace chainmark::test
