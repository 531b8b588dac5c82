#include "chainmark/cli/example.hpp"

#include <map>

#include <fmt/format.h>

#include "chainmark/base/words.hpp"
#include "chainmark/operators/hamiltonian.hpp"

namespace chainmark::cli {
namespace {

/// Values inside the interesting phases; 1 for any other parameter.
double example_value(const std::string& parameter) {
    static const std::map<std::string, double> values = {
        {"gamma", 0.5}, {"Delta", 0.5}, {"delta", 0.3}, {"theta", 0.3}, {"J2", 0.5}};
    const auto at = values.find(parameter);
    return at == values.end() ? 1.0 : at->second;
}

Error unknown_family(const std::string& name) {
    std::vector<std::string> names;
    for (const Family& family : families()) {
        names.push_back(family.name);
    }
    return {
        ErrorCode::unknown_name, {}, "no family is called '" + name + "'", suggestion(name, names)};
}

}  // namespace

Checked<std::string> example_case(const std::string& family_name) {
    const Family* family = find_family(family_name);
    if (family == nullptr) {
        return tl::unexpected(Errors{unknown_family(family_name)});
    }
    std::string parameters;
    for (const FamilyParameter& parameter : family->parameters) {
        parameters += fmt::format("{:<6} = {:.1f}  # {}\n",
                                  parameter.name,
                                  example_value(parameter.name),
                                  parameter.sentence);
    }
    const std::string spin =
        family->two_s ? fmt::format("spin     = \"{}\"\n", spin_text(*family->two_s)) : "";
    // So many that the full matrix is still small: 3^6 states of spin 1, 2^8 of spin 1/2.
    const int sites = family->two_s.value_or(1) > 1 ? 6 : 8;
    return fmt::format(R"(# H = {formula}
# {remark}
format = 1
title  = "{name}: {sites} sites in a field"

[system]
sites    = {sites}  # a number, a list, "infinite", or {{ from = 4, to = 12, step = 2 }}
boundary = "periodic"
{spin}
[hamiltonian]
family = "{name}"
{parameters}h      = {{ from = 0.0, to = 1.0, count = 5 }}  # uniform field

[[quantity]]
name = "ground_energy"

[[quantity]]
name = "gap"

[[quantity]]
name = "magnetization"

[[quantity]]
name     = "spin_correlation"
axes     = "zz"
distance = [1, 2]
)",
                       fmt::arg("formula", family->formula),
                       fmt::arg("remark", family->remark),
                       fmt::arg("name", family->name),
                       fmt::arg("spin", spin),
                       fmt::arg("sites", sites),
                       fmt::arg("parameters", parameters));
}

}  // namespace chainmark::cli
