#include "chainmark/report/terminal.hpp"

#include <algorithm>
#include <map>

#include <fmt/format.h>

#include "chainmark/base/words.hpp"
#include "chainmark/formats/numbers.hpp"
#include "chainmark/report/row_text.hpp"
#include "chainmark/report/text_layout.hpp"
#include "chainmark/report/words.hpp"

namespace chainmark {
namespace {

constexpr std::size_t table_indent = 4;
constexpr std::size_t longest_table = 40;  ///< rows that are always shown
constexpr std::size_t rows_at_ends = 5;    ///< of a longer table
constexpr std::size_t most_bad_rows = 60;  ///< of a longer table that differ or are undecided

/// One row of a table.
struct Entry {
    const PointResult* point;
    const QuantityResult* result;
};

bool is_bad(const Entry& entry) {
    return is_bad(entry.result->comparison.verdict);
}

Cell verdict_cell(Verdict verdict, bool colour) {
    static const std::map<Verdict, std::string> codes = {{Verdict::agree, "\033[32m"},
                                                         {Verdict::differ, "\033[31m"},
                                                         {Verdict::undecided, "\033[33m"},
                                                         {Verdict::single, "\033[2m"}};
    const std::string word = to_string(verdict);
    return colour ? Cell{word, codes.at(verdict), "\033[0m"} : Cell{word};
}

std::string parameter_cell(const PointResult& point, const std::string& name) {
    for (const auto& [parameter, value] : point.parameters) {
        if (parameter == name) {
            return parameter_text(name, value);
        }
    }
    return "";
}

std::vector<const GridAxis*> varying_axes(const Case& c) {
    std::vector<const GridAxis*> axes;
    for (const GridAxis& axis : c.axes) {
        if (axis.values.size() > 1) {
            axes.push_back(&axis);
        }
    }
    return axes;
}

std::vector<Cell> row_cells(const Entry& entry,
                            const std::vector<const GridAxis*>& axes,
                            bool colour) {
    std::vector<Cell> cells;
    for (const GridAxis* axis : axes) {
        cells.push_back({parameter_cell(*entry.point, axis->name)});
    }
    const QuantityResult& result = *entry.result;
    const Comparison& comparison = result.comparison;
    const bool any = !result.references.empty();
    cells.push_back({any ? value_cell(result.references.front()) : "-"});
    cells.push_back({any ? bound_cell(result.references.front()) : ""});
    cells.push_back({infinite_cell(result)});
    cells.push_back({route_names(result)});
    cells.push_back({comparison.difference ? fmt::format("{:.1g}", *comparison.difference) : ""});
    cells.push_back({comparison.digits ? fmt::format("{:.1f}", *comparison.digits) : ""});
    cells.push_back(verdict_cell(comparison.verdict, colour));
    return cells;
}

TextTable empty_table(const std::vector<const GridAxis*>& axes) {
    std::vector<Column> columns;
    for (const GridAxis* axis : axes) {
        columns.push_back({axis->name, Align::point});
    }
    columns.push_back({"value", Align::point});
    columns.push_back({"+-", Align::right});
    columns.push_back({"infinite chain", Align::point});
    columns.push_back({"routes", Align::left});
    columns.push_back({"max diff", Align::right});
    columns.push_back({"digits", Align::right});
    columns.push_back({"verdict", Align::left});
    return TextTable(std::move(columns));
}

/// Which rows of a long table are shown: the ends, and what differs or is undecided.
std::vector<bool> shown_rows(const std::vector<Entry>& entries, bool quiet) {
    const std::size_t n = entries.size();
    const bool all = n <= longest_table && !quiet;
    std::size_t bad = 0;
    std::vector<bool> shown(n);
    for (std::size_t i = 0; i < n; ++i) {
        const bool end = !quiet && (i < rows_at_ends || i + rows_at_ends >= n);
        bad += is_bad(entries[i]) ? 1 : 0;
        shown[i] = all || end || (is_bad(entries[i]) && bad <= most_bad_rows);
    }
    return shown;
}

std::string left_out_text(std::size_t rows, std::size_t bad) {
    return fmt::format("{}... {} rows left out{}; --csv and --json have all\n",
                       std::string(table_indent, ' '),
                       rows,
                       bad == 0 ? "" : fmt::format(", {} of them differ or are undecided", bad));
}

/// What gave no answer, once per route and reason: "not run: fermion at 12 points: ...".
std::string not_run_text(const std::vector<Entry>& entries) {
    std::map<std::pair<RouteId, std::string>, std::size_t> points;
    for (const Entry& entry : entries) {
        for (const NotRun& route : entry.result->not_run) {
            if (route.covers || entry.result->references.empty()) {
                ++points[{route.route, route.reason}];
            }
        }
    }
    std::string lines;
    for (const auto& [what, count] : points) {
        const std::string where =
            entries.size() == 1 ? "" : fmt::format(" at {} of {} points", count, entries.size());
        lines += wrapped(fmt::format("without {}{}: {}", to_string(what.first), where, what.second),
                         table_indent,
                         page_width);
    }
    return lines;
}

std::string table_heading(const Query& query) {
    const std::string options = options_text(query);
    return fmt::format("  {}{}{}\n",
                       query.label,
                       query.label == query.spec->name ? "" : ": " + query.spec->name,
                       options.empty() ? "" : "  (" + options + ")");
}

std::string table_text(const Case& c,
                       const std::vector<Entry>& entries,
                       const TerminalOptions& options) {
    const std::vector<bool> shown = shown_rows(entries, options.quiet);
    if (std::find(shown.begin(), shown.end(), true) == shown.end()) {
        return "";
    }
    const std::vector<const GridAxis*> axes = varying_axes(c);
    TextTable table = empty_table(axes);
    std::size_t skipped = 0;
    std::size_t skipped_bad = 0;
    for (std::size_t i = 0; i <= entries.size(); ++i) {
        const bool show = i < entries.size() && shown[i];
        if ((show || i == entries.size()) && skipped > 0 && !options.quiet) {
            table.add_text(left_out_text(skipped, skipped_bad));
            skipped = skipped_bad = 0;
        }
        if (show) {
            table.add_row(row_cells(entries[i], axes, options.colour),
                          lines_below(*entries[i].result));
        } else if (i < entries.size()) {
            ++skipped;
            skipped_bad += is_bad(entries[i]) ? 1 : 0;
        }
    }
    return table_heading(entries.front().result->quantity->query) + table.text(table_indent) +
           (options.quiet ? "" : not_run_text(entries));
}

std::string system_text(const Case& c) {
    std::vector<std::string> parts = {"boundary " + boundary_text(c)};
    if (c.two_s != 1) {
        parts.push_back("spin " + spin_text(c.two_s));
    }
    if (c.family != nullptr) {
        parts.push_back(c.family->name + ": " + c.family->formula);
    }
    if (!c.terms.empty()) {
        parts.push_back(
            fmt::format("{} written term{}", c.terms.size(), c.terms.size() == 1 ? "" : "s"));
    }
    std::string text = wrapped(join(parts, "; "), 2, page_width);
    std::vector<std::string> fixed;
    for (const GridAxis& axis : c.axes) {
        if (axis.values.size() == 1) {
            fixed.push_back(axis.name + " = " + parameter_text(axis.name, axis.values.front()));
        }
    }
    return fixed.empty() ? text : text + wrapped(fixed, ", ", 2, page_width);
}

std::string trend_text(const Trend& trend) {
    std::string fixed;
    for (const auto& [name, value] : trend.parameters) {
        fixed += fmt::format(", {} = {}", name, parameter_text(name, value));
    }
    const std::string expected =
        trend.expected ? fmt::format(", expected {}", number_text(*trend.expected)) : "";
    return wrapped(fmt::format("{} of {} along {}{}{}: {} +- {:.1g}{}",
                               trend.trend,
                               trend.quantity,
                               trend.axis,
                               trend.group.empty() ? "" : " (" + trend.group + ")",
                               fixed,
                               certain_digits(trend.value, trend.error, 6),
                               trend.error,
                               expected),
                   4,
                   page_width);
}

/// The rows of every quantity, in the order of the case's quantities.
std::vector<std::vector<Entry>> tables(const CaseResult& result) {
    std::map<std::string, std::size_t> table_of;
    for (const CaseQuantity& quantity : result.source->quantities) {
        table_of.try_emplace(quantity.query.label, table_of.size());
    }
    std::vector<std::vector<Entry>> tables(table_of.size());
    for (const PointResult& point : result.points) {
        for (const QuantityResult& quantity : point.quantities) {
            tables[table_of.at(quantity.quantity->query.label)].push_back({&point, &quantity});
        }
    }
    return tables;
}

std::string case_text(const CaseResult& result, const TerminalOptions& options) {
    const Case& c = *result.source;
    std::string body;
    for (const std::vector<Entry>& entries : tables(result)) {
        body += table_text(c, entries, options);
    }
    if (options.quiet) {
        return body.empty() ? "" : c.name + '\n' + system_text(c) + body + '\n';
    }
    if (!result.trends.empty()) {
        body += "  trends\n";
    }
    for (const Trend& trend : result.trends) {
        body += trend_text(trend);
    }
    return printable(c.name + "  " + c.title) + '\n' + system_text(c) + body + '\n';
}

std::string counted(std::size_t n, const std::string& one, const std::string& many) {
    return fmt::format("{} {}", n, n == 1 ? one : many);
}

std::string summary(const RunReport& report) {
    const RunCounts counts = count(report);
    const std::string interrupted =
        report.interrupted
            ? fmt::format(
                  "interrupted, {} of {} points finished: ", counts.points, counts.planned_points)
            : "";
    return fmt::format("{}{}, {}, {}: {} agree, {} single, {} undecided, {} differ ({:.1f} s)\n",
                       interrupted,
                       counted(counts.cases, "case", "cases"),
                       counted(counts.points, "point", "points"),
                       counted(counts.quantities, "quantity", "quantities"),
                       counts.with(Verdict::agree),
                       counts.with(Verdict::single),
                       counts.with(Verdict::undecided),
                       counts.with(Verdict::differ),
                       report.provenance.wall_seconds);
}

}  // namespace

std::string run_text(const RunReport& report, const TerminalOptions& options) {
    std::string text;
    for (const CaseResult& result : report.cases) {
        text += case_text(result, options);
    }
    return text + summary(report);
}

}  // namespace chainmark
