#include <chrono>
#include <cmath>
#include <random>
#include <thread>

#include <doctest/doctest.h>
#include <fmt/format.h>

#include "chainmark/base/numerics.hpp"
#include "chainmark/plan/plan.hpp"
#include "support/ask.hpp"
#include "support/near.hpp"

using namespace chainmark;
using namespace chainmark::test;

namespace {

Case parsed(const std::string& body) {
    const auto c = parse_case("format = 1\n" + body, "test.toml", {});
    if (!c) {
        FAIL(to_string(c.error().front()));
    }
    return *c;
}

std::vector<CaseResult> run(const std::vector<Case>& cases, const Context& with = context()) {
    const auto plan = Plan::make(cases);
    REQUIRE(plan.has_value());
    return plan->run(with);
}

std::string first_error(const Case& c) {
    const auto plan = Plan::make({c});
    REQUIRE(!plan.has_value());
    return to_string(plan.error().front());
}

const char* const xx_sweep = R"(
[system]
sites = [6, 7]
[hamiltonian]
family = "xx"
J = [1.0, -1.0]
h = { from = 0.0, to = 0.4, count = 3 }
[[quantity]]
name = "ground_energy_per_site"
[[quantity]]
name = "jump_fields"
)";

}  // namespace

TEST_CASE("grids walk the last written axis fastest") {
    const auto points = grid_points(parsed(xx_sweep));
    REQUIRE(points.has_value());
    REQUIRE(points->size() == 12);
    CHECK(points->at(0) == Parameters{{"sites", 6}, {"J", 1.0}, {"h", 0.0}});
    CHECK(points->at(1) == Parameters{{"sites", 6}, {"J", 1.0}, {"h", 0.2}});
    CHECK(points->at(3) == Parameters{{"sites", 6}, {"J", -1.0}, {"h", 0.0}});
    CHECK(points->at(6) == Parameters{{"sites", 7}, {"J", 1.0}, {"h", 0.0}});
}

TEST_CASE("zip walks lists together") {
    const Case c = parsed(R"(
[system]
sites = [6, 8]
[hamiltonian]
family = "xx"
J = 1.0
h = [0.1, 0.2]
[grid]
combine = "zip"
[[quantity]]
name = "gap"
)");
    const auto points = grid_points(c);
    REQUIRE(points->size() == 2);
    CHECK(points->at(1) == Parameters{{"sites", 8}, {"J", 1.0}, {"h", 0.2}});
}

TEST_CASE("a run answers every point by every route and compares") {
    const auto results = run({parsed(xx_sweep)});
    REQUIRE(results.size() == 1);
    CHECK(results[0].verdict == Verdict::agree);
    // 12 points, and jump_fields once for each of the four chains
    REQUIRE(results[0].points.size() == 16);
    int chains = 0;
    for (const PointResult& point : results[0].points) {
        for (const QuantityResult& quantity : point.quantities) {
            CHECK(quantity.references.size() == 3);
            CHECK(quantity.comparison.verdict == Verdict::agree);
        }
        const bool has_field = point.parameters.back().first == "h";
        chains += has_field ? 0 : 1;
        CHECK(point.quantities.front().infinite.has_value() == has_field);
    }
    CHECK(chains == 4);
}

TEST_CASE("infinite points are answered by the limit, beside finite ones it has no vote") {
    const auto results = run({parsed(R"(
[system]
sites = ["infinite"]
[hamiltonian]
family = "xx"
J = 1.0
h = 0.5
[[quantity]]
name = "magnetization"
[[quantity]]
name = "phase"
)")});
    const auto& quantities = results[0].points.at(0).quantities;
    CHECK(quantities[0].comparison.verdict == Verdict::single);
    // arcsin(1/2)/pi (Katsura, Phys. Rev. 127, 1508 (1962))
    CHECK_NEAR(quantities[0].references[0].value.real_at(0), 1.0 / 6, rounding(1.0, 4));
    CHECK(quantities[1].references[0].value.text == "critical");
}

TEST_CASE("fields share work where they commute, temperatures always") {
    const auto described = [](const std::string& family) {
        const auto plan =
            Plan::make({parsed("[system]\nsites = 6\ntemperature = [0.5, 1.0, 2.0]\n"
                               "[hamiltonian]\nfamily = \"" +
                               family +
                               "\"\nJ = 1.0\nh = [0.1, 0.2]\n[[quantity]]\n"
                               "name = \"energy\"\n")});
        REQUIRE(plan.has_value());
        return plan->describe();
    };
    const std::string commuting = described("xx");
    CHECK(commuting.find("  6 points\n") != std::string::npos);
    CHECK(commuting.find("  ring of 6 sites, 2 fields, 3 temperatures\n") != std::string::npos);
    const std::string other = described("tfim");
    CHECK(other.find("  2 times:\n  ring of 6 sites, 1 field, 3 temperatures\n") !=
          std::string::npos);
}

TEST_CASE("temperature and spin reach the problem") {
    const Case c = parsed(R"(
[system]
sites = [4, "infinite"]
spin = "3/2"
temperature = [0.5, 2.0]
[hamiltonian]
family = "xx"
J = 1.0
[[quantity]]
name = "energy_per_site"
)");
    const auto points = grid_points(c).value();
    REQUIRE(points.size() == 4);
    CHECK(points[1] == Parameters{{"sites", 4}, {"temperature", 2.0}, {"J", 1.0}, {"h", 0.0}});
    for (std::size_t i = 0; i < points.size(); ++i) {
        const Problem problem = build_problem(c, points[i]).value();
        CHECK(problem.temperature == (i % 2 == 0 ? 0.5 : 2.0));
        CHECK(problem.chain.two_s == 3);
        CHECK(problem.chain.is_infinite() == (i >= 2));
    }
    const Problem cold =
        build_problem(parsed(xx_sweep), grid_points(parsed(xx_sweep))->at(0)).value();
    CHECK_FALSE(cold.temperature.has_value());
    CHECK(cold.chain.two_s == 1);
}

TEST_CASE("what a route does not know it refuses, with the reason") {
    const auto refused = [](const std::string& system, const std::string& quantity) {
        const auto results = run({parsed("[system]\n" + system +
                                         "[hamiltonian]\nfamily = \"xx\"\nJ = 1.0\n[routes]\n"
                                         "use = [\"fermion\", \"limit\"]\n[[quantity]]\n" +
                                         quantity)});
        std::string reasons;
        for (const PointResult& point : results[0].points) {
            const QuantityResult& result = point.quantities.at(0);
            CHECK(result.references.empty());
            CHECK(result.comparison.verdict == Verdict::undecided);
            CHECK_FALSE(result.infinite.has_value());
            for (const NotRun& route : result.not_run) {
                CHECK_FALSE(route.covers);
                const bool says_where = route.reason == "needs a finite chain";
                reasons += says_where ? "" : route.reason + '\n';
            }
        }
        return reasons;
    };
    CHECK(refused("sites = 6\nspin = 1\n", "name = \"ground_energy\"\n") == "needs spin 1/2\n");
    CHECK(refused("sites = \"infinite\"\nspin = 1\n", "name = \"magnetization\"\n") ==
          "needs spin 1/2\n");
    CHECK(refused("sites = 6\n", "name = \"gap\"\nsector = { inversion = 1 }\n") ==
          "a sector of reflection or inversion is not covered by this route\n");
    CHECK(refused("sites = \"infinite\"\n",
                  "name = \"spin_correlation\"\naxes = \"xx\"\npairs = [[0, 500]]\n") ==
          "distances above 400 are not covered here\n");
    CHECK(refused("sites = 6\n", "name = \"entanglement_entropy\"\nblock = [0, 2, 4]\n") ==
          "the sites of the block, or all others, must be consecutive: the spins of separate "
          "intervals are not the fermions of these sites\n");
}

TEST_CASE("a family without an infinite chain has nothing beside its rings") {
    const auto results = run({parsed(R"(
[system]
sites = 4
[hamiltonian]
family = "inverse_square"
J = 1.0
[[quantity]]
name = "ground_energy_per_site"
)")});
    const QuantityResult& result = results[0].points.at(0).quantities.at(0);
    CHECK(result.comparison.verdict == Verdict::agree);
    CHECK_FALSE(result.infinite.has_value());
    // exact: with J1 = pi^2/8 between neighbours and J2 = pi^2/16 across, sites {0,2} and {1,3}
    // give H = (J1/2) (S^2 - S_02^2 - S_13^2) + (J2/2) (S_02^2 + S_13^2 - 3), lowest at S = 0,
    // S_02 = S_13 = 1: -2 J1 + J2/2 = -7 pi^2/32
    CHECK_NEAR(result.references[0].value.real_at(0), -7 * pi * pi / 128, rounding(1.0, 64));
}

TEST_CASE("fields that do not commute: chain rows and points stay apart") {
    const auto results = run({parsed(R"(
[system]
sites = 5
[hamiltonian]
family = "tfim"
J = 1.0
h = [0.0, 0.3]
[[quantity]]
name = "jump_fields"
[[quantity]]
name = "ground_energy"
)")});
    REQUIRE(results[0].points.size() == 3);
    CHECK(results[0].points[0].quantities[0].references.empty());  // Sz is not conserved
    CHECK(results[0].points[1].quantities[0].references.size() >= 2);
    CHECK(results[0].points[2].quantities[0].references.size() >= 2);
    // exact: at h = 0 four of the five bonds Sx Sx of an antiferromagnetic ring gain 1/4, one
    // costs 1/4
    CHECK_NEAR(results[0].points[1].quantities[0].references[0].value.real_at(0),
               -0.75,
               rounding(1.0, 32));
}

TEST_CASE("written terms: parameters, couplings, draws") {
    const Case c = parsed(R"(
[system]
sites = 5
boundary = "open"
[parameters]
Jxy = [0.5, 2.0]
seed = 7
[[hamiltonian.term]]
operators = ["S+", "S-"]
offsets = [0, 1]
coupling = { parameter = "Jxy", factor = 0.5 }
add_conjugate = true
[[hamiltonian.term]]
operators = ["Sz"]
offsets = [0]
coupling = { uniform = [-1, 1], seed = "seed" }
[[hamiltonian.term]]
operators = ["Sz", "Sz"]
sites = [0, 3]
coupling = 0.25
[[quantity]]
name = "ground_energy"
)");
    const auto points = grid_points(c).value();
    const Problem problem = build_problem(c, points.at(1)).value();
    double hop = 0.0;
    double first_field = 0.0;
    double pair = 0.0;
    for (const Term& term : problem.terms->terms) {
        const std::string text = to_string(term.string);
        hop = text == "S+_1 S-_2" ? term.coefficient.real() : hop;
        first_field = text == "Sz_0" ? term.coefficient.real() : first_field;
        pair = text == "Sz_0 Sz_3" ? term.coefficient.real() : pair;
    }
    CHECK(hop == 1.0);
    CHECK(pair == 0.25);
    // std::mt19937_64(7): the first output is fixed by the C++ standard's definition
    std::mt19937_64 generator(7);
    CHECK(first_field == -1.0 + 2.0 * (static_cast<double>(generator() >> 11) * 0x1p-53));
    // a chain of hoppings and fields is quadratic until the Sz Sz term: two routes
    const auto results = run({c});
    CHECK(results[0].verdict == Verdict::agree);
    CHECK(results[0].points[0].quantities[0].references.size() == 2);
    CHECK(results[0].points[0].quantities[0].not_run[0].route == RouteId::fermion);
}

TEST_CASE("jump fields do not depend on the family's h, but on a written field") {
    const Case c = parsed(R"(
[system]
sites = 6
[hamiltonian]
family = "xx"
J = 1.0
h = [0.3, 0.7]
[[hamiltonian.term]]
operators = ["Sz"]
offsets = [0]
coupling = -0.1
[[quantity]]
name = "jump_fields"
)");
    const auto results = run({c});
    REQUIRE(results[0].points.size() == 1);
    const Reference& found = results[0].points[0].quantities[0].references[0];
    CHECK(results[0].verdict == Verdict::agree);
    // the last jump of the total field is at |J| = 1 (Katsura 1962); 0.1 of it is written already
    CHECK_NEAR(found.value.real_at(5), 0.9, rounding(1.0, 16));
}

TEST_CASE("errors carry the place in the file") {
    CHECK(first_error(parsed(R"(
[system]
sites = 5
[hamiltonian]
family = "xx"
J = 1.0
[[hamiltonian.term]]
operators = ["S+", "S-"]
offsets = [0, 2]
coupling = 1.0
[[quantity]]
name = "gap"
)"))
              .find("test.toml:8") == 0);
    CHECK(first_error(parsed(R"(
[system]
sites = 6
boundary = { twist = 0.3 }
[hamiltonian]
family = "tfim"
J = 1.0
[[quantity]]
name = "gap"
)"))
              .find("conserves Sz") != std::string::npos);
    CHECK(first_error(parsed(R"(
[system]
sites = 4
[[hamiltonian.term]]
operators = ["Sz", "Sz"]
offsets = [0, 2]
coupling = 1.0
[[quantity]]
name = "gap"
)"))
              .find("coincident") != std::string::npos);
}

TEST_CASE("grids above 10^5 points are refused with their number") {
    const std::string error = first_error(parsed(R"(
[system]
sites = 6
[hamiltonian]
family = "xx"
J = { from = 0, to = 1, count = 1000 }
h = { from = 0, to = 1, count = 1000 }
[[quantity]]
name = "gap"
)"));
    CHECK(error.find("1000000 points") != std::string::npos);
    CHECK(error.find("--set") != std::string::npos);
}

TEST_CASE("over the memory budget is undecided, with what it would need") {
    Context small = context();
    small.memory = std::make_shared<MemoryBudget>(1e4);
    const auto results = run({parsed(R"(
[system]
sites = 16
[hamiltonian]
family = "xxz"
J = 1.0
Delta = 0.5
[[quantity]]
name = "gap"
)")},
                             small);
    CHECK(results[0].verdict == Verdict::undecided);
    const auto& not_run = results[0].points[0].quantities[0].not_run;
    CHECK(not_run[0].reason.find("more than the budget of") != std::string::npos);
    CHECK(not_run[0].covers);
}

TEST_CASE("sizes whose squares leave the range of doubles are refused") {
    for (const char* const value : {"1e200", "1e-200"}) {
        const std::string body = fmt::format(
            "[system]\nsites = 4\n[hamiltonian]\nfamily = \"xx\"\n"
            "J = {}\n[[quantity]]\nname = \"gap\"\n",
            value);
        CHECK(first_error(parsed(body)).find("between 1e-100 and 1e100") != std::string::npos);
    }
    CHECK(first_error(parsed("[system]\nsites = 4\n[hamiltonian]\nfamily = \"xx\"\nJ = 0.0\n"
                             "h = 1e308\n[[quantity]]\nname = \"gap\"\n"))
              .find("the field h = 1e+308") != std::string::npos);
}

TEST_CASE("constants, tiny scales and jumps close to each other: all routes agree") {
    const std::vector<Case> cases = {
        // S+ S- = 1/2 + Sz: constant and field cancel in the fully polarized state
        parsed("[system]\nsites = 3\nboundary = \"open\"\n[[hamiltonian.term]]\n"
               "operators = [\"S+\", \"S-\"]\noffsets = [0, 0]\ncoupling = -1.8\n"
               "[[quantity]]\nname = \"levels\"\ncount = 8\n"),
        parsed("[system]\nsites = 6\n[hamiltonian]\nfamily = \"xx\"\nJ = 1e-15\n"
               "[[quantity]]\nname = \"jump_fields\"\n[[quantity]]\nname = \"spectrum\"\n"),
        // two fields 0.7e-10 apart are one jump, the next is 2.3e-10 away and another one
        parsed("[system]\nsites = 4\nboundary = \"open\"\n[[hamiltonian.term]]\n"
               "operators = [\"Sz\"]\noffsets = [0]\ncoupling = [0.0, 0.7e-10, 3e-10, 1.0]\n"
               "[[quantity]]\nname = \"jump_fields\"\n"),
        parsed("[system]\nsites = 6\n[hamiltonian]\nfamily = \"xx\"\nJ = 1.0\n"
               "[[hamiltonian.term]]\noperators = [\"Sz\"]\noffsets = [0]\ncoupling = 3e5\n"
               "[[quantity]]\nname = \"jump_fields\"\n")};
    for (const CaseResult& result : run(cases)) {
        for (const PointResult& point : result.points) {
            for (const QuantityResult& quantity : point.quantities) {
                INFO(quantity.comparison.reason);
                CHECK(quantity.comparison.verdict == Verdict::agree);
                CHECK(quantity.references.size() == 3);
            }
        }
    }
}

TEST_CASE("a stop request ends the run within a second and keeps finished points") {
    // The gap of 26 sites keeps the sectors busy for many seconds; the six-site points are done at
    // once.
    const std::vector<Case> cases = {parsed(R"(
[system]
sites = [6, 26]
[hamiltonian]
family = "xxz"
J = 1.0
Delta = 0.5
[[quantity]]
name = "gap"
)")};
    const auto plan = Plan::make(cases);
    std::stop_source stop;
    Context stoppable = context();
    stoppable.stop = stop.get_token();
    std::jthread interrupter([&] {
        std::this_thread::sleep_for(std::chrono::milliseconds(1500));
        stop.request_stop();
    });
    const auto start = std::chrono::steady_clock::now();
    const auto results = plan->run(stoppable);
    const double seconds =
        std::chrono::duration<double>(std::chrono::steady_clock::now() - start).count();
    CHECK(seconds < 3.0);
    REQUIRE(results[0].points.size() == 1);
    CHECK(results[0].points_planned == 2);
    CHECK(results[0].points[0].quantities[0].comparison.verdict == Verdict::agree);
}

TEST_CASE("sizes beside the infinite chain give trends, even and odd apart") {
    const auto results = run({parsed(R"(
[system]
sites = { from = 7, to = 14, step = 1 }
[hamiltonian]
family = "xx"
J = 1.0
[routes]
use = ["fermion", "limit"]
[[quantity]]
name = "ground_energy_per_site"
)")});
    const std::vector<Trend>& trends = results[0].trends;
    REQUIRE(trends.size() == 3);
    int exponents = 0;
    for (const Trend& trend : trends) {
        if (trend.trend == "exponent") {
            ++exponents;
            CHECK(trend.expected == 2.0);
            CHECK(std::abs(trend.value - 2.0) < 0.1);
        } else {
            CHECK(trend.trend == "central_charge");
            CHECK(trend.group == "even");
            CHECK(trend.expected == 1.0);
            CHECK(std::abs(trend.value - 1.0) < trend.error);
            CHECK(trend.error < 0.01);
        }
    }
    CHECK(exponents == 2);
    CHECK(trends[0].group != trends.back().group);
}

TEST_CASE("fields of the infinite chain give exponents next to each critical one") {
    const auto results = run({parsed(R"(
[system]
sites = "infinite"
[hamiltonian]
family = "dimer_xx"
J = 1.0
delta = 0.5
h = [0.4, 0.45, 0.48, 0.505, 0.51, 0.52, 0.54, 0.95, 0.97, 0.99, 1.02, 1.05, 1.1]
[[quantity]]
name = "magnetization"
[[quantity]]
name = "susceptibility"
[[quantity]]
name = "gap"
)")});
    std::vector<std::string> found;
    for (const Trend& trend : results[0].trends) {
        INFO(trend.quantity << ", " << trend.group << ": " << trend.value << " +- " << trend.error);
        CHECK(trend.trend == "exponent");
        CHECK(trend.axis == "h");
        REQUIRE(trend.expected.has_value());
        CHECK(std::abs(trend.value - *trend.expected) <= trend.error + 1e-12);
        CHECK(trend.error < 0.05);
        found.push_back(trend.quantity + " " + trend.group);
    }
    const std::vector<std::string> expected = {"magnetization above 0.5",
                                               "magnetization below 1",
                                               "susceptibility above 0.5",
                                               "susceptibility below 1",
                                               "gap below 0.5",
                                               "gap above 1"};
    CHECK(found == expected);
}
