#include <algorithm>

#include <doctest/doctest.h>

#include "chainmark/report/terminal.hpp"
#include "report/sample_run.hpp"

using namespace chainmark;
using namespace chainmark::test;

namespace {

bool contains(const std::string& text, const std::string& part) {
    const bool found = text.find(part) != std::string::npos;
    CHECK_MESSAGE(found, "no '" << part << "' in:\n" << text);
    return found;
}

std::size_t longest_line(const std::string& text) {
    std::size_t longest = 0;
    std::size_t begin = 0;
    while (begin < text.size()) {
        const std::size_t end = std::min(text.find('\n', begin), text.size());
        longest = std::max(longest, end - begin);
        begin = end + 1;
    }
    return longest;
}

std::vector<Reference> two_routes(double x, double y) {
    return {reference(RouteId::sector, Value::number(x), 2e-14),
            reference(RouteId::fermion, Value::number(y), 1e-14)};
}

}  // namespace

TEST_CASE("a table with a row per point") {
    SampleRun run = sample_run({8, 12}, {"ground_energy"});
    QuantityResult& first =
        add_point(run, 8, 0.5, 0, two_routes(-3.98205080756888, -3.98205080756887), Verdict::agree);
    first.comparison.difference = 1e-14;
    first.comparison.digits = 14.1;
    first.infinite = reference(RouteId::limit, Value::number(-4.0123456789), 1e-12);
    add_point(run, 12, 0.5, 0, two_routes(1.0, 1.0), Verdict::agree);
    const std::string text = run_text(run.report, {});
    contains(text, "invented-ring  An invented ring\n");
    contains(text, "boundary periodic; xx: sum_j J (Sx_j Sx_j+1 + Sy_j Sy_j+1) - h sum_j Sz_j\n");
    contains(text, "  J = 1\n");
    contains(text, "  ground_energy\n");
    contains(text, "-3.9820508075689  2e-14");
    contains(text, "-4.012345679");
    contains(text, "sector fermion     1e-14    14.1  agree\n");
    contains(text,
             "1 case, 2 points, 2 quantities: 2 agree, 0 single, 0 undecided, 0 differ (1.2 s)\n");
    CHECK(longest_line(text) <= 112);
}

TEST_CASE("spin, options and complex arrays") {
    SampleRun run = sample_run({8}, {"spin_correlation", "entanglement_entropy", "gap"});
    run.source->two_s = 3;
    run.source->quantities[0].query.options = {.axes = Axes::plus_minus, .distance = {1, 2}};
    run.source->quantities[1].query.options = {.block = {0, 1, 2}, .order = 2, .log2 = true};
    run.source->quantities[2].query.options = {.sector = Labels{.sz = 0.5, .momentum = -1}};
    Value value = Value::array({0.25, -0.5});
    value.data[1] = {-0.5, 0.125};
    value.complex = true;
    std::vector<Reference> both = {reference(RouteId::sector, value, 1e-15),
                                   reference(RouteId::dense, value, 1e-15)};
    both[1].value.data[1] = {-0.5, 0.375};
    QuantityResult& differs = add_point(run, 8, 0.5, 0, both, Verdict::differ);
    differs.comparison.element = 1;
    differs.comparison.reason = "invented";
    for (const std::size_t q : {1, 2}) {
        add_point(run, 8, 0.5, q, {both[0]}, Verdict::single);
    }
    run.result().points[1].quantities[0].references[0].skipped = {{"Sz < 0", "a proof"}};
    const std::string text = run_text(run.report, {});
    contains(text, "boundary periodic; spin 3/2; xx: ");
    contains(text, "  spin_correlation  (axes = +-, distance = [1, 2])\n");
    contains(text, "  entanglement_entropy  (block = 3, order = 2, log = 2)\n");
    contains(text, "  gap  (sector = { sz = 0.5, momentum = -1 })\n");
    contains(text, "0.125");
    contains(text, "-0.5+0.375j +- 1e-15");
    CHECK(text.find("a proof") == std::string::npos);
    run.source->quantities[1].query.options.block = {1, 2, 3};
    contains(run_text(run.report, {}), "(block = [1, 2, 3], order = 2, log = 2)\n");
}

TEST_CASE("what differs shows every route's own value") {
    SampleRun run = sample_run({8}, {"ground_energy", "levels"});
    QuantityResult& result = add_point(run, 8, 0.5, 0, two_routes(-3.5, -3.25), Verdict::differ);
    result.comparison.reason = "sector and fermion are 0.25 apart";
    add_point(run,
              8,
              0.5,
              1,
              {reference(RouteId::sector, Value::array({1, 2, 3}), 1e-3),
               reference(RouteId::dense, Value::array({1, 2, 4}), 1e-3)},
              Verdict::differ)
        .comparison.element = 2;
    const std::string text = run_text(run.report, {});
    contains(text, "        differ: sector and fermion are 0.25 apart\n");
    contains(text, "        sector  -3.5 +- 2e-14 (residual)\n");
    contains(text, "        fermion -3.25 +- 1e-14 (residual)\n");
    contains(text, "        dense   3 values, [2] = 4 +- 0.001 (residual)\n");
}

TEST_CASE("arrays are cut, statuses are words") {
    SampleRun run = sample_run({8}, {"spectrum", "susceptibility", "jump_fields"});
    add_point(run,
              8,
              0.0,
              0,
              {reference(RouteId::dense, Value::array(std::vector<double>(256, 0.5)), 1e-3)},
              Verdict::single);
    add_point(run,
              8,
              0.0,
              1,
              {reference(RouteId::dense, Value::status(Special::jump), 0.0)},
              Verdict::single);
    Value jumps = Value::array({-0.5, 0.5});
    jumps.total_sz = {-4, 0, 4};
    add_point(run, 8, 0.0, 2, {reference(RouteId::dense, jumps, 0.0)}, Verdict::single);
    const std::string text = run_text(run.report, {});
    contains(text, "[256 values]");
    contains(text, "        0.500, 0.500, 0.500, 0.500, 0.500, 0.500, ... (256 in all)\n");
    contains(text, "jump");
    contains(text, "        total Sz  -4, 0, 4\n");
}

TEST_CASE("routes without an answer are named once where that matters") {
    SampleRun run = sample_run({8}, {"gap"});
    for (const double h : {0.0, 0.5}) {
        QuantityResult& none = add_point(run, 8, h, 0, {}, Verdict::undecided);
        none.comparison.reason = "no route answers";
        none.not_run = {{RouteId::dense, "more than 12 sites", false}};
    }
    QuantityResult& answered = add_point(run, 8, 1.0, 0, two_routes(1, 1), Verdict::agree);
    answered.not_run = {{RouteId::dense, "not shown", false},
                        {RouteId::fermion, "level on the edge", true}};
    const std::string text = run_text(run.report, {});
    contains(text, "    without dense at 2 of 3 points: more than 12 sites\n");
    contains(text, "    without fermion at 1 of 3 points: level on the edge\n");
    CHECK(text.find("not shown") == std::string::npos);
}

TEST_CASE("a long table keeps its ends and what needs a look") {
    SampleRun run = sample_run({8}, {"gap"});
    for (int i = 0; i < 100; ++i) {
        const bool bad = i == 50;
        QuantityResult& result =
            add_point(run, 8, i, 0, two_routes(1, 1), bad ? Verdict::undecided : Verdict::agree);
        result.comparison.reason = bad ? "the fiftieth" : "";
    }
    const std::string text = run_text(run.report, {});
    contains(text, "... 45 rows left out; --csv and --json have all\n");
    contains(text, "... 44 rows left out; --csv and --json have all\n");
    contains(text, "undecided: the fiftieth");
    const std::string quiet = run_text(run.report, {.quiet = true});
    CHECK(std::count(quiet.begin(), quiet.end(), '\n') <= 11);
    contains(quiet, "undecided: the fiftieth");
}

TEST_CASE("quiet is one line where all is well") {
    SampleRun run = sample_run({8}, {"gap"});
    add_point(run, 8, 0.0, 0, two_routes(1, 1), Verdict::agree);
    CHECK(run_text(run.report, {.quiet = true}) ==
          "1 case, 1 point, 1 quantity: 1 agree, 0 single, 0 undecided, 0 differ (1.2 s)\n");
}

TEST_CASE("only verdicts are coloured, and only where allowed") {
    SampleRun run = sample_run({8}, {"gap"});
    add_point(run, 8, 0.0, 0, two_routes(1, 1), Verdict::agree);
    contains(run_text(run.report, {.colour = true}), "\033[32magree\033[0m");
    CHECK(run_text(run.report, {}).find('\033') == std::string::npos);
}

TEST_CASE("trends and interruption") {
    SampleRun run = sample_run({8}, {"gap"});
    add_point(run, 8, 0.0, 0, two_routes(1, 1), Verdict::agree);
    run.result().trends = {{"exponent", "gap", "sites", "even", {{"J", 1.0}}, 1.00123, 0.002, 1.0}};
    run.report.interrupted = true;
    const std::string text = run_text(run.report, {});
    contains(text, "    exponent of gap along sites (even), J = 1: 1.00 +- 0.002, expected 1\n");
    contains(text, "interrupted, 1 of 2 points finished: 1 case,");
}
