#include "casefile/case_text.hpp"

using namespace chainmark;
using namespace chainmark::test;

namespace {

/// The [[quantity]] stands in line 7, `lines` from line 8 on.
std::string with_quantity(const std::string& lines, const std::string& sites = "[8, 12]") {
    return changed("[8, 12]", sites, changed("name = \"ground_energy\"\n", lines));
}

Query query_of(const std::string& lines) {
    return case_of(with_quantity(lines)).quantities[0].query;
}

void check(const std::string& lines, const Expected& expected) {
    check_only_error(with_quantity(lines), expected);
}

const std::string correlation = "name = \"spin_correlation\"\n";

}  // namespace

TEST_CASE("every quantity is known by its name") {
    for (const QuantitySpec& spec : quantities()) {
        std::string lines = "name = \"" + spec.name + "\"\n";
        lines += spec.id == QuantityId::levels             ? "count = 2\n"
                 : spec.id == QuantityId::spin_correlation ? "distance = 1\n"
                                                           : "";
        const std::string sites = spec.where == Where::infinite ? "\"infinite\"" : "8";
        const Case c = case_of(with_quantity(lines, sites));
        CHECK(c.quantities[0].query.spec == &spec);
        CHECK(c.quantities[0].query.label == spec.name);
    }
}

TEST_CASE("options are read") {
    CHECK(query_of("name = \"levels\"\ncount = 7").options.count == 7);
    CHECK(query_of("name = \"local_magnetization\"").options.axis == Axis::z);
    CHECK(query_of("name = \"local_magnetization\"\naxis = \"x\"").options.axis == Axis::x);
    CHECK(query_of("name = \"local_magnetization\"\naxis = \"y\"").options.axis == Axis::y);
    CHECK(query_of("name = \"mode_energies\"").options.parity == Parity::ground_state);
    CHECK(query_of("name = \"mode_energies\"\nparity = \"even\"").options.parity == Parity::even);
    CHECK(query_of("name = \"mode_energies\"\nparity = \"odd\"").options.parity == Parity::odd);
    CHECK(query_of(correlation + "distance = 2").options.distance == std::vector<int>{2});
    CHECK(query_of(correlation + "distance = [0, 7]\naxes = \"zz\"").options.distance ==
          std::vector<int>{0, 7});
    const Query pairs = query_of(correlation + "pairs = [[0, 3], [7, 5]]\nconnected = true");
    CHECK(pairs.options.pairs == std::vector<std::pair<int, int>>{{0, 3}, {7, 5}});
    CHECK(pairs.options.connected);
}

TEST_CASE("wrong names and options") {
    check("name = \"grond_energy\"", {ErrorCode::unknown_name, "c.toml:8:8", {"'ground_energy'"}});
    check("name = 3", {ErrorCode::wrong_type, "c.toml:8:8", {"the number 3"}});
    check("label = \"x\"", {ErrorCode::missing_key, "c.toml:7:1", {"'name'"}});
    check("name = \"gap\"\ncount = 3",
          {ErrorCode::unknown_key, "c.toml:9:1", {"'gap'", "'count'", "allowed: name, label"}});
    check("name = \"levels\"", {ErrorCode::missing_key, "c.toml:7:1", {"'levels'", "'count'"}});
    check("name = \"levels\"\ncount = 0", {ErrorCode::bad_value, "c.toml:9:9", {"from 1"}});
    check("name = \"levels\"\ncount = 1000001",
          {ErrorCode::bad_value, "c.toml:9:9", {"to 1000000"}});
    check("name = \"levels\"\ncount = 2.0", {ErrorCode::wrong_type, "c.toml:9:9", {"as in 2"}});
    check("name = \"local_magnetization\"\naxis = \"w\"",
          {ErrorCode::unknown_name, "c.toml:9:8", {"\"w\"", "x, y, z"}});
    check("name = \"mode_energies\"\nparity = \"evn\"",
          {ErrorCode::unknown_name, "c.toml:9:10", {"'even'"}});
}

TEST_CASE("wrong options of a correlation") {
    const auto wrong = [](const std::string& lines, const Expected& expected) {
        check(correlation + lines, expected);
    };
    wrong("", {ErrorCode::missing_key, "c.toml:7:1", {"neither 'distance' nor 'pairs'"}});
    wrong("distance = 1\npairs = [[0, 1]]", {ErrorCode::bad_value, "c.toml:10:1", {"both"}});
    wrong("distance = 1\naxes = \"xx\"",
          {ErrorCode::bad_value, "c.toml:10:8", {"\"xx\"", "\"zz\""}});
    wrong("distance = -1", {ErrorCode::bad_value, "c.toml:9:12", {"-1"}});
    wrong("distance = [1, 2.5]", {ErrorCode::wrong_type, "c.toml:9:16", {"2.5"}});
    wrong("distance = []", {ErrorCode::bad_value, "c.toml:9:12", {"an empty list"}});
    wrong("distance = \"1\"", {ErrorCode::wrong_type, "c.toml:9:12", {"\"1\""}});
    wrong("pairs = [0]", {ErrorCode::wrong_type, "c.toml:9:10", {"the number 0", "[i, j]"}});
    wrong("pairs = [[0, 1, 2]]", {ErrorCode::bad_value, "c.toml:9:10", {"holds 3 sites"}});
    wrong("pairs = [[0, -2]]", {ErrorCode::bad_value, "c.toml:9:14", {"-2"}});
    wrong("distance = 1\nconnected = 1",
          {ErrorCode::wrong_type, "c.toml:10:13", {"true or false"}});
}

TEST_CASE("sites, distances and counts fit the shortest chain") {
    check(correlation + "distance = [1, 8]",
          {ErrorCode::bad_value, "c.toml:9:12", {"reaches to 8", "8 sites", "0 to 7"}});
    check(correlation + "pairs = [[0, 8]]", {ErrorCode::bad_value, "c.toml:9:9", {"reaches to 8"}});
    check("name = \"levels\"\ncount = 257", {ErrorCode::bad_value, "c.toml:9:9", {"257", "256"}});
    CHECK(query_of("name = \"levels\"\ncount = 256").options.count == 256);
    CHECK(
        case_of(with_quantity(correlation + "distance = 500", "\"infinite\"")).quantities.size() ==
        1);
}

TEST_CASE("labels are distinct, and none is a parameter's name") {
    const std::string second = "\n[[quantity]]\nname = \"gap\"\n";
    check("name = \"gap\"" + second, {ErrorCode::bad_value, "c.toml:9:1", {"'gap'", "label = "}});
    CHECK(case_of(with_quantity("name = \"gap\"" + second + "label = \"g2\""))
              .quantities[1]
              .query.label == "g2");
    check("name = \"gap\"\nlabel = \"h\"",
          {ErrorCode::bad_value, "c.toml:7:1", {"'h'", "parameter"}});
    check("name = \"gap\"\nlabel = \"\"", {ErrorCode::bad_value, "c.toml:9:9", {"not empty"}});
    check("name = \"gap\"\nlabel = \"a\\nb\"", {ErrorCode::bad_value, "c.toml:9:9", {"one line"}});
    check("name = \"gap\"\nlabel = 1", {ErrorCode::wrong_type, "c.toml:9:9", {"a text"}});
}

TEST_CASE("a quantity's own tolerance beats the case's, part by part") {
    const Case c = case_of(with_quantity("name = \"gap\"\ntolerance = { relative = 0 }\n") +
                           "[tolerance]\nabsolute = 1e-7\n");
    CHECK(c.quantities[0].tolerance == Tolerance{1e-7, 0.0});
    check("name = \"gap\"\ntolerance = 1e-9", {ErrorCode::wrong_type, "c.toml:9:13", {"absolute"}});
    check("name = \"gap\"\ntolerance = { absolute = -1 }",
          {ErrorCode::bad_value, "c.toml:9:26", {"0 or more"}});
    check("name = \"gap\"\ntolerance = { abs = 1 }",
          {ErrorCode::unknown_key, "c.toml:9:15", {"'abs'"}});
}

TEST_CASE("quantities and the infinite chain") {
    check_only_error(with_quantity("name = \"ground_energy\"", "[8, \"infinite\"]"),
                     {ErrorCode::bad_value, "c.toml:7:1", {"ask for 'ground_energy_per_site'"}});
    check_only_error(with_quantity("name = \"spectrum\"", "\"infinite\""),
                     {ErrorCode::bad_value, "c.toml:7:1", {"'spectrum'", "no meaning"}});
    check("name = \"phase\"",
          {ErrorCode::bad_value, "c.toml:7:1", {"'phase'", "add \"infinite\""}});
    CHECK(case_of(with_quantity("name = \"phase\"", "[8, \"infinite\"]")).quantities.size() == 1);
}

TEST_CASE("at least one quantity, written as tables") {
    check_only_error(changed("[[quantity]]\nname = \"ground_energy\"\n", ""),
                     {ErrorCode::missing_key, "c.toml", {"'quantity'", "[[quantity]]"}});
    check_only_error("quantity = []\n" + changed("[[quantity]]\nname = \"ground_energy\"\n", ""),
                     {ErrorCode::bad_value, "c.toml:1:12", {"an empty list", "[[quantity]]"}});
    check_only_error(changed("[[quantity]]", "[quantity]"),
                     {ErrorCode::wrong_type, "c.toml:7:1", {"a table", "[[quantity]]"}});
    check_only_error(
        "quantity = [\"gap\"]\n" + changed("[[quantity]]\nname = \"ground_energy\"\n", ""),
        {ErrorCode::wrong_type, "c.toml:1:13", {"\"gap\"", "a table"}});
}
