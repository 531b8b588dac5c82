#include <cmath>

#include "casefile/case_text.hpp"
#include "chainmark/base/numerics.hpp"

using namespace chainmark;
using namespace chainmark::test;

namespace {

std::string with_sites(const std::string& sites) {
    return changed("[8, 12]", sites);
}

std::string with_system(const std::string& lines) {
    return changed("sites = [8, 12]", "sites = [8, 12]\n" + lines);
}

std::vector<double> sites_of(const std::string& sites) {
    return case_of(changed("ground_energy", "gap", with_sites(sites))).axis("sites").values;
}

std::vector<double> couplings_of(const std::string& grid) {
    return case_of(changed("J = 1.0", "J = " + grid)).axis("J").values;
}

using Numbers = std::vector<double>;

}  // namespace

TEST_CASE("every form of sites") {
    CHECK(sites_of("12") == Numbers{12});
    CHECK(sites_of("[8, 11]") == Numbers{8, 11});
    CHECK(sites_of("{ from = 4, to = 10, step = 3 }") == Numbers{4, 7, 10});
    CHECK(sites_of("{ from = 4, to = 9, step = 3 }") == Numbers{4, 7});
    CHECK(sites_of("{ from = 4, to = 10, count = 3 }") == Numbers{4, 7, 10});
    CHECK(sites_of("\"infinite\"") == Numbers{infinite_sites});
    CHECK(sites_of("[8, \"infinite\"]") == Numbers{8, infinite_sites});
}

TEST_CASE("wrong sites") {
    const auto check = [](const std::string& sites, const Expected& expected) {
        check_only_error(with_sites(sites), expected);
    };
    check("8.0", {ErrorCode::wrong_type, "c.toml:3:9", {"'sites'", "8.0", "as in 8"}});
    check("[8, 9.5]", {ErrorCode::wrong_type, "c.toml:3:13", {"9.5", "a whole number"}});
    check("0", {ErrorCode::bad_value, "c.toml:3:9", {"the number 0", "from 1 to 1000000"}});
    check("[8, -3]", {ErrorCode::bad_value, "c.toml:3:13", {"the number -3"}});
    check("1000001", {ErrorCode::bad_value, "c.toml:3:9", {"1000001"}});
    check("[]", {ErrorCode::bad_value, "c.toml:3:9", {"an empty list"}});
    check("true", {ErrorCode::wrong_type, "c.toml:3:9", {"true", "\"infinite\""}});
    check("1979-05-27", {ErrorCode::wrong_type, "c.toml:3:9", {"a date or time"}});
    check("\"infinit\"", {ErrorCode::unknown_name, "c.toml:3:9", {"infinit", "'infinite'"}});
    check("\"many\"", {ErrorCode::unknown_name, "c.toml:3:9", {"infinite, or a whole number"}});
    check("[8, [9]]", {ErrorCode::wrong_type, "c.toml:3:13", {"a list", "whole number"}});
    check("[8, 8]", {ErrorCode::bad_value, "c.toml:3:13", {"the value 8 twice"}});
    check("{ from = 4, to = 9, count = 3 }", {ErrorCode::bad_value, "c.toml:3:9", {"6.5"}});
    check("{ from = 4, to = 9, step = 0 }", {ErrorCode::bad_value, "c.toml:3:36", {"'step'"}});
}

TEST_CASE("a ring needs three sites, an open chain does not") {
    check_only_error(with_sites("[2, 8]"),
                     {ErrorCode::bad_chain,
                      "c.toml:3:10",
                      {"a ring of 2 sites;", "3 sites", "one or two", "\"open\""}});
    check_only_error(with_sites("1"),
                     {ErrorCode::bad_chain, "c.toml:3:9", {"a ring of 1 site;", "one or two"}});
    CHECK(case_of(changed("[8, 12]", "2\nboundary = \"open\"")).axis("sites").values == Numbers{2});
}

TEST_CASE("a family's bonds coincide on a short ring") {
    const std::string text = changed("\"xx\"", "\"j1j2\"\nJ2 = 0.5", with_sites("[4, 8]"));
    check_only_error(text,
                     {ErrorCode::bad_chain, "c.toml:3:10", {"ring of 4", "j1j2", "at least 5"}});
    CHECK(case_of(changed("[4, 8]", "[4, 8]\ncoincident = \"add\"", text)).coincident ==
          Coincident::add);
    CHECK(case_of(changed("[4, 8]", "[4, 8]\ncoincident = \"once\"", text)).coincident ==
          Coincident::once);
    CHECK(case_of(changed("[4, 8]", "[4, 8]\nboundary = \"open\"", text)).axes.size() == 4);
    check_only_error(with_system("coincident = \"ad\""),
                     {ErrorCode::unknown_name, "c.toml:4:14", {"\"ad\"", "'add'"}});
}

TEST_CASE("the boundary") {
    CHECK(case_of(with_system("boundary = \"open\"")).boundary == BoundaryKind::open);
    CHECK(case_of(with_system("boundary = \"periodic\"")).twist == 0.0);
    CHECK(case_of(with_system("boundary = \"antiperiodic\"")).twist == pi);
    CHECK(case_of(with_system("boundary = { twist = 0.4 }")).twist == 0.4);
    CHECK(case_of(with_system("boundary = { twist = 0 }")).twist == 0.0);
    CHECK(case_of(with_system("boundary = { twist = -7 }")).twist == -7.0);
    const auto check = [](const std::string& boundary, const Expected& expected) {
        check_only_error(with_system("boundary = " + boundary), expected);
    };
    check("\"perodic\"", {ErrorCode::unknown_name, "c.toml:4:12", {"perodic", "'periodic'"}});
    check("\"ring\"",
          {ErrorCode::unknown_name,
           "c.toml:4:12",
           {"allowed: periodic, open, antiperiodic, or { twist = radians }"}});
    check("1", {ErrorCode::wrong_type, "c.toml:4:12", {"the number 1", "twist"}});
    check("{ twist = inf }", {ErrorCode::bad_value, "c.toml:4:22", {"inf", "finite"}});
    check("{ twist = \"pi\" }", {ErrorCode::wrong_type, "c.toml:4:22", {"\"pi\"", "a number"}});
    check("{}",
          {ErrorCode::missing_key, "c.toml:4:12", {"no 'twist'", "expected { twist = radians }"}});
    check("{ twist = 1, phi = 2 }", {ErrorCode::unknown_key, "c.toml:4:25", {"'phi'"}});
}

TEST_CASE("the spin, as a fraction or a number, is no grid parameter") {
    CHECK(case_of(small_case).two_s == 1);
    const auto two_s = [](const std::string& spin) {
        const Case c = case_of(with_system("spin = " + spin));
        CHECK(c.axes.size() == 3);
        return c.two_s;
    };
    CHECK(two_s("\"1/2\"") == 1);
    CHECK(two_s("\"1\"") == 2);
    CHECK(two_s("\"3/2\"") == 3);
    CHECK(two_s("\"15/2\"") == 15);
    CHECK(two_s("0.5") == 1);
    CHECK(two_s("1") == 2);
    CHECK(two_s("1.0") == 2);
    CHECK(two_s("7.5") == 15);
    CHECK(case_of(small_case, {{"spin", "1"}}).two_s == 2);
    CHECK(case_of(small_case, {{"spin", "3/2"}}).two_s == 3);
    const auto check = [](const std::string& spin, const Expected& expected) {
        check_only_error(with_system("spin = " + spin), expected);
    };
    check("\"2/2\"", {ErrorCode::unknown_name, "c.toml:4:8", {"\"2/2\"", "1/2, 1, 3/2"}});
    check("\"8\"", {ErrorCode::unknown_name, "c.toml:4:8", {"\"8\"", "15/2"}});
    check("0", {ErrorCode::bad_value, "c.toml:4:8", {"0", "0.5, 1, 1.5"}});
    check("0.7", {ErrorCode::bad_value, "c.toml:4:8", {"0.7", "0.5, 1, 1.5"}});
    check("8", {ErrorCode::bad_value, "c.toml:4:8", {"the number 8", "7.5"}});
    check("-1", {ErrorCode::bad_value, "c.toml:4:8", {"-1"}});
    check("nan", {ErrorCode::bad_value, "c.toml:4:8", {"nan", "finite"}});
    check("[1, 2]", {ErrorCode::wrong_type, "c.toml:4:8", {"a list", "1/2, 1"}});
    check_only_error(with_system("spn = 1"),
                     {ErrorCode::unknown_key, "c.toml:4:1", {"'spn'", "did you mean 'spin'"}});
}

TEST_CASE("temperatures are a grid parameter, and above 0") {
    CHECK_FALSE(case_of(small_case).has_temperature());
    const auto at = [](const std::string& temperature) {
        return changed("ground_energy", "energy", with_system("temperature = " + temperature));
    };
    const Case c = case_of(at("[0.5, 1]"));
    CHECK(c.has_temperature());
    CHECK(c.axes[1].name == "temperature");
    CHECK(c.axis("temperature").values == Numbers{0.5, 1.0});
    CHECK(case_of(at("2")).axis("temperature").values == Numbers{2.0});
    CHECK(case_of(at("{ from = 0.1, to = 0.3, step = 0.1 }")).axis("temperature").values ==
          Numbers{0.1, 0.2, 0.3});
    CHECK(case_of(changed("ground_energy", "energy"), {{"temperature", "[0.3, 0.2]"}})
              .axis("temperature")
              .values == Numbers{0.3, 0.2});
    const std::string instead = "for the ground state leave it out";
    const auto check = [&](const std::string& temperature, const Expected& expected) {
        check_only_error(at(temperature), expected);
    };
    check("0", {ErrorCode::bad_value, "c.toml:4:15", {"'temperature'", "value 0", instead}});
    check("[0.5, -1]", {ErrorCode::bad_value, "c.toml:4:21", {"value -1", instead}});
    check("{ from = 0, to = 1, count = 3 }",
          {ErrorCode::bad_value, "c.toml:4:15", {"value 0", instead}});
    check("1e-200", {ErrorCode::bad_value, "c.toml:4:15", {"between 1e-100 and 1e100"}});
    check("inf", {ErrorCode::bad_value, "c.toml:4:15", {"inf", "finite"}});
    check("\"cold\"", {ErrorCode::wrong_type, "c.toml:4:15", {"\"cold\"", "a number"}});
    check("[0.5, 0.5]", {ErrorCode::bad_value, "c.toml:4:21", {"0.5 twice"}});
    check_only_error(
        with_system("temprature = 0.5"),
        {ErrorCode::unknown_key, "c.toml:4:1", {"'temprature'", "did you mean 'temperature'"}});
    check_only_error(small_case +
                         "[parameters]\ntemperature = 1\n[[hamiltonian.term]]\n"
                         "operators = [\"Sz\"]\noffsets = [0]\n"
                         "coupling = { parameter = \"temperature\" }\n",
                     {ErrorCode::bad_value, "c.toml:10:1", {"'temperature'", "take another"}});
}

TEST_CASE("unknown and missing keys of [system]") {
    check_only_error(
        with_system("boundry = \"open\""),
        {ErrorCode::unknown_key, "c.toml:4:1", {"[system]", "'boundry'", "'boundary'"}});
    check_only_error(changed("sites = [8, 12]\n", ""),
                     {ErrorCode::missing_key,
                      "c.toml:2:2",
                      {"[system] has no 'sites'", "give the number of sites"}});
    check_only_error(with_system("x = 1"), {ErrorCode::unknown_key, "c.toml:4:1", {"; allowed: "}});
    check_only_error(changed("[system]\nsites = [8, 12]\n", ""),
                     {ErrorCode::missing_key, "c.toml", {"'system'"}});
    check_only_error(changed("[system]\nsites = [8, 12]\n", "system = 4\n"),
                     {ErrorCode::wrong_type, "c.toml:2:10", {"'system'", "[system]"}});
    check_only_error(changed("[system]", "[[system]]"),
                     {ErrorCode::wrong_type, "c.toml:2:1", {"a list", "[system]"}});
}

TEST_CASE("a key of the top level below a [table]") {
    const std::string hint = "is a key of the top level, and those stand above the first [table]";
    check_only_error(with_system("title = \"x\""),
                     {ErrorCode::unknown_key, "c.toml:4:1", {"[system]", "'title' " + hint}});
    check_only_error(with_system("quantity = 3"),
                     {ErrorCode::unknown_key, "c.toml:4:1", {"'quantity' " + hint}});
    check_only_error(
        small_case + "title = \"x\"\n",
        {ErrorCode::unknown_key, "c.toml:9:1", {"the quantity 'ground_energy'", hint}});
    const Errors errors =
        errors_of("[system]\nformat = 1\n" + changed("format = 1\n[system]\n", ""));
    REQUIRE(errors.size() == 2);
    CHECK(to_string(errors[0]).find("no 'format'") != std::string::npos);
    CHECK(to_string(errors[1]).find("'format' " + hint) != std::string::npos);
}

TEST_CASE("grids of numbers") {
    CHECK(couplings_of("2") == Numbers{2});
    CHECK(couplings_of("[1, 0.5]") == Numbers{1, 0.5});
    CHECK(couplings_of("{ from = 1, to = 0, count = 3 }") == Numbers{1, 0.5, 0});
    CHECK(couplings_of("{ from = 0.5, to = 0.5, count = 1 }") == Numbers{0.5});
    CHECK(couplings_of("{ from = 0.1, to = 0.3, step = 0.1 }") == Numbers{0.1, 0.2, 0.3});
    CHECK(couplings_of("{ from = 0, to = 1.2, step = 0.05 }").size() == 25);
    CHECK(couplings_of("{ from = 0, to = 1.19, step = 0.05 }").size() == 24);
    CHECK(couplings_of("{ from = 1, to = 1, step = 0.05 }") == Numbers{1});
    CHECK_FALSE(std::signbit(couplings_of("-0.0")[0]));
}

TEST_CASE("wrong grids of numbers") {
    const auto check = [](const std::string& grid, const Expected& expected) {
        check_only_error(changed("J = 1.0", "J = " + grid), expected);
    };
    check("nan", {ErrorCode::bad_value, "c.toml:6:5", {"nan", "finite"}});
    check("[1, -inf]", {ErrorCode::bad_value, "c.toml:6:9", {"-inf", "finite"}});
    check("\"one\"", {ErrorCode::wrong_type, "c.toml:6:5", {"'J' in [hamiltonian]", "\"one\""}});
    check("[1, 0.5, 1.0]", {ErrorCode::bad_value, "c.toml:6:14", {"the value 1 twice"}});
    check("{ from = 0, to = 1 }",
          {ErrorCode::missing_key, "c.toml:6:5", {"neither", "exactly one"}});
    check("{ from = 0, to = 1, step = 1, count = 2 }",
          {ErrorCode::bad_value, "c.toml:6:5", {"both", "exactly one"}});
    check("{ from = 0, count = 2 }", {ErrorCode::missing_key, "c.toml:6:5", {"no 'to'"}});
    check("{ to = 0, count = 2 }", {ErrorCode::missing_key, "c.toml:6:5", {"no 'from'"}});
    check("{ from = 0, to = 1, steps = 2, count = 3 }",
          {ErrorCode::unknown_key, "c.toml:6:25", {"'steps'", "'step'"}});
    check("{ from = 0, to = 1, step = -1 }", {ErrorCode::bad_value, "c.toml:6:32", {"above 0"}});
    check("{ from = 0, to = 1, step = inf }", {ErrorCode::bad_value, "c.toml:6:32", {"finite"}});
    check("{ from = 1, to = 0, step = 0.1 }", {ErrorCode::bad_value, "c.toml:6:5", {"no value"}});
    check("{ from = 0, to = 1, step = 1e-9 }",
          {ErrorCode::grid_too_large, "c.toml:6:5", {"100000"}});
    check("{ from = 0, to = 1, count = 100001 }",
          {ErrorCode::grid_too_large, "c.toml:6:33", {"100000"}});
    check("{ from = 0, to = 1, count = 0 }", {ErrorCode::bad_value, "c.toml:6:33", {"from 1"}});
    check("{ from = 0, to = 1, count = 1 }", {ErrorCode::bad_value, "c.toml:6:33", {"at least 2"}});
    check("{ from = 0, to = 1, count = 2.0 }", {ErrorCode::wrong_type, "c.toml:6:33", {"as in 2"}});
    check("{ from = -1e308, to = 1e308, count = 3 }",
          {ErrorCode::bad_value, "c.toml:6:5", {"spans"}});
}

TEST_CASE("ways to combine") {
    CHECK(case_of(small_case + "[grid]\ncombine = \"zip\"\n").zip);
    CHECK_FALSE(case_of(small_case + "[grid]\ncombine = \"product\"\n").zip);
    check_only_error(small_case + "[grid]\ncombine = \"zp\"\n",
                     {ErrorCode::unknown_name, "c.toml:10:11", {"\"zp\"", "'zip'"}});
    check_only_error(small_case + "[grid]\ncombin = \"zip\"\n",
                     {ErrorCode::unknown_key, "c.toml:10:1", {"'combine'"}});
    // In zipped lists a value may come back, a whole point may not.
    const std::string zip = changed("1.0", "[1, 1]", small_case + "[grid]\ncombine = \"zip\"\n");
    CHECK(case_of(zip).axis("J").values == Numbers{1, 1});
    check_only_error(changed("[8, 12]", "[8, 8]", zip),
                     {ErrorCode::bad_value, "c.toml:3:13", {"occurs twice"}});
}

TEST_CASE("tolerance and routes") {
    CHECK(case_of(small_case + "[tolerance]\nrelative = 0\n").tolerance == Tolerance{1e-10, 0.0});
    const auto check = [](const std::string& lines, const Expected& expected) {
        check_only_error(small_case + lines, expected);
    };
    check("[tolerance]\nabsolute = -1e-9\n", {ErrorCode::bad_value, "c.toml:10:12", {"0 or more"}});
    check("[tolerance]\nabsolute = inf\n", {ErrorCode::bad_value, "c.toml:10:12", {"finite"}});
    check("[tolerance]\nabsolut = 1\n", {ErrorCode::unknown_key, "c.toml:10:1", {"'absolute'"}});
    CHECK(case_of(small_case + "[routes]\n").routes.empty());
    check("[routes]\nuse = []\n", {ErrorCode::bad_value, "c.toml:10:7", {"at least one route"}});
    check("[routes]\nuse = \"dense\"\n",
          {ErrorCode::wrong_type, "c.toml:10:7", {"\"dense\"", "a list"}});
    check("[routes]\nuse = [\"dens\"]\n", {ErrorCode::unknown_name, "c.toml:10:8", {"'dense'"}});
    check("[routes]\nuse = [\"dense\", \"dense\"]\n",
          {ErrorCode::bad_value, "c.toml:10:17", {"once"}});
    check("[routes]\nuse = [7]\n", {ErrorCode::wrong_type, "c.toml:10:8", {"the number 7"}});
    check("title = 3\n", {ErrorCode::unknown_key, "c.toml:9:1", {"'title'"}});
    check_only_error("title = 3\n" + small_case,
                     {ErrorCode::wrong_type, "c.toml:1:9", {"'title'", "a text"}});
}
