#include "chainmark/cli/show_case.hpp"

#include <algorithm>
#include <set>

#include <fmt/format.h>

#include "chainmark/cli/sources.hpp"
#include "chainmark/formats/numbers.hpp"
#include "chainmark/plan/plan.hpp"
#include "chainmark/report/text_layout.hpp"
#include "chainmark/report/words.hpp"
#include "chainmark/sector/symmetry.hpp"

namespace chainmark::cli {
namespace {

constexpr std::size_t most_strings = 60;

/// A grid point with its problem.
struct BuiltPoint {
    Parameters parameters;
    Problem problem;
};

/// The first point of every chain size of the grid.
Checked<std::vector<BuiltPoint>> first_points(const Case& c) {
    const Result<std::vector<Parameters>> points = grid_points(c);
    if (!points) {
        return tl::unexpected(Errors{points.error()});
    }
    std::vector<BuiltPoint> built;
    std::set<double> sizes;
    for (const Parameters& parameters : *points) {
        const auto sites = std::find_if(
            parameters.begin(), parameters.end(), [](const auto& p) { return p.first == "sites"; });
        if (sites != parameters.end() && !sizes.insert(sites->second).second) {
            continue;
        }
        Result<Problem> problem = build_problem(c, parameters);
        if (!problem) {
            return tl::unexpected(Errors{problem.error()});
        }
        built.push_back({parameters, std::move(*problem)});
    }
    return built;
}

/// ", J = 1, h = 0": everything but the number of sites.
std::string other_parameters(const BuiltPoint& point) {
    std::string text;
    for (const auto& [name, value] : point.parameters) {
        if (name != "sites") {
            text += ", " + name + " = " + parameter_text(name, value);
        }
    }
    return text;
}

std::string terms_text(const Case& c, const BuiltPoint& point) {
    const Problem& problem = point.problem;
    const bool infinite = problem.chain.is_infinite();
    const TermList list = infinite ? with_field(*problem.terms, problem.field, problem.terms->cell)
                                   : full_terms(problem);
    std::string text = c.name + ": " + to_string(problem.chain) + other_parameters(point) + '\n';
    text += fmt::format("  {} string{}{}, constant {}\n",
                        list.terms.size(),
                        list.terms.size() == 1 ? "" : "s",
                        infinite ? " per unit cell" : "",
                        number_text(list.constant));
    TextTable table({{"coefficient", Align::point}, {"string"}});
    const std::size_t shown = std::min(list.terms.size(), most_strings);
    for (std::size_t i = 0; i < shown; ++i) {
        const Term& term = list.terms[i];
        table.add_row({{term.coefficient.imag() == 0.0 ? number_text(term.coefficient.real())
                                                       : number_text(term.coefficient)},
                       {to_string(term.string)}});
    }
    if (shown < list.terms.size()) {
        table.add_text(fmt::format("  ... {} more\n", list.terms.size() - shown));
    }
    return text + table.text(2);
}

std::string symmetries_text(const Case& c, const BuiltPoint& point) {
    if (point.problem.chain.is_infinite()) {
        return "";
    }
    return c.name + other_parameters(point) + '\n' + sector::describe_symmetries(point.problem);
}

/// What `say` makes of the first point of every size of every case.
Checked<std::string> about_first_points(const std::string& argument,
                                        std::string (*say)(const Case&, const BuiltPoint&)) {
    const Checked<std::vector<Case>> cases = load_cases({argument}, {});
    if (!cases) {
        return tl::unexpected(cases.error());
    }
    std::string text;
    for (const Case& c : *cases) {
        const Checked<std::vector<BuiltPoint>> points = first_points(c);
        if (!points) {
            return tl::unexpected(points.error());
        }
        for (const BuiltPoint& point : *points) {
            text += say(c, point);
        }
    }
    return text;
}

}  // namespace

Checked<std::string> plan_of_case(const std::string& argument) {
    return load_cases({argument}, {}).and_then([](const std::vector<Case>& cases) {
        return Plan::make(cases).map([](const Plan& plan) { return plan.describe(); });
    });
}

Checked<std::string> terms_of_case(const std::string& argument) {
    return about_first_points(argument, terms_text);
}

Checked<std::string> symmetries_of_case(const std::string& argument) {
    return about_first_points(argument, symmetries_text);
}

}  // namespace chainmark::cli
