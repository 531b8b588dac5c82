#include "casefile/case_text.hpp"

using namespace chainmark;
using namespace chainmark::test;

namespace {

using Numbers = std::vector<double>;

void check(const Setting& setting, const Expected& expected) {
    check_only_error(small_case, expected, {setting});
}

const std::string raw_case = R"(format = 1
[parameters]
Jxy = 1
[system]
sites = 8
[[hamiltonian.term]]
operators = ["Sz"]
offsets = [0]
coupling = { parameter = "Jxy" }
[[quantity]]
name = "gap"
)";

}  // namespace

TEST_CASE("bare names find their table") {
    CHECK(case_of(small_case, {{"sites", "9"}}).axis("sites").values == Numbers{9});
    CHECK(case_of(small_case, {{"boundary", "open"}}).boundary == BoundaryKind::open);
    CHECK(case_of(small_case, {{"boundary", "{ twist = 0.3 }"}}).twist == 0.3);
    CHECK(case_of(small_case, {{"J", "[1, 2]"}}).axis("J").values == Numbers{1, 2});
    CHECK(case_of(small_case, {{"h", "0.5"}}).axis("h").values == Numbers{0.5});
    CHECK(case_of(small_case, {{"absolute", "1e-3"}}).tolerance == Tolerance{1e-3, 1e-10});
    CHECK(case_of(small_case, {{"relative", "1e-3"}}).tolerance == Tolerance{1e-10, 1e-3});
    CHECK(case_of(small_case, {{"use", "[\"dense\"]"}}).routes == std::vector{RouteId::dense});
    CHECK(case_of(small_case, {{"family", "tfim"}}).family->name == "tfim");
    CHECK(case_of(small_case, {{"title", "short"}}).title == "short");
    CHECK(case_of(small_case, {{"title", "\"two words\""}}).title == "two words");
    CHECK(case_of(raw_case, {{"Jxy", "3"}}).axis("Jxy").values == Numbers{3});
    CHECK(case_of(small_case, {{"coincident", "once"}}).coincident == Coincident::once);
    CHECK(case_of(small_case, {{"combine", "zip"}}).zip);
    CHECK(case_of(small_case, {{"spin", "3/2"}}).two_s == 3);
    check({"spin", "2/3"}, {ErrorCode::unknown_name, "--set spin=2/3", {"1/2, 1, 3/2"}});
}

TEST_CASE("a name that the case gives comes before the keys of tables") {
    const std::string text =
        changed("\"Jxy\"", "\"spin\"", changed("Jxy = 1", "spin = 1", raw_case));
    CHECK(case_of(text, {{"spin", "3"}}).axis("spin").values == Numbers{3});
}

TEST_CASE("dotted keys are taken as they stand") {
    CHECK(case_of(small_case, {{"system.sites", "9"}}).axis("sites").values == Numbers{9});
    CHECK(case_of(small_case, {{"system.spin", "1/2"}}).axes.size() == 3);
    CHECK(case_of(small_case, {{"hamiltonian.h", "[0, 1]"}}).axis("h").values == Numbers{0, 1});
    CHECK(case_of(small_case, {{"grid.combine", "zip"}}).zip);
    CHECK(case_of(small_case, {{"tolerance.absolute", "0"}}).tolerance.absolute == 0.0);
    CHECK(case_of(raw_case, {{"parameters.Jxy", "4"}}).axis("Jxy").values == Numbers{4});
}

TEST_CASE("later settings win, and one may need another") {
    CHECK(case_of(small_case, {{"sites", "9"}, {"sites", "10"}}).axis("sites").values ==
          Numbers{10});
    const Case c = case_of(small_case, {{"Delta", "0.5"}, {"family", "xxz"}});
    CHECK(c.axis("Delta").values == Numbers{0.5});
}

TEST_CASE("a set axis keeps its rank, a new one goes last") {
    const std::string text = changed("J = 1.0", "h = 0.5\nJ = 1.0");
    const Case kept = case_of(text, {{"h", "[1, 2]"}});
    CHECK(kept.axes[1].name == "h");
    CHECK(kept.axes[2].name == "J");
    CHECK(to_string(kept.axes[1].where) == "--set h=[1, 2]");
    const Case last = case_of(changed("[system]\nsites = [8, 12]\n", "", small_case),
                              {{"h", "[1, 2]"}, {"sites", "8"}});
    CHECK(last.axes[0].name == "J");
    CHECK(last.axes[1].name == "h");
    CHECK(last.axes[2].name == "sites");
}

TEST_CASE("a setting that means nothing") {
    check({"site", "9"}, {ErrorCode::bad_option, "--set site=9", {"'site'", "'sites'"}});
    check({"", "9"}, {ErrorCode::bad_option, "--set =9", {"''"}});
    check({"sistem.sites", "9"}, {ErrorCode::bad_option, "--set sistem.sites=9", {"'system'"}});
    check({"system.", "9"}, {ErrorCode::bad_option, "--set system.=9", {"SECTION.NAME"}});
    check({"system.boundary.twist", "9"},
          {ErrorCode::bad_option, "--set system.boundary.twist=9", {"two parts, SECTION.NAME"}});
    check({"a.b.c", "1"},
          {ErrorCode::bad_option, "--set a.b.c=1", {"'a.b.c'", "two parts, SECTION.NAME"}});
    check({"format", "2"}, {ErrorCode::bad_option, "--set format=2", {"'format'"}});
    const Errors errors = errors_of("grid = 3\n" + small_case, {{"grid.combine", "zip"}});
    REQUIRE(errors.size() == 2);
    CHECK(to_string(errors[1]) ==
          "--set grid.combine=zip: 'grid' is no table in the file; expected a table [grid]");
}

TEST_CASE("a value that is no TOML") {
    const std::string hint = "write it as in the file";
    check({"sites", "[8, 12"}, {ErrorCode::bad_option, "--set sites=[8, 12", {"\"[8, 12\"", hint}});
    check({"sites", ""}, {ErrorCode::bad_option, "--set sites=", {hint}});
    check({"sites", "8 9"}, {ErrorCode::bad_option, "--set sites=8 9", {hint}});
    check({"sites", "8\ny = 9"}, {ErrorCode::bad_option, "--set sites=8\ny = 9", {hint}});
}

TEST_CASE("what a set value does wrong is told of the setting") {
    check({"sites", "2"}, {ErrorCode::bad_chain, "--set sites=2", {"ring of 2"}});
    check({"sites", "[8, 2.5]"}, {ErrorCode::wrong_type, "--set sites=[8, 2.5]", {"2.5"}});
    check({"boundary", "opn"}, {ErrorCode::unknown_name, "--set boundary=opn", {"'open'"}});
    check({"system.foo", "1"}, {ErrorCode::unknown_key, "--set system.foo=1", {"'foo'"}});
    check({"system.title", "1"},
          {ErrorCode::unknown_key, "--set system.title=1", {"'title'; allowed: sites"}});
    check({"J", "inf"}, {ErrorCode::bad_value, "--set J=inf", {"finite"}});
    check({"J", "x"}, {ErrorCode::wrong_type, "--set J=x", {"the text \"x\""}});
    check({"Delta", "1"}, {ErrorCode::unknown_key, "--set Delta=1", {"'Delta'"}});
    check({"parameters.Jz", "1"}, {ErrorCode::bad_value, "--set parameters.Jz=1", {"no term"}});
    CHECK(to_string(errors_of(small_case, {{"J", "x"}})[0]).rfind("--set J=x: 'J'", 0) == 0);
}

TEST_CASE("errors of the file come first, then those of settings") {
    const Errors errors = errors_of(changed("J = 1.0", "J = true"), {{"h", "x"}, {"nothing", "1"}});
    REQUIRE(errors.size() == 3);
    CHECK(to_string(errors[0].where) == "c.toml:6:5");
    CHECK(to_string(errors[1].where) == "--set h=x");
    CHECK(to_string(errors[2].where) == "--set nothing=1");
}
