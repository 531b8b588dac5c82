#include "casefile/case_text.hpp"

using namespace chainmark;
using namespace chainmark::test;

namespace {

/// Line 6 is the term; `rest` follows from line 7 on.
std::string with_term(const std::string& rest, const std::string& sites = "8") {
    return "format = 1\n[system]\nsites = " + sites +
           "\n[[quantity]]\nname = \"gap\"\n[[hamiltonian.term]]\n" + rest;
}

const std::string pair = "operators = [\"Sz\", \"Sz\"]\noffsets = [0, 1]\n";

CaseTerm term_of(const std::string& rest) {
    return case_of(with_term(rest)).terms.at(0);
}

void check(const std::string& rest, const Expected& expected) {
    check_only_error(with_term(rest), expected);
}

using Numbers = std::vector<std::complex<double>>;

Numbers numbers_of(const std::string& coupling) {
    return std::get<Numbers>(term_of(pair + "coupling = " + coupling).coupling);
}

SiteMatrix matrix_of(const std::string& name) {
    return term_of("operators = [\"" + name + "\"]\noffsets = [0]\ncoupling = 1").factors.at(0);
}

}  // namespace

TEST_CASE("site operators and their powers") {
    CHECK(matrix_of("Sx").entries == SiteMatrix::sx().entries);
    CHECK(matrix_of("Sy").entries == SiteMatrix::sy().entries);
    CHECK(matrix_of("Sz").entries == SiteMatrix::sz().entries);
    CHECK(matrix_of("S+").entries == SiteMatrix::raising().entries);
    CHECK(matrix_of("S-").entries == SiteMatrix::lowering().entries);
    CHECK(matrix_of("I").entries == SiteMatrix::identity().entries);
    // (Sz)^2 = 1/4 and (S+)^2 = 0 for spin 1/2; Sz^20 = 2^-20 in both states.
    CHECK(matrix_of("Sz^2").entries == SiteMatrix{{0.25, 0.0, 0.0, 0.25}}.entries);
    CHECK(matrix_of("S+^2").entries == SiteMatrix::zero().entries);
    CHECK(matrix_of("Sz^20").entries == SiteMatrix{{0x1p-20, 0.0, 0.0, 0x1p-20}}.entries);
}

TEST_CASE("wrong operators") {
    const std::string rest = "\noffsets = [0]\ncoupling = 1";
    check("operators = [\"S_x\"]" + rest,
          {ErrorCode::unknown_name, "c.toml:7:14", {"S_x", "'Sx'"}});
    check("operators = [\"Sz^0\"]" + rest,
          {ErrorCode::bad_value, "c.toml:7:14", {"Sz^0", "1 to 20"}});
    check("operators = [\"Sz^21\"]" + rest, {ErrorCode::bad_value, "c.toml:7:14", {"Sz^21"}});
    check("operators = [\"Sz^\"]" + rest, {ErrorCode::bad_value, "c.toml:7:14", {"Sz^"}});
    check("operators = [\"Sz^2^2\"]" + rest, {ErrorCode::bad_value, "c.toml:7:14", {"Sz^2^2"}});
    check("operators = [3]" + rest, {ErrorCode::wrong_type, "c.toml:7:14", {"the number 3"}});
    check("operators = []" + rest, {ErrorCode::bad_value, "c.toml:7:13", {"an empty list"}});
    check("operators = \"Sz\"" + rest,
          {ErrorCode::wrong_type, "c.toml:7:13", {"\"Sz\"", "a list"}});
    check("offsets = [0]\ncoupling = 1", {ErrorCode::missing_key, "c.toml:6:1", {"'operators'"}});
}

TEST_CASE("offsets or sites") {
    CHECK(term_of(pair + "coupling = 1").offsets == std::vector<int>{0, 1});
    const CaseTerm fixed = term_of("operators = [\"Sz\", \"Sz\"]\nsites = [7, 3]\ncoupling = 1");
    CHECK(fixed.fixed);
    CHECK(fixed.offsets == std::vector<int>{7, 3});
    const std::string head = "operators = [\"Sz\", \"Sz\"]\ncoupling = 1\n";
    check(head, {ErrorCode::missing_key, "c.toml:6:1", {"neither 'offsets' nor 'sites'"}});
    check(head + "offsets = [0, 1]\nsites = [0, 1]",
          {ErrorCode::bad_value, "c.toml:10:1", {"both 'offsets' and 'sites'"}});
    check(head + "offsets = [0]",
          {ErrorCode::bad_value, "c.toml:6:1", {"2 operators and 1 offset;"}});
    check(head + "offsets = [1, 2]", {ErrorCode::bad_value, "c.toml:9:11", {"starts at 1"}});
    check(head + "offsets = [0, -1]", {ErrorCode::bad_value, "c.toml:9:15", {"-1"}});
    check(head + "offsets = [0, 1.0]", {ErrorCode::wrong_type, "c.toml:9:15", {"as in 1"}});
    check(head + "offsets = 1", {ErrorCode::wrong_type, "c.toml:9:11", {"a list"}});
}

TEST_CASE("couplings that are numbers") {
    CHECK(numbers_of("1") == Numbers{1.0});
    CHECK(numbers_of("-0.5") == Numbers{-0.5});
    CHECK(numbers_of("{ re = 0.5, im = -1 }") == Numbers{{0.5, -1.0}});
    CHECK(numbers_of("[1, 2, 3, 4, 5, 6, 7, { re = 8, im = 1 }]").back() ==
          std::complex<double>(8.0, 1.0));
    CHECK(numbers_of("[0.5]") == Numbers{0.5});
}

TEST_CASE("wrong numbers as couplings") {
    const auto wrong = [](const std::string& coupling, const Expected& expected) {
        check(pair + "coupling = " + coupling, expected);
    };
    check(pair, {ErrorCode::missing_key, "c.toml:6:1", {"no 'coupling'"}});
    wrong("nan", {ErrorCode::bad_value, "c.toml:9:12", {"nan", "finite"}});
    wrong("{ re = inf, im = 0 }", {ErrorCode::bad_value, "c.toml:9:19", {"inf", "finite"}});
    wrong("{ re = 1 }", {ErrorCode::missing_key, "c.toml:9:12", {"'im'"}});
    wrong("{ re = 1, im = 2, x = 3 }", {ErrorCode::unknown_key, "c.toml:9:30", {"'x'"}});
    wrong("{}", {ErrorCode::wrong_type, "c.toml:9:12", {"an empty table", "{ re, im }"}});
    wrong("\"J\"", {ErrorCode::wrong_type, "c.toml:9:12", {"\"J\"", "parameter"}});
    wrong("[]", {ErrorCode::bad_value, "c.toml:9:12", {"an empty list"}});
    wrong("[1, \"a\"]", {ErrorCode::wrong_type, "c.toml:9:16", {"\"a\""}});
    wrong("[1, 2]",
          {ErrorCode::bad_value, "c.toml:9:12", {"2 numbers", "8 placements", "ring of 8"}});
    check("operators = [\"Sz\"]\nsites = [3]\ncoupling = [1, 2]",
          {ErrorCode::bad_value, "c.toml:9:12", {"2 numbers", "1 placement on"}});
}

TEST_CASE("a list per placement fits the open chain") {
    const std::string text = with_term(pair + "coupling = [1, 2, 3]", "4\nboundary = \"open\"");
    CHECK(std::get<Numbers>(case_of(text).terms[0].coupling).size() == 3);
}

TEST_CASE("couplings that are drawn") {
    const auto random = std::get<RandomCoupling>(
        term_of(pair + "coupling = { uniform = [-1, 0.5], seed = 7 }").coupling);
    CHECK(random.low == -1.0);
    CHECK(random.high == 0.5);
    CHECK(std::get<std::uint64_t>(random.seed) == 7);
    const auto wrong = [](const std::string& coupling, const Expected& expected) {
        check(pair + "coupling = { " + coupling + " }", expected);
    };
    wrong("uniform = [-1, 1]", {ErrorCode::missing_key, "c.toml:9:12", {"'seed'"}});
    wrong("uniform = [1, -1], seed = 1", {ErrorCode::bad_value, "c.toml:9:24", {"low <= high"}});
    wrong("uniform = [-1e308, 1e308], seed = 1", {ErrorCode::bad_value, "c.toml:9:24", {"finite"}});
    wrong("uniform = [1], seed = 1", {ErrorCode::bad_value, "c.toml:9:24", {"holds 1 number;"}});
    wrong("uniform = [1, nan], seed = 1", {ErrorCode::bad_value, "c.toml:9:28", {"nan"}});
    wrong("uniform = 1, seed = 1", {ErrorCode::wrong_type, "c.toml:9:24", {"[low, high]"}});
    wrong("uniform = [0, 1], seed = -1", {ErrorCode::bad_value, "c.toml:9:39", {"-1"}});
    wrong("uniform = [0, 1], seed = 1.5", {ErrorCode::wrong_type, "c.toml:9:39", {"1.5"}});
    wrong("uniform = [0, 1], seed = \"s\"", {ErrorCode::unknown_name, "c.toml:9:39", {"\"s\""}});
    wrong("uniform = [0, 1], sed = 1, seed = 2",
          {ErrorCode::unknown_key, "c.toml:9:32", {"'sed'"}});
    wrong("parameter = \"s\"", {ErrorCode::unknown_name, "c.toml:9:26", {"\"s\""}});
    wrong("factor = 2", {ErrorCode::missing_key, "c.toml:9:12", {"no 're', 'parameter'"}});
}

TEST_CASE("a seed parameter holds whole numbers") {
    const auto with_seed = [](const std::string& values) {
        return with_term(
            pair + "coupling = { uniform = [0, 1], seed = \"s\" }\n[parameters]\ns = " + values);
    };
    CHECK(case_of(with_seed("[0, 3.0]")).axis("s").values.size() == 2);
    check_only_error(with_seed("[1, 2.5]"), {ErrorCode::bad_value, "c.toml:11:9", {"'s'", "2.5"}});
    check_only_error(with_seed("-1"),
                     {ErrorCode::bad_value, "c.toml:11:5", {"-1", "whole number"}});
    check_only_error(with_seed("1e17"), {ErrorCode::bad_value, "c.toml:11:5", {"2^53"}});
}

TEST_CASE("a parameter's factor") {
    const auto with_factor = [](const std::string& factor) {
        return with_term(pair + "coupling = { parameter = \"J\", factor = " + factor +
                         " }\n[parameters]\nJ = 1");
    };
    CHECK(std::get<ParameterCoupling>(case_of(with_factor("-2")).terms[0].coupling).factor == -2.0);
    check_only_error(with_factor("inf"), {ErrorCode::bad_value, "c.toml:9:40", {"inf"}});
    check_only_error(with_factor("\"2\""), {ErrorCode::wrong_type, "c.toml:9:40", {"\"2\""}});
}

TEST_CASE("other keys of a term") {
    CHECK(term_of(pair + "coupling = 1\nadd_conjugate = true").add_conjugate);
    check(pair + "coupling = 1\nadd_conjugate = 1",
          {ErrorCode::wrong_type, "c.toml:10:17", {"the number 1", "true or false"}});
    check(pair + "coupling = 1\noffset = [0]",
          {ErrorCode::unknown_key, "c.toml:10:1", {"'offset'", "'offsets'"}});
}

TEST_CASE("what the infinite chain cannot carry") {
    const auto check_infinite = [](const std::string& rest, const std::string& reason) {
        check_only_error(with_term(rest, "\"infinite\""),
                         {ErrorCode::bad_value, "c.toml:6:1", {reason, "infinite chain"}});
    };
    check_infinite("operators = [\"Sz\"]\nsites = [0]\ncoupling = 1", "fixed 'sites'");
    check_infinite(pair + "coupling = { uniform = [0, 1], seed = 1 }", "random couplings");
    check_infinite(pair + "coupling = [1, 2]", "a list of couplings");
    CHECK(case_of(with_term(pair + "coupling = [1]", "\"infinite\"")).terms.size() == 1);
}
