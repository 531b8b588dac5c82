#include <algorithm>

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
        const auto takes = [&](OptionId option) {
            return std::find(spec.options.begin(), spec.options.end(), option) !=
                   spec.options.end();
        };
        std::string lines = "name = \"" + spec.name + "\"\n";
        lines += takes(OptionId::count) ? "count = 2\n" : "";
        lines += takes(OptionId::distance) ? "distance = 1\n" : "";
        lines += takes(OptionId::block) ? "block = 3\n" : "";
        std::string sites = spec.where == Where::infinite ? "\"infinite\"" : "8";
        sites += spec.when == When::thermal ? "\ntemperature = 0.5" : "";
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
    wrong("distance = 1\naxes = \"xy\"",
          {ErrorCode::unknown_name, "c.toml:10:8", {"\"xy\"", "xx, yy, zz, +-, dot"}});
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

TEST_CASE("operators of a two-site average") {
    CHECK(query_of(correlation + "distance = 1").options.axes == Axes::zz);
    const auto axes_of = [](const std::string& axes) {
        return query_of("name = \"structure_factor\"\naxes = \"" + axes + "\"").options.axes;
    };
    CHECK(axes_of("xx") == Axes::xx);
    CHECK(axes_of("yy") == Axes::yy);
    CHECK(axes_of("zz") == Axes::zz);
    CHECK(axes_of("+-") == Axes::plus_minus);
    CHECK(axes_of("dot") == Axes::dot);
    CHECK(query_of("name = \"structure_factor\"\nconnected = true").options.connected);
    check("name = \"structure_factor\"\ndistance = 1",
          {ErrorCode::unknown_key, "c.toml:9:1", {"'structure_factor'", "'distance'"}});
}

TEST_CASE("strings run upwards and join two sites") {
    const std::string order = "name = \"string_order\"\n";
    CHECK(query_of(order + "pairs = [[0, 5]]\naxis = \"x\"").options.axis == Axis::x);
    CHECK(query_of(order + "distance = [1, 7]").options.distance == std::vector<int>{1, 7});
    check(order, {ErrorCode::missing_key, "c.toml:7:1", {"neither 'distance' nor 'pairs'"}});
    check(order + "distance = [2, 0]",
          {ErrorCode::bad_value, "c.toml:9:12", {"distance 0", "1 or more"}});
    check(order + "pairs = [[5, 0]]", {ErrorCode::bad_value, "c.toml:9:9", {"[5, 0]", "i < j"}});
    check(order + "pairs = [[3, 3]]", {ErrorCode::bad_value, "c.toml:9:9", {"[3, 3]"}});
    check(order + "distance = 8", {ErrorCode::bad_value, "c.toml:9:12", {"reaches to 8"}});
    CHECK(case_of(with_quantity(order + "distance = 1", "8\nspin = \"1\"")).two_s == 2);
    check_only_error(with_quantity(order + "distance = 1", "8\nspin = \"3/2\""),
                     {ErrorCode::bad_value, "c.toml:10:12", {"spin 3/2", "integer spin"}});
}

TEST_CASE("blocks and entropies") {
    const std::string entropy = "name = \"entanglement_entropy\"\n";
    const Options plain = query_of(entropy + "block = 3").options;
    CHECK(plain.block == std::vector<int>{0, 1, 2});
    CHECK(plain.order == 1);
    CHECK_FALSE(plain.log2);
    const Options other = query_of(entropy + "block = [4, 0]\norder = 2\nlog = 2").options;
    CHECK(other.block == std::vector<int>{0, 4});
    CHECK(other.order == 2);
    CHECK(other.log2);
    check(entropy, {ErrorCode::missing_key, "c.toml:7:1", {"'block'", "block = 4"}});
    check(entropy + "block = 0", {ErrorCode::bad_value, "c.toml:9:9", {"the number 0", "from 1"}});
    check(entropy + "block = 8", {ErrorCode::bad_value, "c.toml:9:9", {"8 sites", "1 to 7"}});
    check(entropy + "block = [0, 8]", {ErrorCode::bad_value, "c.toml:9:9", {"reaches to 8"}});
    check(entropy + "block = [1, 2, 1]",
          {ErrorCode::bad_value, "c.toml:9:9", {"site 1 twice", "once"}});
    check(entropy + "block = []", {ErrorCode::bad_value, "c.toml:9:9", {"an empty list"}});
    check(entropy + "block = [-1]", {ErrorCode::bad_value, "c.toml:9:10", {"-1"}});
    check(entropy + "block = \"4\"", {ErrorCode::wrong_type, "c.toml:9:9", {"a number of sites"}});
    check(entropy + "block = 3\norder = 0", {ErrorCode::bad_value, "c.toml:10:9", {"from 1"}});
    check(entropy + "block = 3\norder = 1.5", {ErrorCode::wrong_type, "c.toml:10:9", {"1.5"}});
    check(entropy + "block = 3\nlog = 10", {ErrorCode::bad_value, "c.toml:10:7", {"for bits"}});
    check(entropy + "block = 3\nbloc = 3",
          {ErrorCode::unknown_key, "c.toml:10:1", {"did you mean 'block'"}});
}

TEST_CASE("counts go up to the number of states of the spin") {
    const std::string levels = "name = \"levels\"\ncount = ";
    CHECK(case_of(with_quantity(levels + "6561", "8\nspin = \"1\"")).two_s == 2);
    check_only_error(with_quantity(levels + "6562", "8\nspin = \"1\""),
                     {ErrorCode::bad_value, "c.toml:10:9", {"6562", "6561"}});
}

TEST_CASE("quantities of the ground state and of temperatures do not meet") {
    const std::string warm = "8\ntemperature = 0.5";
    check_only_error(with_quantity("name = \"gap\"", warm),
                     {ErrorCode::bad_value,
                      "c.toml:8:1",
                      {"'gap' belongs to the ground state",
                       "there are: magnetization, susceptibility",
                       "energy"}});
    check("name = \"free_energy\"",
          {ErrorCode::bad_value,
           "c.toml:7:1",
           {"'free_energy' needs a temperature", "temperature = [0.5, 1.0]", "ground_energy"}});
    for (const char* either : {"magnetization", "susceptibility", "spin_correlation"}) {
        const std::string lines =
            "name = \"" + std::string(either) + "\"\n" +
            (either == std::string("spin_correlation") ? "distance = 1\n" : "");
        CHECK(case_of(with_quantity(lines, warm)).has_temperature());
        CHECK_FALSE(case_of(with_quantity(lines)).has_temperature());
    }
    check_only_error(with_quantity("name = \"local_magnetization\"", warm),
                     {ErrorCode::bad_value, "c.toml:8:1", {"ground state"}});
    check_only_error(with_quantity("name = \"entropy\"", "\"infinite\"\ntemperature = 1"),
                     {ErrorCode::bad_value, "c.toml:8:1", {"ask for 'entropy_per_site'"}});
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
