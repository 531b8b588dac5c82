#include "chainmark/report/csv.hpp"

#include <algorithm>
#include <cmath>

#include "chainmark/formats/csv.hpp"
#include "chainmark/formats/numbers.hpp"
#include "chainmark/report/words.hpp"

namespace chainmark {
namespace {

using Row = std::vector<std::string>;

std::vector<std::string> parameter_names(const RunReport& report) {
    std::vector<std::string> names;
    for (const CaseResult& result : report.cases) {
        for (const GridAxis& axis : result.source->axes) {
            if (std::find(names.begin(), names.end(), axis.name) == names.end()) {
                names.push_back(axis.name);
            }
        }
    }
    return names;
}

/// case, then the parameters; empty where the point has none of that name.
Row leading_fields(const std::string& case_name,
                   const std::vector<std::string>& names,
                   const Parameters& parameters) {
    Row row = {case_name};
    for (const std::string& name : names) {
        const auto at = std::find_if(
            parameters.begin(), parameters.end(), [&](const auto& p) { return p.first == name; });
        row.push_back(at == parameters.end() ? "" : parameter_text(name, at->second));
    }
    return row;
}

std::string line(Row leading, const Row& rest) {
    leading.insert(leading.end(), rest.begin(), rest.end());
    return csv_line(leading);
}

std::string element_text(const Value& value, std::size_t i) {
    if (shown_status(value, i) != Special::none) {
        return "";
    }
    return value.complex ? number_text(value.data[i]) : number_text(value.real_at(i));
}

std::string reference_lines(const Row& leading,
                            const std::string& label,
                            const Reference& reference,
                            const std::string& verdict) {
    const Value& value = reference.value;
    const std::string route = to_string(reference.route);
    const std::string basis = to_string(reference.basis);
    if (value.data.empty()) {  // a text, or an array without elements
        return line(leading, {label, "", route, value.text, "", "", basis, verdict});
    }
    std::string lines;
    for (std::size_t i = 0; i < value.data.size(); ++i) {
        const std::string index = value.kind == Kind::array ? std::to_string(i) : "";
        const bool bounded = i < reference.bound.size() && std::isfinite(reference.bound[i]);
        lines += line(leading,
                      {label,
                       index,
                       route,
                       element_text(value, i),
                       to_string(shown_status(value, i)),
                       bounded ? number_text(reference.bound[i]) : "",
                       basis,
                       verdict});
    }
    return lines;
}

std::string quantity_lines(const Row& leading, const QuantityResult& result) {
    const std::string& label = result.quantity->query.label;
    const std::string verdict = to_string(result.comparison.verdict);
    std::string lines;
    for (const Reference& reference : result.references) {
        lines += reference_lines(leading, label, reference, verdict);
    }
    if (lines.empty()) {
        lines += line(leading, {label, "", "", "", "", "", "", verdict});
    }
    if (result.infinite) {
        lines += reference_lines(leading, label, *result.infinite, "");
    }
    return lines;
}

}  // namespace

std::string run_csv(const RunReport& report) {
    const std::vector<std::string> names = parameter_names(report);
    Row heading = {"case"};
    heading.insert(heading.end(), names.begin(), names.end());
    std::string text = line(
        heading, {"quantity", "index", "route", "value", "status", "bound", "basis", "verdict"});
    for (const CaseResult& result : report.cases) {
        for (const PointResult& point : result.points) {
            const Row leading = leading_fields(result.source->source, names, point.parameters);
            for (const QuantityResult& quantity : point.quantities) {
                text += quantity_lines(leading, quantity);
            }
        }
    }
    return text;
}

}  // namespace chainmark
