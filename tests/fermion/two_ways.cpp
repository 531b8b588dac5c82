#include <algorithm>
#include <cstdlib>

#include <Eigen/QR>

#include "chainmark/fermion/class_matrix.hpp"
#include "chainmark/fermion/ground_space.hpp"
#include "chainmark/fermion/matrix_frame.hpp"
#include "chainmark/fermion/response.hpp"
#include "fermion/quadratic_lists.hpp"
#include "support/ask.hpp"
#include "support/near.hpp"

// Momentum space against real space, and the states of both against what a covariance must fulfil.

namespace chainmark::test {
namespace {

using namespace fermion;

constexpr std::uint64_t seed = 20261202;

QuadraticForm form_of(const Problem& problem) {
    QuadraticForm form = recognise(problem.chain, *problem.terms).value();
    form.add_field(problem.field);
    return form;
}

/// The same form, solved without knowing that it is uniform.
Solution in_real_space(QuadraticForm form) {
    form.kind = FormKind::general;
    return solve(std::move(form), context());
}

double narrow(Real x) {
    return static_cast<double>(x);
}

void check_levels(const Solution& a, const Solution& b, int count) {
    Levels ours(a, 0.0);
    Levels theirs(b, 0.0);
    for (int n = 0; n < count; ++n) {
        const auto first = ours.next();
        const auto second = theirs.next();
        REQUIRE(first.has_value() == second.has_value());
        if (!first) {
            break;
        }
        CHECK_NEAR(narrow(first->energy),
                   narrow(second->energy),
                   bound(narrow(ours.error() + theirs.error())));
    }
    CHECK(ours.error() < 1e-11L);
    CHECK(theirs.error() < 1e-11L);
}

Eigen::MatrixXd covariance_of(const GaussianState& state) {
    return state.covariance(0, state.sites());
}

/// Where the ground state is unique: the same covariance and the same response.
void check_ground(const Solution& a, const Solution& b) {
    Levels ours(a, 0.0);
    Levels theirs(b, 0.0);
    const GroundSpace first = find_ground_space(ours, 1e-8, context());
    const GroundSpace second = find_ground_space(theirs, 1e-8, context());
    REQUIRE(first.states.size() == second.states.size());
    if (first.states.size() > 1) {
        return;
    }
    REQUIRE(first.lowest().up_count == second.lowest().up_count);
    const auto gamma = covariance_of(*ours.gaussian(first.lowest()));
    const auto other = covariance_of(*theirs.gaussian(second.lowest()));
    const Real tilt = second.tilt(b.of(second.lowest().up_count).distance) +
                      first.tilt(a.of(first.lowest().up_count).distance);
    CHECK_NEAR((gamma - other).cwiseAbs().maxCoeff(), 0.0, bound(narrow(2 * tilt) + 1e-14));
    CHECK(tilt < 1e-9L);
    if (!a.conserving) {
        const auto x = std::get<Bounded>(zero_temperature_response(a, ours, first, context()));
        const auto y = std::get<Bounded>(zero_temperature_response(b, theirs, second, context()));
        CHECK_NEAR(narrow(x.value), narrow(y.value), bound(narrow(x.error + y.error) + 1e-14));
        CHECK(y.error < 1e-8L * (1 + y.value));
    }
}

TEST_CASE("uniform rings in momentum space and in real space") {
    std::mt19937_64 generator(seed);
    MESSAGE("seed " << seed);
    for (const int sites : {3, 8, 21, 50}) {
        for (const double twist : {0.0, pi, 0.7}) {
            for (const bool pairs : {true, false}) {
                for (const bool complex : {true, false}) {
                    if (pairs && twist == 0.7) {
                        continue;
                    }
                    const QuadraticKind kind{.chain = ring(sites, twist),
                                             .pairs = pairs,
                                             .complex = complex,
                                             .uniform = true,
                                             .longest = std::min(3, sites - 1)};
                    CAPTURE(sites);
                    CAPTURE(twist);
                    CAPTURE(pairs);
                    CAPTURE(complex);
                    const QuadraticForm form = form_of(quadratic_problem(kind, generator, 0.2));
                    REQUIRE(form.kind == FormKind::uniform_ring);
                    const Solution waves = solve(form, context());
                    const Solution matrices = in_real_space(form);
                    check_levels(waves, matrices, 300);
                    check_ground(waves, matrices);
                }
            }
        }
    }
}

TEST_CASE("Ising rings: exact zero modes and critical fields, both ways") {
    for (const int sites : {4, 7, 12, 33}) {
        for (const double coupling : {1.0, -1.0}) {
            for (const double field : {0.0, 0.25, 0.5, -0.5, 1.0}) {
                CAPTURE(sites);
                CAPTURE(coupling);
                CAPTURE(field);
                const QuadraticForm form =
                    form_of(family_problem("tfim", {coupling}, ring(sites), field));
                REQUIRE(form.kind == FormKind::uniform_ring);
                check_levels(solve(form, context()), in_real_space(form), 200);
            }
        }
    }
}

/// Pf of a small antisymmetric matrix by its definition, expanding along the first row.
double pfaffian(const Eigen::MatrixXd& matrix) {
    const Eigen::Index size = matrix.rows();
    if (size == 0) {
        return 1.0;
    }
    double sum = 0.0;
    for (Eigen::Index j = 1; j < size; ++j) {
        std::vector<Eigen::Index> rest;
        for (Eigen::Index i = 1; i < size; ++i) {
            if (i != j) {
                rest.push_back(i);
            }
        }
        sum += (j % 2 == 1 ? 1 : -1) * matrix(0, j) * pfaffian(matrix(rest, rest));
    }
    return sum;
}

/// A pure Gaussian state: Gamma^T Gamma = 1, <H> is the level's energy, <P> = Pf Gamma is the
/// parity of its class.
void check_states(const Solution& solution) {
    Levels levels(solution, 0.0);
    const int sites = solution.form.length();
    for (int n = 0; n < 6; ++n) {
        const auto state = levels.next();
        if (!state) {
            break;
        }
        const auto gaussian = levels.gaussian(*state);
        const Eigen::MatrixXd gamma = covariance_of(*gaussian);
        const auto identity = Eigen::MatrixXd::Identity(2 * sites, 2 * sites);
        CHECK_NEAR((gamma.transpose() * gamma - identity).norm(), 0.0, rounding(1.0, 400));
        CHECK(gaussian->parity() == parity_of(state->up_count));
        CHECK_NEAR(pfaffian(gamma), parity_of(state->up_count), rounding(1.0, 400));
        const ClassMatrix matrix(solution.form, state->up_count);
        Real energy = solution.form.constant_of(state->up_count);
        for (int a = 0; a < matrix.size(); ++a) {
            for (const auto& [column, element] : matrix.row(a)) {
                energy -= element * gamma(a, column) / 4;
            }
        }
        CHECK_NEAR(narrow(energy), narrow(state->energy), rounding(10.0, 100));
    }
}

TEST_CASE("eigenstates as covariances: purity, energy, and the parity as a Pfaffian") {
    std::mt19937_64 generator(seed + 1);
    for (const bool is_ring : {true, false}) {
        for (const bool pairs : {true, false}) {
            for (const bool complex : {true, false}) {
                for (const bool uniform : {true, false}) {
                    for (const int sites : {1, 2, 3, 4}) {
                        if (is_ring && sites < 3) {
                            continue;
                        }
                        CAPTURE(is_ring);
                        CAPTURE(pairs);
                        CAPTURE(complex);
                        CAPTURE(uniform);
                        CAPTURE(sites);
                        const QuadraticKind kind{.chain = is_ring ? ring(sites) : open_chain(sites),
                                                 .pairs = pairs,
                                                 .complex = complex,
                                                 .uniform = uniform,
                                                 .longest = 2,
                                                 .wraps = !is_ring};
                        check_states(solve(form_of(quadratic_problem(kind, generator)), context()));
                    }
                }
            }
        }
    }
    // A standing wave of a complex hop.
    const QuadraticKind line{
        .chain = open_chain(4), .pairs = false, .complex = true, .uniform = true};
    check_states(solve(form_of(quadratic_problem(line, generator)), context()));
}

TEST_CASE("the vacuum's parity is that of a determinant, zero modes included") {
    // H = sum_j field_j Sz_j: the state without excitations of positive energy has the sites of
    // negative field up, so its parity changes with the sign of each field.
    for (int signs = 0; signs < 8; ++signs) {
        QuadraticForm form;
        form.chain = open_chain(3);
        for (int j = 0; j < 3; ++j) {
            form.onsite.push_back((signs >> j) % 2 == 0 ? 1.0L : -1.0L);
        }
        // A pair on a bond so weak that it changes nothing but the kind of the form.
        form.bonds.push_back({.first = 0, .range = 1, .hop = 0.0, .pair = 1e-300});
        const Solution solution = solve(form, context());
        REQUIRE_FALSE(solution.conserving);
        int up = 0;
        for (int j = 0; j < 3; ++j) {
            up += (signs >> j) % 2;
        }
        CHECK(solution.modes[0].vacuum == (up % 2 == 0 ? 1 : -1));
        // With a zero mode the two parities share the level.
        form.onsite[1] = 0.0L;
        const Solution zero = solve(form, context());
        Levels levels(zero, 0.0);
        const auto lowest = levels.next();
        const auto next = levels.next();
        CHECK(lowest->up_count != next->up_count);
        CHECK(next->energy - lowest->energy <= 2 * levels.error());
    }
}

/// A B^T - C in extended precision.
Real distance(const RealMatrix& a, const RealMatrix& b, const RealMatrix& c) {
    const Eigen::MatrixX<Real> product =
        a.cast<Real>() * b.cast<Real>().transpose() - c.cast<Real>();
    return product.norm();
}

TEST_CASE("products and defects by split matrices against extended precision") {
    std::srand(7);
    for (const int size : {1, 2, 30, 90}) {
        RealMatrix q =
            Eigen::HouseholderQR<RealMatrix>(RealMatrix::Random(size, size)).householderQ();
        const RealMatrix r =
            Eigen::HouseholderQR<RealMatrix>(RealMatrix::Random(size, size)).householderQ();
        const AccurateProduct product = accurate_product(q, r);
        CHECK(distance(q, r, product.value) <= product.error);
        CHECK(product.error < 1e-14L);
        for (const double spoil : {0.0, 1e-12, 1e-3}) {
            q(0, size - 1) += spoil;
            const RealMatrix identity = RealMatrix::Identity(size, size);
            const Real exact = std::hypot(distance(q, q, identity), distance(r, r, identity));
            const Real found =
                orthonormality_defect({.u = q, .v = r, .bipartite = true}, context());
            CHECK(found >= exact * (1 - 1e-15L));
            CHECK(found <= exact + 1e-18L * size * size);
        }
    }
}

}  // namespace
}  // namespace chainmark::test
