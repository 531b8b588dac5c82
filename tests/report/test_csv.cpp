#include <sstream>

#include <doctest/doctest.h>

#include "chainmark/report/csv.hpp"
#include "report/sample_run.hpp"

using namespace chainmark;
using namespace chainmark::test;

namespace {

std::vector<std::string> lines(const SampleRun& run) {
    std::istringstream text(run_csv(run.report));
    std::vector<std::string> all;
    for (std::string line; std::getline(text, line);) {
        all.push_back(line);
    }
    return all;
}

}  // namespace

TEST_CASE("one row per element of every reference") {
    SampleRun run = sample_run({8}, {"ground_energy", "levels"});
    QuantityResult& energy = add_point(run,
                                       8,
                                       0.5,
                                       0,
                                       {reference(RouteId::sector, Value::number(-0.1), 1e-15),
                                        reference(RouteId::dense, Value::number(-0.1), 2e-15)},
                                       Verdict::agree);
    energy.infinite = reference(RouteId::limit, Value::number(-0.2), 0.0, Basis::rounding);
    add_point(run,
              infinite_sites,
              0.0,
              1,
              {reference(RouteId::dense, Value::array({1.0, 2.0}), 0.0)},
              Verdict::single);
    const std::vector<std::string> all = lines(run);
    REQUIRE(all.size() == 6);
    CHECK(all[0] == "case,sites,J,h,quantity,index,route,value,status,bound,basis,verdict");
    CHECK(all[1] == "invented-ring.toml,8,1,0.5,ground_energy,,sector,-0.1,,1e-15,residual,agree");
    CHECK(all[2] == "invented-ring.toml,8,1,0.5,ground_energy,,dense,-0.1,,2e-15,residual,agree");
    CHECK(all[3] == "invented-ring.toml,8,1,0.5,ground_energy,,limit,-0.2,,0,rounding,");
    CHECK(all[4] == "invented-ring.toml,infinite,1,0,levels,0,dense,1,,0,residual,single");
    CHECK(all[5] == "invented-ring.toml,infinite,1,0,levels,1,dense,2,,0,residual,single");
}

TEST_CASE("statuses, complex numbers, and quantities without a value") {
    SampleRun run = sample_run({8}, {"susceptibility", "gap", "spin_correlation"});
    add_point(run,
              8,
              0.5,
              0,
              {reference(RouteId::sector, Value::status(Special::jump), 0.0)},
              Verdict::single);
    add_point(run, 8, 0.5, 1, {}, Verdict::undecided);
    Value complex = Value::number(0.0);
    complex.complex = true;
    complex.data = {{0.5, -0.25}};
    add_point(run, 8, 0.5, 2, {reference(RouteId::sector, complex, 0.1)}, Verdict::single);
    const std::vector<std::string> all = lines(run);
    REQUIRE(all.size() == 4);
    CHECK(all[1] == "invented-ring.toml,8,1,0.5,susceptibility,,sector,,jump,0,residual,single");
    CHECK(all[2] == "invented-ring.toml,8,1,0.5,gap,,,,,,,undecided");
    CHECK(all[3] ==
          "invented-ring.toml,8,1,0.5,spin_correlation,,sector,0.5-0.25j,,0.1,residual,single");
}

TEST_CASE("the parameters of all cases are columns") {
    SampleRun run = sample_run({8}, {"gap"});
    SampleRun other = sample_run({8}, {"gap"});
    other.source->axes = {{"sites", {8.0}, {}}, {"Delta", {0.5}, {}}};
    run.report.cases.push_back(other.result());
    CHECK(lines(run)[0] ==
          "case,sites,J,h,Delta,quantity,index,route,value,status,bound,basis,"
          "verdict");
}
