#include <map>

#include <doctest/doctest.h>

#include "chainmark/base/hermitian_eigen.hpp"
#include "chainmark/sector/dense_matrix.hpp"
#include "chainmark/sector/ground_proofs.hpp"
#include "chainmark/sector/inertia.hpp"
#include "chainmark/sector/solution.hpp"
#include "sector/vectors.hpp"
#include "support/ask.hpp"
#include "support/near.hpp"
#include "support/random_lists.hpp"

using namespace chainmark;
using namespace chainmark::sector;
using namespace chainmark::test;

namespace {

Chain spins(int length, int two_s, BoundaryKind boundary = BoundaryKind::ring, double twist = 0.0) {
    return {length, boundary, twist, two_s};
}

bool has_rotation(const Problem& problem) {
    return hamiltonian_of(problem).sign_rotation.has_value();
}

/// All levels of a problem with their labels, every sector solved completely.
std::vector<LabelledLevel> complete(const Problem& problem) {
    Solution solution(problem, context());
    return solution.all_levels(problem);
}

double lowest_with(const std::vector<LabelledLevel>& levels, double sz) {
    double lowest = std::numeric_limits<double>::infinity();
    for (const LabelledLevel& level : levels) {
        if (level.labels.sz == sz) {
            lowest = std::min(lowest, level.energy);
        }
    }
    return lowest;
}

Problem from_terms(const Chain& chain, const std::vector<PlacedTerm>& terms, double field = 0.0) {
    const Result<TermList> list = build_terms(chain, terms, Coincident::add, 1);
    return {chain, std::make_shared<const TermList>(list.value()), field};
}

/// J (Sx Sx + Sy Sy) + J_z Sz Sz on the pairs at `distance`, one coupling or one per placement.
std::vector<PlacedTerm> exchange(int two_s,
                                 int distance,
                                 const std::vector<double>& j,
                                 const std::vector<double>& jz) {
    std::vector<std::complex<double>> hops;
    for (const double value : j) {
        hops.emplace_back(value / 2);
    }
    return {{.factors = {SiteMatrix::raising(two_s), SiteMatrix::lowering(two_s)},
             .offsets = {0, distance},
             .coupling = hops,
             .add_conjugate = true},
            {.factors = {SiteMatrix::sz(two_s), SiteMatrix::sz(two_s)},
             .offsets = {0, distance},
             .coupling = {jz.begin(), jz.end()}}};
}

PlacedTerm site_fields(int two_s, const std::vector<double>& fields) {
    return {.factors = {SiteMatrix::sz(two_s)},
            .offsets = {0},
            .coupling = {fields.begin(), fields.end()}};
}

/// Palindromic values: reflection holds.
std::vector<double> mirrored(int count, double low, double high, std::mt19937_64& generator) {
    std::vector<double> values(static_cast<std::size_t>(count));
    for (std::size_t i = 0; i < (values.size() + 1) / 2; ++i) {
        values[i] = std::uniform_real_distribution<double>(low, high)(generator);
        values[values.size() - 1 - i] = values[i];
    }
    return values;
}

std::vector<double> drawn(int count, double low, double high, std::mt19937_64& generator) {
    std::vector<double> values(static_cast<std::size_t>(count));
    for (double& value : values) {
        value = std::uniform_real_distribution<double>(low, high)(generator);
    }
    return values;
}

void append(std::vector<PlacedTerm>& terms, const std::vector<PlacedTerm>& more) {
    terms.insert(terms.end(), more.begin(), more.end());
}

}  // namespace

TEST_CASE("where a rotation of signs exists: bipartite antiferromagnets and every ferromagnet") {
    for (const int length : {4, 6, 8, 10}) {
        CHECK(has_rotation(family_problem("heisenberg", {1.0}, ring(length))));
        CHECK(has_rotation(family_problem("xxz", {1.0, -0.3}, ring(length))));
    }
    for (const int length : {3, 5, 6, 7, 8}) {
        CHECK(has_rotation(family_problem("heisenberg", {-1.0}, ring(length))));
        CHECK(has_rotation(family_problem("xx", {-1.0}, ring(length))));
        CHECK(has_rotation(family_problem("heisenberg", {1.0}, open_chain(length))));
    }
    CHECK(has_rotation(family_problem("heisenberg", {1.0}, spins(6, 2))));
    CHECK(has_rotation(family_problem("heisenberg", {1.0}, spins(4, 3))));
    // A J2 that couples one sublattice ferromagnetically does not frustrate.
    CHECK(has_rotation(family_problem("j1j2", {1.0, -0.4}, ring(8))));
    // An antiperiodic ring of odd length: the boundary's sign undoes the frustration.
    CHECK(has_rotation(family_problem("xx", {1.0}, ring(7, pi))));
}

TEST_CASE("where none exists: odd antiferromagnets, frustration, twists, loose chains") {
    for (const int length : {3, 5, 7, 9}) {
        CHECK(!has_rotation(family_problem("heisenberg", {1.0}, ring(length))));
        CHECK(!has_rotation(family_problem("xx", {1.0}, ring(length))));
    }
    CHECK(!has_rotation(family_problem("heisenberg", {1.0}, spins(5, 2))));
    CHECK(!has_rotation(family_problem("j1j2", {1.0, 0.3}, ring(8))));
    CHECK(!has_rotation(family_problem("j1j2", {-1.0, 0.3}, ring(8))));
    CHECK(!has_rotation(family_problem("xxz", {1.0, 0.5}, ring(6, 0.4))));
    CHECK(!has_rotation(family_problem("xx", {1.0}, ring(6, pi))));
    CHECK(!has_rotation(family_problem("tfim", {1.0}, ring(6))));
    CHECK(!has_rotation(family_problem("xx", {0.0}, ring(6))));
    CHECK(!has_rotation(family_problem("dimer_xx", {1.0, 1.0}, ring(6))));  // separate dimers
}

TEST_CASE("the lowest level of each Sz lies in the sector that holds the positive state") {
    for (const Problem& problem :
         {family_problem("heisenberg", {1.0}, ring(8)),
          family_problem("heisenberg", {1.0}, ring(6)),
          family_problem("xxz", {1.0, 0.4}, ring(10)),
          family_problem("xxz", {1.0, 2.0}, ring(8)),
          family_problem("xx", {-1.0}, ring(7)),
          family_problem("xx", {1.0}, ring(7, pi)),
          family_problem("xxz", {-1.0, 0.5}, ring(8)),
          family_problem("inverse_square", {-1.0}, ring(6)),
          family_problem("j1j2", {1.0, -0.4}, ring(8)),
          family_problem("heisenberg", {1.0}, open_chain(7)),
          family_problem("dimer_xx", {1.0, 0.3}, ring(8)),
          family_problem("heisenberg", {1.0}, spins(6, 2)),
          family_problem("xxz", {1.0, 0.3}, spins(5, 3, BoundaryKind::open)),
          family_problem("heisenberg", {1.0}, spins(4, 3))}) {
        const SectorHamiltonian hamiltonian = hamiltonian_of(problem);
        INFO(to_string(problem.chain));
        REQUIRE(hamiltonian.sign_rotation.has_value());
        Solution solution(problem, context());
        const std::vector<LabelledLevel> levels = solution.all_levels(problem);
        std::map<double, int> holders;
        for (const Sector& sector : solution.sectors()) {
            const Labels labels = labels_of(problem.chain, hamiltonian.symmetries, sector);
            if (!holds_positive_state(*hamiltonian.sign_rotation, sector)) {
                continue;
            }
            ++holders[labels.sz.value()];
            const auto lowest =
                std::find_if(levels.begin(), levels.end(), [&](const LabelledLevel& level) {
                    return level.labels.sz == labels.sz;
                });
            INFO(to_string(labels) << " against " << to_string(lowest->labels));
            CHECK(lowest->labels == labels);
            // Single: the next level of this Sz is higher.
            const auto next =
                std::find_if(lowest + 1, levels.end(), [&](const LabelledLevel& level) {
                    return level.labels.sz == labels.sz;
                });
            if (next != levels.end()) {
                CHECK(next->energy - lowest->energy > 1e-6);
            }
            // Even ring, J > 0: Marshall's momentum, pi N_up.
            if (problem.chain.is_ring() && problem.chain.length() % 2 == 0 &&
                hamiltonian.symmetries.step == 1 && !hamiltonian.symmetries.wrap_sign) {
                const bool antiferro =
                    hamiltonian.sign_rotation->rotated[0] != hamiltonian.sign_rotation->rotated[1];
                const bool at_pi = antiferro && sector.label.value % 2 != 0;
                CHECK(labels.momentum == (at_pi ? problem.chain.length() / 2 : 0));
            }
        }
        CHECK(holders.size() ==
              static_cast<std::size_t>(problem.chain.length() * problem.chain.two_s + 1));
        for (const auto& [sz, count] : holders) {
            CHECK(count == 1);
        }
    }
}

TEST_CASE("rotations of random chains make every element negative, or there is none") {
    constexpr std::uint64_t seed = 61;
    INFO("seed " << seed);
    std::mt19937_64 generator(seed);
    int found = 0;
    for (int repeat = 0; repeat < 60; ++repeat) {
        std::vector<PlacedTerm> terms =
            exchange(1, 1, drawn(6, -1, 1, generator), drawn(6, -1, 1, generator));
        if (repeat % 3 == 0) {
            append(terms, exchange(1, 2, drawn(6, -1, 1, generator), {0.3}));
        }
        const Problem problem = from_terms(ring(6), terms);
        const SectorHamiltonian hamiltonian = hamiltonian_of(problem);
        // All sign patterns tried: does one make every off-diagonal element negative?
        const HalvesBasis basis(Packing(6, 1), Conserved::nothing, 0);
        const Eigen::MatrixXd matrix = dense_matrix<double>(basis, hamiltonian.packed);
        bool exists = false;
        for (Word pattern = 0; pattern < 64 && !exists; ++pattern) {
            exists = true;
            for (int a = 0; a < 64 && exists; ++a) {
                for (int b = 0; b < a; ++b) {
                    const auto odd = std::popcount(pattern & static_cast<Word>(a ^ b)) % 2 != 0;
                    exists = exists && (odd ? -matrix(a, b) : matrix(a, b)) <= 0.0;
                }
            }
        }
        CHECK(hamiltonian.sign_rotation.has_value() == exists);
        found += exists ? 1 : 0;
        if (hamiltonian.sign_rotation) {
            for (int a = 0; a < 64; ++a) {
                for (int b = 0; b < a; ++b) {
                    int moved = 0;
                    for (int j = 0; j < 6; ++j) {
                        moved += ((a ^ b) >> j & 1) *
                                 hamiltonian.sign_rotation->rotated[static_cast<std::size_t>(j)];
                    }
                    REQUIRE((moved % 2 != 0 ? -matrix(a, b) : matrix(a, b)) <= 0.0);
                }
            }
        }
    }
    CHECK(found > 10);
    CHECK(found < 50);
}

TEST_CASE("reflection positivity: where it is claimed no Sz has a lower level than Sz = 0") {
    constexpr std::uint64_t seed = 62;
    INFO("seed " << seed);
    std::mt19937_64 generator(seed);
    int claimed = 0;
    for (int repeat = 0; repeat < 200; ++repeat) {
        const int two_s = 1 + repeat % 2;
        const int length = two_s == 1 ? 6 : 4;
        const bool open = repeat % 4 < 2;
        const Chain chain = spins(length, two_s, open ? BoundaryKind::open : BoundaryKind::ring);
        // Bond L/2-1 is its own mirror image (on a ring bond L-1, too). Signs at random elsewhere.
        const auto bonds = [&] {
            std::vector<double> values = mirrored(length - 1, -1, 1, generator);
            values[static_cast<std::size_t>(length) / 2 - 1] =
                std::uniform_real_distribution<double>(-0.3, 1)(generator);
            if (!open) {
                values.push_back(std::uniform_real_distribution<double>(-0.3, 1)(generator));
            }
            return values;
        };
        std::vector<double> j = bonds();
        const std::vector<double> jz = repeat % 3 == 0 ? j : bonds();
        std::vector<PlacedTerm> terms = exchange(two_s, 1, j, jz);
        if (repeat % 5 == 1) {  // a field that reflection keeps
            terms.push_back(site_fields(two_s, mirrored(length, -1.5, 1.5, generator)));
        }
        if (repeat % 7 == 1) {
            const auto more = mirrored(length - 2, -0.3, 0.3, generator);
            std::vector<double> next = more;
            if (!open) {
                next.push_back(0.0);
                next.push_back(0.0);
            }
            append(terms, exchange(two_s, 2, next, next));
        }
        const Problem problem = from_terms(chain, terms);
        const SectorHamiltonian hamiltonian = hamiltonian_of(problem);
        const std::vector<LabelledLevel> levels = complete(problem);
        const bool holds = lowest_with(levels, 0.0) <= levels.front().energy + 1e-11;
        if (lowest_at_zero_sz(hamiltonian)) {
            INFO("repeat " << repeat);
            ++claimed;
            CHECK(holds);
        }
    }
    CHECK(claimed > 20);
}

TEST_CASE("reflection positivity is not claimed where it has no reason") {
    const auto claimed = [](const Problem& problem) {
        return lowest_at_zero_sz(hamiltonian_of(problem));
    };
    CHECK(claimed(family_problem("heisenberg", {1.0}, ring(8))));
    CHECK(claimed(family_problem("xxz", {1.0, 0.5}, ring(8))));
    CHECK(claimed(family_problem("xxz", {1.0, 0.0}, open_chain(8))));
    CHECK(claimed(family_problem("heisenberg", {1.0}, spins(6, 2))));
    CHECK(!claimed(family_problem("heisenberg", {1.0}, ring(7))));
    CHECK(!claimed(family_problem("heisenberg", {-1.0}, ring(8))));
    CHECK(!claimed(family_problem("xxz", {1.0, -0.5}, ring(8))));
    CHECK(!claimed(family_problem("j1j2", {1.0, 0.4}, ring(8))));
    CHECK(!claimed(family_problem("xxz", {1.0, 0.5}, ring(8, 0.4))));
    CHECK(!claimed(family_problem("tfim", {1.0}, ring(8))));
    // Fields on the sites that reflection keeps: the ground state is fully polarized.
    std::vector<PlacedTerm> terms = exchange(1, 1, {1, 1, 1}, {1, 1, 1});
    terms.push_back(site_fields(1, {-2, -3, -3, -2}));
    const Problem polarized = from_terms(open_chain(4), terms);
    CHECK(complete(polarized).front().labels.sz == 2.0);
    CHECK(!claimed(polarized));
    Solution solution(polarized, context());
    CHECK_NEAR(solution.ground_energy(polarized).energy, 3 * 0.25 - 5.0, rounding(5.0, 8));
}

TEST_CASE(
    "Gershgorin's bounds lie below all levels of their Sz, and say nothing where they cannot") {
    constexpr std::uint64_t seed = 63;
    INFO("seed " << seed);
    std::mt19937_64 generator(seed);
    for (int repeat = 0; repeat < 40; ++repeat) {
        const Chain chain = repeat % 3 == 0   ? ring(7)
                            : repeat % 3 == 1 ? open_chain(6)
                                              : ring(6, repeat % 2 == 0 ? pi : 0.7);
        const Problem problem =
            random_problem({chain, Keeps::sz, repeat % 4 == 0, repeat % 5 == 0}, generator, 0.0);
        const SectorHamiltonian hamiltonian = hamiltonian_of(problem);
        const std::vector<LabelledLevel> levels = complete(problem);
        for (int up = 0; up <= chain.length(); ++up) {
            const double below = lower_bound_of(hamiltonian, up) + problem.terms->constant;
            CHECK(below <= lowest_with(levels, up - chain.length() / 2.0));
            CHECK(std::isfinite(below));
        }
        // Exact where nothing can hop, but for the allowance for rounding.
        double scale = 0.0;
        for (const Term& term : hamiltonian.terms) {
            scale += std::abs(term.coefficient);
        }
        CHECK_NEAR(lower_bound_of(hamiltonian, 0) + problem.terms->constant,
                   lowest_with(levels, -chain.length() / 2.0),
                   rounding(scale, 64.0 * chain.length()));
    }
    CHECK(lower_bound_of(hamiltonian_of(family_problem("heisenberg", {1.0}, spins(4, 2))), 3) ==
          -std::numeric_limits<double>::infinity());
}

namespace {

std::string proofs_of(const GroundEnergy& ground) {
    std::string text;
    for (const Skipped& skipped : ground.skipped) {
        text += skipped.sectors + ": " + skipped.proof + "\n";
    }
    return text;
}

/// The lowest level with proofs against the lowest of the complete spectrum.
void check_ground(const Problem& problem) {
    Solution with_proofs(problem, context());
    const GroundEnergy ground = with_proofs.ground_energy(problem);
    const std::vector<LabelledLevel> levels = complete(problem);
    INFO(to_string(problem.chain) << ", h = " << problem.field << "\n" << proofs_of(ground));
    CHECK_NEAR(ground.energy, levels.front().energy, bound(ground.bound + levels.front().bound));
    CHECK(ground.bound <= 1e-14 * with_proofs.hamiltonian().packed.row_sum());
}

}  // namespace

TEST_CASE("ground energies with proofs are the lowest of the complete spectrum") {
    constexpr std::uint64_t seed = 64;
    INFO("seed " << seed);
    std::mt19937_64 generator(seed);
    for (const double field : {0.0, 0.3, -0.3, 1.1, 5.0}) {
        for (const Keeps keeps : {Keeps::sz, Keeps::parity, Keeps::nothing}) {
            for (const bool uniform : {true, false}) {
                check_ground(random_problem({ring(8), keeps, uniform, false}, generator, field));
                check_ground(random_problem({ring(7, pi), keeps, uniform, true}, generator, field));
                check_ground(
                    random_problem({open_chain(7), keeps, uniform, false}, generator, field));
                check_ground(
                    random_problem({spins(5, 2), keeps, uniform, false}, generator, field));
                check_ground(random_problem(
                    {spins(4, 3, BoundaryKind::open), keeps, uniform, true}, generator, field));
            }
        }
        for (const Chain& chain : {ring(8), ring(7), ring(8, pi), ring(7, 0.8), open_chain(7)}) {
            for (const double delta : {-1.5, -1.0, -0.4, 0.0, 0.6, 1.0, 2.0}) {
                check_ground(family_problem("xxz", {1.0, delta}, chain, field));
                check_ground(family_problem("xxz", {-1.0, delta}, chain, field));
            }
        }
        for (const double j2 : {-0.5, 0.3, 0.5, 1.2}) {
            check_ground(family_problem("j1j2", {1.0, j2}, ring(8), field));
            check_ground(family_problem("j1j2", {-1.0, j2}, open_chain(7), field));
        }
        for (const double theta : {-2.0, -0.7, 0.3, 0.8, 2.0}) {
            check_ground(family_problem("blbq", {1.0, theta}, spins(5, 2), field));
        }
    }
}

TEST_CASE("what was skipped is told, with the reason") {
    const auto told = [](const Problem& problem) {
        Solution solution(problem, context());
        return proofs_of(solution.ground_energy(problem));
    };
    const auto holds = [](const std::string& text, const char* part) {
        return text.find(part) != std::string::npos;
    };
    const std::string heisenberg = told(family_problem("heisenberg", {1.0}, ring(8)));
    INFO(heisenberg);
    CHECK(holds(heisenberg, "spin inversion"));
    CHECK(holds(heisenberg, "Sz = -4 ... -1"));
    CHECK(holds(heisenberg, "total spin"));
    CHECK(holds(heisenberg, "Sz = 1 ... 4"));
    CHECK(holds(heisenberg, "Perron-Frobenius"));
    CHECK(holds(told(family_problem("xxz", {1.0, 0.5}, ring(8))), "reflection positivity"));
    CHECK(holds(told(family_problem("xxz", {1.0, -0.5}, ring(8))), "Gershgorin"));
    // Frustrated, one twist: every sector that matters was solved.
    CHECK(!holds(told(family_problem("j1j2", {1.0, 0.4}, ring(8))), "Perron"));
    CHECK(told(family_problem("tfim", {1.0}, ring(6))).empty());
}

TEST_CASE("levels below a shift are counted") {
    std::mt19937_64 generator(65);
    for (const bool complex : {false, true}) {
        const Problem problem =
            random_problem({ring(10), Keeps::sz, true, complex}, generator, 0.2);
        const SectorHamiltonian hamiltonian = hamiltonian_of(problem);
        for (const Sector& sector : sectors_of(problem.chain, hamiltonian.symmetries)) {
            if (sector.label.value != 5) {
                continue;
            }
            const OrbitBasis basis(sector.group, sector.label, context());
            const OrbitRows<std::complex<double>> rows(basis, hamiltonian.packed);
            const Eigen::MatrixXcd matrix = dense_matrix(rows);
            const Eigen::VectorXd levels = hermitian_eigen(matrix).values;
            CHECK((Eigen::MatrixXcd(sparse_matrix(rows)) - matrix).norm() == 0.0);
            for (int i = 0; i + 1 < levels.size(); ++i) {
                const double shift = (levels[i] + levels[i + 1]) / 2;
                const auto counted = count_below(sparse_matrix(rows), shift, 1e9);
                REQUIRE(counted.has_value());
                if (counted->error < (levels[i + 1] - levels[i]) / 3) {
                    CHECK(counted->below == i + 1);
                }
                CHECK((levels.array() < shift - counted->error).count() <= counted->below);
                CHECK((levels.array() < shift + counted->error).count() >= counted->below);
            }
            CHECK(!count_below(sparse_matrix(rows), 0.1, 10.0).has_value());
        }
    }
}
