#include <fmt/format.h>

#include "casefile/case_text.hpp"

using namespace chainmark;
using namespace chainmark::test;

namespace {

const std::string raw_case = R"(format = 1
[system]
sites = 8
[parameters]
Jxy = [0.5, 1.0]
[hamiltonian]
[[hamiltonian.term]]
operators = ["S+", "S-"]
offsets = [0, 1]
coupling = { parameter = "Jxy" }
add_conjugate = true
[[quantity]]
name = "gap"
)";

}  // namespace

TEST_CASE("every family is read by its name and its parameters") {
    for (const Family& family : families()) {
        std::string lines = "family = \"" + family.name + "\"";
        for (const FamilyParameter& parameter : family.parameters) {
            lines += "\n" + parameter.name + " = 1";
        }
        const std::string spin =
            family.two_s ? "\nspin = \"" + spin_text(*family.two_s) + "\"" : "";
        const Case c = case_of(
            changed("[8, 12]", "[8, 12]" + spin, changed("family = \"xx\"\nJ = 1.0", lines)));
        REQUIRE(c.family != nullptr);
        CHECK(c.family->name == family.name);
        CHECK(c.axes.size() == family.parameters.size() + 2);
    }
}

TEST_CASE("a family has to exist on the chain") {
    const std::string blbq = changed("\"xx\"", "\"blbq\"\ntheta = 0.3");
    check_only_error(blbq, {ErrorCode::bad_chain, "c.toml:3:10", {"'blbq'", "it needs spin 1"}});
    CHECK(case_of(changed("[8, 12]", "[8, 12]\nspin = 1", blbq)).two_s == 2);
    const std::string far = changed("\"xx\"", "\"inverse_square\"");
    CHECK(case_of(far).family->periodic_only);
    check_only_error(changed("[8, 12]", "8\nboundary = \"open\"", far),
                     {ErrorCode::bad_chain, "c.toml:3:9", {"open chain", "a periodic ring"}});
}

TEST_CASE("wrong families and parameters") {
    check_only_error(changed("\"xx\"", "\"xxzz\""),
                     {ErrorCode::unknown_name, "c.toml:5:10", {"\"xxzz\"", "did you mean 'xxz'"}});
    check_only_error(changed("\"xx\"", "7"),
                     {ErrorCode::wrong_type, "c.toml:5:10", {"the number 7"}});
    check_only_error(changed("\"xx\"", "\"xxz\""),
                     {ErrorCode::missing_key, "c.toml:4:2", {"'xxz'", "'Delta'", "anisotropy"}});
    check_only_error(changed("J = 1.0", "J = 1.0\nDelta = 2"),
                     {ErrorCode::unknown_key, "c.toml:7:1", {"'Delta'", "allowed: family, J, h"}});
    check_only_error(changed("J = 1.0\n", "j = 1.0\nJ = 1.0\n"),
                     {ErrorCode::unknown_key, "c.toml:6:1", {"'j'"}});
}

TEST_CASE("what only a family gives a meaning needs one") {
    check_only_error(changed("[hamiltonian]", "[hamiltonian]\nh = 0.5", raw_case),
                     {ErrorCode::unknown_key, "c.toml:7:1", {"'h' without a family", "[\"Sz\"]"}});
    check_only_error(changed("[hamiltonian]", "[hamiltonian]\nDelta = 0.5", raw_case),
                     {ErrorCode::unknown_key, "c.toml:7:1", {"'Delta' without a family"}});
    check_only_error(changed("[hamiltonian]", "[hamiltonian]\nfamly = \"xx\"", raw_case),
                     {ErrorCode::unknown_key, "c.toml:7:1", {"'famly'", "'family'"}});
    check_only_error(
        changed("[hamiltonian]", "[hamiltonian]\nroutes = 1", raw_case),
        {ErrorCode::unknown_key, "c.toml:7:1", {"'routes' is a key of the top level"}});
    check_only_error(changed("[hamiltonian]", "[hamiltonian]\nx = 1", raw_case),
                     {ErrorCode::unknown_key, "c.toml:7:1", {"'x'; allowed: family, h, term"}});
}

TEST_CASE("a Hamiltonian needs a family or a term") {
    check_only_error(changed("family = \"xx\"\nJ = 1.0\n", ""),
                     {ErrorCode::missing_key, "c.toml:4:2", {"neither 'family' nor a term"}});
    check_only_error(changed("[hamiltonian]\nfamily = \"xx\"\nJ = 1.0\n", ""),
                     {ErrorCode::missing_key, "c.toml", {"'hamiltonian'"}});
    check_only_error(changed("family = \"xx\"\nJ = 1.0\n", "term = 3\n"),
                     {ErrorCode::wrong_type, "c.toml:5:8", {"[[hamiltonian.term]]"}});
    check_only_error(changed("family = \"xx\"\nJ = 1.0\n", "term = []\n"),
                     {ErrorCode::missing_key, "c.toml:4:2", {"nor a term"}});
}

TEST_CASE("terms alone: no family, no field axis") {
    const Case c = case_of(raw_case);
    CHECK(c.family == nullptr);
    REQUIRE(c.axes.size() == 2);
    CHECK(c.axes[0].name == "sites");
    CHECK(c.axes[1].name == "Jxy");
}

TEST_CASE("names of parameters") {
    const auto check = [](const std::string& name, const Expected& expected) {
        std::string text = changed("Jxy = [", name + " = [", raw_case);
        const std::string bare = name.front() == '"' ? name : "\"" + name + "\"";
        check_only_error(changed("\"Jxy\"", bare, text), expected);
    };
    check("sites", {ErrorCode::bad_value, "c.toml:5:1", {"'sites'", "name already"}});
    check("h", {ErrorCode::bad_value, "c.toml:5:1", {"'h'", "name already"}});
    check("1J", {ErrorCode::bad_value, "c.toml:5:1", {"'1J'", "no digit"}});
    check("J-1", {ErrorCode::bad_value, "c.toml:5:1", {"'J-1'", "letters"}});
    check("\"\"", {ErrorCode::bad_value, "c.toml:5:1", {"''", "letters"}});
    const std::string family =
        changed("[hamiltonian]", "[hamiltonian]\nfamily=\"xx\"\nJ = 1", raw_case);
    check_only_error(changed("\"Jxy\"", "\"J\"", changed("Jxy = ", "J = ", family)),
                     {ErrorCode::bad_value, "c.toml:5:1", {"'J'", "name already"}});
    CHECK(case_of(changed("\"Jxy\"", "\"J\"", changed("Jxy = ", "J = ", raw_case))).axes[1].name ==
          "J");
    CHECK(case_of(family).axes.size() == 4);
}

TEST_CASE("parameters that no term uses, and those that do not exist") {
    check_only_error(changed("Jxy = [0.5, 1.0]", "Jxy = 1\nJz = 2", raw_case),
                     {ErrorCode::bad_value,
                      "c.toml:6:1",
                      {"'Jz' is used by no term",
                       "remove it, or use it in a [[hamiltonian.term]]",
                       "coupling = { parameter = \"Jz\" }"}});
    check_only_error(
        changed("[hamiltonian]", "[parameters]\nJz = 2\n[hamiltonian]"),
        {ErrorCode::bad_value, "c.toml:5:1", {"'Jz' is used by no term", "remove it"}});
    check_only_error(changed("\"Jxy\"", "\"Jyx\"", raw_case),
                     {ErrorCode::unknown_name, "c.toml:10:26", {"\"Jyx\"", "did you mean 'Jxy'"}});
    check_only_error(changed("[parameters]\nJxy = [0.5, 1.0]\n", "", raw_case),
                     {ErrorCode::unknown_name, "c.toml:8:26", {"add [parameters] with Jxy"}});
}

TEST_CASE("too many parameters are refused") {
    std::string lines;
    for (int i = 0; i < 101; ++i) {
        lines += fmt::format("p{} = 1\n", i);
    }
    check_only_error(changed("[hamiltonian]", "[parameters]\n" + lines + "[hamiltonian]"),
                     {ErrorCode::grid_too_large, "c.toml:4:2", {"101 names", "at most 100"}});
}
