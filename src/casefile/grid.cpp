#include "chainmark/casefile/grid.hpp"

#include <cmath>

#include <fmt/format.h>

#include "chainmark/base/numerics.hpp"

namespace chainmark {
namespace {

using Values = std::optional<std::vector<GridValue>>;

constexpr int most_sites = 1000000;

std::string forms(GridKind kind) {
    const std::string ranges = "{ from, to, step } or { from, to, count }";
    return kind == GridKind::sites ? "a whole number, \"infinite\", a list of these, or " + ranges
                                   : "a number, a list of numbers, " + ranges;
}

std::optional<double> read_number(Reader& reader,
                                  const Node& node,
                                  const std::string& what,
                                  GridKind kind) {
    if (kind == GridKind::real) {
        return reader.number(node, what);
    }
    const auto sites = reader.whole(node, what, 1, most_sites);
    return sites ? std::optional(static_cast<double>(*sites)) : std::nullopt;
}

/// An element of a list, or a value alone.
std::optional<double> read_element(Reader& reader,
                                   const Node& node,
                                   const std::string& what,
                                   GridKind kind) {
    const auto* text = std::get_if<std::string>(&node.value);
    if (kind == GridKind::sites && text != nullptr) {
        return reader.choice(node, what, {"infinite"}, "a whole number")
                   ? std::optional(infinite_sites)
                   : std::nullopt;
    }
    return read_number(reader, node, what, kind);
}

struct Range {
    double from = 0.0;
    double to = 0.0;
};

Values too_many(Reader& reader, const Node& node, const std::string& what, double count) {
    reader.report(
        ErrorCode::grid_too_large,
        node.at,
        fmt::format(
            "{} has {:.0f} values; more than {} points are refused", what, count, longest_axis),
        "take a shorter range or a larger step, or split it over several runs");
    return std::nullopt;
}

Values placed(const std::vector<double>& numbers, const Position& at) {
    std::vector<GridValue> values;
    for (const double number : numbers) {
        values.push_back({number, at});
    }
    return values;
}

Values read_stepped(Reader& reader,
                    const Node& node,
                    const std::string& what,
                    GridKind kind,
                    const Range& range,
                    const Node& step_node) {
    const auto step = read_number(reader, step_node, "'step' of " + what, kind);
    if (!step) {
        return std::nullopt;
    }
    if (*step <= 0.0) {
        reader.bad_value(step_node, "'step' of " + what, "a number above 0");
        return std::nullopt;
    }
    if (range.to < range.from) {
        reader.report(ErrorCode::bad_value,
                      node.at,
                      fmt::format("{} goes from {} to {} and so holds no value",
                                  what,
                                  real_text(range.from),
                                  real_text(range.to)),
                      "a grid with a step ascends: exchange from and to");
        return std::nullopt;
    }
    // The last value may miss `to` by the rounding of the division: 1.2 / 0.05 is just below 24.
    constexpr double slack = 1e-9;
    const double steps = (range.to - range.from) / *step + slack;
    if (steps >= longest_axis) {
        return too_many(reader, node, what, std::floor(steps) + 1);
    }
    std::vector<double> numbers;
    for (int i = 0; i <= static_cast<int>(steps); ++i) {
        numbers.push_back(round_to_15_digits(range.from + i * *step));
    }
    return placed(numbers, node.at);
}

Values read_counted(Reader& reader,
                    const Node& node,
                    const std::string& what,
                    GridKind kind,
                    const Range& range,
                    const Node& count_node) {
    const std::string name = "'count' of " + what;
    const auto* wanted = std::get_if<std::int64_t>(&count_node.value);
    if (wanted != nullptr && *wanted > longest_axis) {
        return too_many(reader, count_node, what, static_cast<double>(*wanted));
    }
    const auto count = reader.whole(count_node, name, 1, longest_axis);
    if (!count) {
        return std::nullopt;
    }
    if (*count == 1 && range.from != range.to) {
        reader.bad_value(count_node, name, "at least 2, since from and to are both values");
        return std::nullopt;
    }
    const std::vector<double> numbers = even_grid(range.from, range.to, static_cast<int>(*count));
    for (const double number : numbers) {
        if (kind == GridKind::sites && number != std::trunc(number)) {
            reader.report(ErrorCode::bad_value,
                          node.at,
                          fmt::format("{} holds the value {}", what, real_text(number)),
                          "sites are whole numbers: choose another count, or give a step");
            return std::nullopt;
        }
    }
    return placed(numbers, node.at);
}

Values read_range(
    Reader& reader, const Node& node, const std::string& what, GridKind kind, const Table& table) {
    reader.only_keys(table, what, {"from", "to", "step", "count"});
    const Entry* from = reader.need(table, node.at, what, "from", "a range needs from and to");
    const Entry* to = reader.need(table, node.at, what, "to", "a range needs from and to");
    const Entry* step = find(table, "step");
    const Entry* count = find(table, "count");
    if ((step == nullptr) == (count == nullptr)) {
        reader.report(step == nullptr ? ErrorCode::missing_key : ErrorCode::bad_value,
                      node.at,
                      fmt::format("{} has {} 'step' {} 'count'",
                                  what,
                                  step == nullptr ? "neither" : "both",
                                  step == nullptr ? "nor" : "and"),
                      "a range needs exactly one of them");
        return std::nullopt;
    }
    if (from == nullptr || to == nullptr) {
        return std::nullopt;
    }
    const auto low = read_number(reader, from->value, "'from' of " + what, kind);
    const auto high = read_number(reader, to->value, "'to' of " + what, kind);
    if (!low || !high) {
        return std::nullopt;
    }
    const Range range = {*low, *high};
    if (!std::isfinite(range.to - range.from)) {
        reader.report(ErrorCode::bad_value,
                      node.at,
                      fmt::format("{} spans more than a double can hold", what),
                      "take from and to closer together");
        return std::nullopt;
    }
    return step != nullptr ? read_stepped(reader, node, what, kind, range, step->value)
                           : read_counted(reader, node, what, kind, range, count->value);
}

Values read_list(
    Reader& reader, const Node& node, const std::string& what, GridKind kind, const List& list) {
    if (list.empty()) {
        reader.bad_value(node, what, forms(kind));
        return std::nullopt;
    }
    if (list.size() > static_cast<std::size_t>(longest_axis)) {
        return too_many(reader, node, what, static_cast<double>(list.size()));
    }
    std::vector<GridValue> values;
    for (const Node& item : list) {
        if (const auto value = read_element(reader, item, "an element of " + what, kind)) {
            values.push_back({*value, item.at});
        }
    }
    return values.size() == list.size() ? Values(values) : std::nullopt;
}

}  // namespace

Values read_grid(Reader& reader, const Node& node, const std::string& what, GridKind kind) {
    if (const auto* list = std::get_if<List>(&node.value)) {
        return read_list(reader, node, what, kind, *list);
    }
    if (const auto* table = std::get_if<Table>(&node.value)) {
        return read_range(reader, node, what, kind, *table);
    }
    const bool number = std::holds_alternative<std::int64_t>(node.value) ||
                        std::holds_alternative<double>(node.value);
    const bool text = std::holds_alternative<std::string>(node.value);
    if (!number && !(text && kind == GridKind::sites)) {
        reader.wrong_type(node, what, forms(kind));
        return std::nullopt;
    }
    const auto value = read_element(reader, node, what, kind);
    return value ? Values(std::vector<GridValue>{{*value, node.at}}) : std::nullopt;
}

}  // namespace chainmark
