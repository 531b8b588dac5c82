#include "chainmark/cli/show_case.hpp"

#include <algorithm>
#include <map>

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

/// The first grid point of a chain size with its problem.
struct BuiltPoint {
    Parameters parameters;
    Problem problem;
    int points = 1;  ///< of this size
};

double sites_of(const Parameters& parameters) {
    const auto sites = std::find_if(
        parameters.begin(), parameters.end(), [](const auto& p) { return p.first == "sites"; });
    CHAINMARK_EXPECTS(sites != parameters.end());
    return sites->second;
}

/// The first point of every chain size of the grid.
Checked<std::vector<BuiltPoint>> first_points(const Case& c) {
    const Result<std::vector<Parameters>> points = grid_points(c);
    if (!points) {
        return tl::unexpected(Errors{points.error()});
    }
    std::vector<BuiltPoint> built;
    std::map<double, std::size_t> of_size;
    for (const Parameters& parameters : *points) {
        const auto [at, is_new] = of_size.emplace(sites_of(parameters), built.size());
        if (!is_new) {
            ++built[at->second].points;
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

/// ", J = 1, h = 0": everything but the number of sites, and whether there are other points.
std::string point_text(const BuiltPoint& point) {
    std::string text;
    for (const auto& [name, value] : point.parameters) {
        if (name != "sites") {
            text += ", " + name + " = " + parameter_text(name, value);
        }
    }
    return point.points == 1
               ? text
               : text + fmt::format(" (the first of {} points of this size)", point.points);
}

std::string terms_text(const Case& c, const BuiltPoint& point) {
    const Problem& problem = point.problem;
    const bool infinite = problem.chain.is_infinite();
    const TermList list = infinite ? with_field(*problem.terms, problem.field, problem.terms->cell)
                                   : full_terms(problem);
    std::string text = c.name + ": " + to_string(problem.chain) + point_text(point) + '\n';
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
                       {to_string(term.string, problem.chain.two_s)}});
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
    return c.name + point_text(point) + '\n' + sector::describe_symmetries(point.problem);
}

Checked<std::vector<Case>> cases_of(const std::string& argument,
                                    const std::vector<std::string>& set) {
    return parse_settings(set).and_then(
        [&](const std::vector<Setting>& settings) { return load_cases({argument}, settings); });
}

/// What `say` makes of the first point of every size of every case.
Checked<std::string> about_first_points(const Checked<std::vector<Case>>& cases,
                                        std::string (*say)(const Case&, const BuiltPoint&)) {
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

Checked<std::string> plan_of_case(const std::string& argument,
                                  const std::vector<std::string>& set) {
    return cases_of(argument, set).and_then([](const std::vector<Case>& cases) {
        return Plan::make(cases).map([](const Plan& plan) { return plan.describe(); });
    });
}

Checked<std::string> terms_of_case(const std::string& argument,
                                   const std::vector<std::string>& set) {
    return about_first_points(cases_of(argument, set), terms_text);
}

Checked<std::string> symmetries_of_case(const std::string& argument,
                                        const std::vector<std::string>& set) {
    return about_first_points(cases_of(argument, set), symmetries_text);
}

}  // namespace chainmark::cli
