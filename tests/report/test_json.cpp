#include <bit>
#include <cmath>
#include <cstdint>
#include <random>

#include <doctest/doctest.h>
#include <nlohmann/json.hpp>

#include "chainmark/report/json.hpp"
#include "report/sample_run.hpp"

using namespace chainmark;
using namespace chainmark::test;
using Json = nlohmann::ordered_json;

namespace {

Json parsed(const SampleRun& run) {
    return Json::parse(run_json(run.report));
}

const Json& first_quantity(const Json& json) {
    return json["cases"][0]["points"][0]["quantities"][0];
}

std::vector<std::string> keys(const Json& object) {
    std::vector<std::string> names;
    for (const auto& item : object.items()) {
        names.push_back(item.key());
    }
    return names;
}

}  // namespace

TEST_CASE("the layout of a run") {
    SampleRun run = sample_run({12}, {"ground_energy"});
    QuantityResult& result = add_point(run,
                                       12,
                                       0.25,
                                       0,
                                       {reference(RouteId::sector, Value::number(-3.5), 2e-14),
                                        reference(RouteId::fermion, Value::number(-3.5), 1e-15)},
                                       Verdict::agree);
    result.comparison.difference = 0.0;
    result.comparison.allowed = 4.5e-10;
    result.comparison.digits = 14.3;
    result.not_run = {{RouteId::dense, "too large", false}};
    const Json json = parsed(run);
    CHECK(keys(json) == std::vector<std::string>{
                            "chainmark", "format", "command", "verdict", "provenance", "cases"});
    CHECK(json["format"] == 1);
    CHECK(json["verdict"] == "agree");
    const Json& c = json["cases"][0];
    CHECK(keys(c) == std::vector<std::string>{
                         "case", "title", "verdict", "points", "trends", "effective_case"});
    CHECK(c["points"][0]["parameters"].dump() == R"({"sites":12,"J":1.0,"h":0.25})");
    const Json& quantity = first_quantity(json);
    CHECK(keys(quantity) == std::vector<std::string>{"quantity",
                                                     "label",
                                                     "options",
                                                     "verdict",
                                                     "references",
                                                     "difference",
                                                     "allowed",
                                                     "digits",
                                                     "candidate",
                                                     "slips",
                                                     "not_run"});
    CHECK(quantity["references"][0].dump() ==
          R"({"route":"sector","value":-3.5,"bound":2e-14,"basis":"residual","seconds":0.0,)"
          R"("degeneracy":1,"range":null})");
    CHECK(quantity["candidate"].is_null());
    CHECK(quantity["slips"].empty());
    CHECK(quantity["not_run"].dump() == R"([{"route":"dense","reason":"too large"}])");
}

TEST_CASE("labels, skipped sectors and complex values") {
    SampleRun run = sample_run({8}, {"spin_correlation", "levels"});
    run.source->quantities[0].query.options = {.axes = Axes::plus_minus, .distance = {1, 2}};
    run.source->quantities[1].query.options = {.count = 1,
                                               .sector = Labels{.sz = 0.5, .reflection = -1}};
    Value value = Value::array({0.25, -0.5});
    value.data[1] = {-0.5, 0.125};
    value.complex = true;
    add_point(run, 8, 0.0, 0, {reference(RouteId::sector, value, 1e-15)}, Verdict::single);
    Reference level = reference(RouteId::sector, Value::array({-3.5}), 1e-15);
    level.labels = {{.sz = 0.5, .momentum = 3, .parity = -1, .reflection = -1, .inversion = 1}};
    level.skipped = {{"Sz < 0", "Sz -> -Sz maps them onto Sz > 0"}};
    add_point(run, 8, 0.5, 1, {level}, Verdict::single);
    const Json points = parsed(run)["cases"][0]["points"];
    const Json& correlation = points[0]["quantities"][0];
    CHECK(correlation["options"].dump() == R"({"axes":"+-","distance":[1,2],"connected":false})");
    CHECK(correlation["references"][0]["value"].dump() == "[[0.25,0.0],[-0.5,0.125]]");
    CHECK(correlation["references"][0]["complex"] == true);
    CHECK_FALSE(correlation["references"][0].contains("skipped"));
    const Json& levels = points[1]["quantities"][0];
    CHECK(levels["options"].dump() == R"({"count":1,"sector":{"sz":0.5,"reflection":-1}})");
    CHECK(levels["references"][0]["sectors"].dump() ==
          R"([{"sz":0.5,"momentum":3,"parity":-1,"reflection":-1,"inversion":1}])");
    CHECK(levels["references"][0]["skipped"].dump() ==
          R"([{"sectors":"Sz < 0","proof":"Sz -> -Sz maps them onto Sz > 0"}])");
    CHECK_FALSE(levels["references"][0].contains("complex"));
}

TEST_CASE("options of an entropy") {
    SampleRun run = sample_run({8}, {"entanglement_entropy"});
    run.source->quantities[0].query.options = {.block = {0, 1, 2}, .order = 2, .log2 = true};
    add_point(run, 8, 0.0, 0, {reference(RouteId::dense, Value::number(1.0), 0)}, Verdict::single);
    CHECK(first_quantity(parsed(run))["options"].dump() ==
          R"({"block":[0,1,2],"order":2,"log":2})");
    run.source->quantities[0].query.options = {.block = {0, 3}};
    CHECK(first_quantity(parsed(run))["options"].dump() == R"({"block":[0,3],"order":1})");
}

TEST_CASE("every double reads back identically") {
    std::mt19937_64 random(11);
    std::vector<double> numbers = {0.1, -0.0, 5e-324, 1.7976931348623157e308, 1.0 / 3.0};
    while (numbers.size() < 20000) {
        const double x = std::bit_cast<double>(random());
        if (std::isfinite(x)) {
            numbers.push_back(x);
        }
    }
    SampleRun run = sample_run({12}, {"levels"});
    add_point(
        run, 12, 0.0, 0, {reference(RouteId::dense, Value::array(numbers), 0.1)}, Verdict::single);
    const Json value = first_quantity(parsed(run))["references"][0]["value"];
    REQUIRE(value.size() == numbers.size());
    for (std::size_t i = 0; i < numbers.size(); ++i) {
        const double read = value[i].get<double>();
        CHECK(std::bit_cast<std::uint64_t>(read) == std::bit_cast<std::uint64_t>(numbers[i]));
    }
}

TEST_CASE("statuses stand where there is no number") {
    SampleRun run = sample_run({infinite_sites}, {"susceptibility", "local_magnetization"});
    add_point(run,
              infinite_sites,
              1.0,
              0,
              {reference(RouteId::limit, Value::status(Special::infinite), 0.0)},
              Verdict::single);
    Value partly = Value::array({0.5, 0.0});
    partly.special = {Special::none, Special::jump};
    add_point(run, 8, 1.0, 1, {reference(RouteId::dense, partly, 1e-15)}, Verdict::single);
    const Json json = parsed(run);
    const Json& points = json["cases"][0]["points"];
    CHECK(points[0]["parameters"]["sites"] == "infinite");
    const Json& number = points[0]["quantities"][0]["references"][0];
    CHECK(number["value"].is_null());
    CHECK(number["status"] == "infinite");
    const Json& array = points[1]["quantities"][0]["references"][0];
    CHECK(array["value"].dump() == "[0.5,null]");
    CHECK(array["status"].dump() == R"([null,"jump"])");
    CHECK(array["bound"].dump() == "[1e-15,1e-15]");
}

TEST_CASE("neither NaN nor infinity is written") {
    SampleRun run = sample_run({8}, {"ground_energy"});
    Reference broken = reference(RouteId::dense, Value::number(std::nan("")), HUGE_VAL);
    broken.range = Range{{-HUGE_VAL, 1.0}};
    add_point(run, 8, 0.0, 0, {broken}, Verdict::undecided).comparison.digits = HUGE_VAL;
    const Json quantity = first_quantity(parsed(run));
    CHECK(quantity["references"][0]["value"].is_null());
    CHECK(quantity["references"][0]["status"] == "undefined");
    CHECK(quantity["references"][0]["bound"].is_null());
    CHECK(quantity["references"][0]["range"].is_null());
    CHECK(quantity["digits"].is_null());
}

TEST_CASE("level lists carry completeness and sectors, jump fields the total Sz") {
    SampleRun run = sample_run({8}, {"levels", "jump_fields"});
    Reference levels = reference(RouteId::sector, Value::array({-1.0, -0.5}), 1e-14);
    levels.complete = Completeness::proved;
    levels.labels = {{.sz = 0.5, .momentum = 3}, {.parity = -1}};
    levels.range = Range{{-1.0, 1.0}, {0.0, 0.0}};
    add_point(run, 8, 0.0, 0, {levels}, Verdict::single);
    Value jumps = Value::array({-1.0, 1.0});
    jumps.total_sz = {-1.0, 0.0, 1.0};
    add_point(run, 8, 0.0, 1, {reference(RouteId::sector, jumps, 0.0)}, Verdict::single);
    const Json json = parsed(run);
    const Json& first = first_quantity(json)["references"][0];
    CHECK(first["completeness"] == "proved");
    CHECK(first["sectors"].dump() == R"([{"sz":0.5,"momentum":3},{"parity":-1}])");
    CHECK(first["range"].dump() == "[[-1.0,1.0],[0.0,0.0]]");
    const Json& second = json["cases"][0]["points"][1]["quantities"][0]["references"][0];
    CHECK(second["total_sz"].dump() == "[-1.0,0.0,1.0]");
}

TEST_CASE("certified digits are texts, one pair an element") {
    SampleRun run = sample_run({8}, {"ground_energy", "spin_correlation"});
    Reference plain = reference(RouteId::sector, Value::number(0.5), 1e-15);
    Reference certified = reference(RouteId::fermion, Value::number(0.5), 0.0, Basis::enclosure);
    certified.enclosure = {{"0.500000000000000000001", "3e-31"}};
    add_point(run, 8, 0.0, 0, {certified, plain}, Verdict::agree);
    Reference list = reference(RouteId::fermion, Value::array({0.5, 0.25}), 0.0, Basis::enclosure);
    list.enclosure = {{"0.5", "1e-40"}, {"0.25", "0"}};
    add_point(run, 8, 0.0, 1, {list}, Verdict::single);
    const Json json = parsed(run);
    const Json& references = first_quantity(json)["references"];
    CHECK(references[0]["basis"] == "enclosure");
    CHECK(references[0]["enclosure"].dump() ==
          R"({"mid":"0.500000000000000000001","radius":"3e-31"})");
    CHECK_FALSE(references[1].contains("enclosure"));
    const Json& second = json["cases"][0]["points"][1]["quantities"][0]["references"][0];
    CHECK(second["enclosure"].dump() ==
          R"([{"mid":"0.5","radius":"1e-40"},{"mid":"0.25","radius":"0"}])");
}

TEST_CASE("complex numbers, matrices and texts") {
    SampleRun run = sample_run({8}, {"spin_correlation", "phase"});
    Value matrix = Value::array({0.0, 0.0, 0.0, 0.0});
    matrix.shape = {2, 2};
    matrix.complex = true;
    matrix.data = {{1, 2}, {3, 4}, {5, 6}, {7, 8}};
    add_point(run, 8, 0.0, 0, {reference(RouteId::dense, matrix, 0.5)}, Verdict::single);
    add_point(
        run, 8, 0.0, 1, {reference(RouteId::limit, Value::words("critical"), 0)}, Verdict::single);
    const Json json = parsed(run);
    const Json& first = first_quantity(json)["references"][0];
    CHECK(first["value"].dump() == "[[[1.0,2.0],[3.0,4.0]],[[5.0,6.0],[7.0,8.0]]]");
    CHECK(first["complex"] == true);
    CHECK(first["bound"].dump() == "[[0.5,0.5],[0.5,0.5]]");
    const Json& second = json["cases"][0]["points"][1]["quantities"][0]["references"][0];
    CHECK(second["value"] == "critical");
    CHECK(second["bound"].is_null());
}

TEST_CASE("the infinite chain stands apart from the references") {
    SampleRun run = sample_run({8}, {"ground_energy_per_site"});
    QuantityResult& result = add_point(
        run, 8, 0.0, 0, {reference(RouteId::sector, Value::number(-0.3), 0)}, Verdict::single);
    CHECK_FALSE(first_quantity(parsed(run)).contains("infinite_chain"));
    result.infinite = reference(RouteId::limit, Value::number(-0.31), 1e-15);
    const Json quantity = first_quantity(parsed(run));
    CHECK(quantity["infinite_chain"]["value"] == -0.31);
    CHECK(quantity["references"].size() == 1);
}

TEST_CASE("reasons, options, trends and interruption") {
    SampleRun run = sample_run({8}, {"spin_correlation"});
    run.source->quantities[0].query.options.distance = {1, 2};
    QuantityResult& result = add_point(run, 8, 0.0, 0, {}, Verdict::undecided);
    result.comparison.reason = "no route covers it";
    run.result().trends = {{"exponent", "e", "sites", "even", {{"J", 1.0}}, 2.0, 0.1, {}}};
    run.report.interrupted = true;
    const Json json = parsed(run);
    CHECK(json["interrupted"] == true);
    CHECK(json["cases"][0]["points_planned"] == 2);
    CHECK(first_quantity(json)["reason"] == "no route covers it");
    CHECK(first_quantity(json)["options"].dump() ==
          R"({"axes":"zz","distance":[1,2],"connected":false})");
    CHECK(json["cases"][0]["trends"][0].dump() ==
          R"({"trend":"exponent","quantity":"e","axis":"sites","group":"even",)"
          R"("parameters":{"J":1.0},"value":2.0,"error":0.1,"expected":null})");
}

TEST_CASE("a run without any answer is undecided, never single") {
    SampleRun run = sample_run({8}, {"ground_energy"});
    run.result().verdict = Verdict::single;
    CHECK(parsed(run)["verdict"] == "undecided");
}

TEST_CASE("text that is no UTF-8 does not stop the report") {
    SampleRun run = sample_run({8}, {"ground_energy"});
    run.report.provenance.command_line = "chainmark run \xff.toml";
    CHECK(parsed(run)["provenance"]["command_line"].get<std::string>().find(".toml") !=
          std::string::npos);
}
