#include <algorithm>
#include <cmath>

#include <fmt/format.h>

#include "chainmark/base/numerics.hpp"
#include "chainmark/casefile/sections.hpp"
#include "chainmark/operators/site_operator.hpp"

namespace chainmark {
namespace {

constexpr std::int64_t format_read = 1;

const std::string twist_form = "{ twist = radians }";

void read_boundary(Reader& reader, const Node& node, Draft& draft) {
    const std::string what = name_in("boundary", "[system]");
    Case& result = draft.result;
    if (const auto* table = std::get_if<Table>(&node.value)) {
        reader.only_keys(*table, what, {"twist"});
        if (const Entry* twist =
                reader.need(*table, node.at, what, "twist", "expected " + twist_form)) {
            result.twist = reader.number(twist->value, "'twist' of " + what).value_or(0.0);
        }
        return;
    }
    if (!std::holds_alternative<std::string>(node.value)) {
        reader.wrong_type(node, what, R"("periodic", "open", "antiperiodic" or )" + twist_form);
        return;
    }
    const auto chosen = reader.choice(node, what, {"periodic", "open", "antiperiodic"}, twist_form);
    if (chosen) {
        result.boundary = *chosen == 1 ? BoundaryKind::open : BoundaryKind::ring;
        result.twist = *chosen == 2 ? pi : 0.0;
    }
}

/// "1/2", "1", "3/2", ..., or the same as a number.
void read_spin(Reader& reader, const Node& node, Draft& draft) {
    const std::string what = name_in("spin", "[system]");
    const bool is_number = std::holds_alternative<std::int64_t>(node.value) ||
                           std::holds_alternative<double>(node.value);
    if (is_number) {
        const double two_s = 2 * reader.number(node, what).value_or(draft.result.two_s / 2.0);
        if (two_s < 1 || two_s > largest_two_s || two_s != std::trunc(two_s)) {
            reader.bad_value(node, what, "0.5, 1, 1.5 ... 7.5, or a text such as \"3/2\"");
            return;
        }
        draft.result.two_s = static_cast<int>(two_s);
        return;
    }
    std::vector<std::string> words;
    for (int two_s = 1; two_s <= largest_two_s; ++two_s) {
        words.push_back(spin_text(two_s));
    }
    if (const auto chosen = reader.choice(node, what, words, "the same as a number, such as 1.5")) {
        draft.result.two_s = static_cast<int>(*chosen) + 1;
    }
}

void read_temperature(Reader& reader, const Entry& entry, Draft& draft) {
    constexpr double largest = 1e100;  // as for couplings
    draft.has_temperature = true;
    const std::size_t before = draft.axes.size();
    read_axis(reader, entry, "[system]", GridKind::real, draft);
    if (draft.axes.size() == before) {
        return;
    }
    for (const GridValue& temperature : draft.axes.back().values) {
        if (temperature.value <= 0.0) {
            reader.report(ErrorCode::bad_value,
                          temperature.at,
                          fmt::format("'temperature' has the value {}", temperature.value),
                          "a temperature is above 0; for the ground state leave it out");
            return;
        }
        if (temperature.value > largest || temperature.value < 1 / largest) {
            reader.report(ErrorCode::bad_value,
                          temperature.at,
                          fmt::format("'temperature' has the value {}", temperature.value),
                          "expected temperatures between 1e-100 and 1e100");
            return;
        }
    }
}

void read_coincident(Reader& reader, const Node& node, Draft& draft) {
    const auto chosen = reader.choice(node, name_in("coincident", "[system]"), {"add", "once"});
    if (chosen) {
        draft.result.coincident = *chosen == 0 ? Coincident::add : Coincident::once;
    }
}

}  // namespace

const Table* find_section(Reader& reader, const Table& root, const std::string& name) {
    const Entry* entry = find(root, name);
    if (entry == nullptr) {
        return nullptr;
    }
    return reader.table(entry->value, fmt::format("'{}'", name), fmt::format("a table [{}]", name));
}

void read_axis(
    Reader& reader, const Entry& entry, const std::string& owner, GridKind kind, Draft& draft) {
    if (auto values = read_grid(reader, entry.value, name_in(entry.key, owner), kind)) {
        draft.axes.push_back({entry.key, entry.at, entry.value.at, std::move(*values)});
    }
}

bool read_format(Reader& reader, const Table& root) {
    const std::string allowed = fmt::format("this version reads format = {}", format_read);
    const Entry* format = reader.need(root, {}, "the case", "format", allowed);
    if (format == nullptr) {
        return true;  // taken as format 1, so that the rest is checked as well
    }
    const auto* number = std::get_if<std::int64_t>(&format->value.value);
    if (number != nullptr && *number == format_read) {
        return true;
    }
    reader.report(number == nullptr ? ErrorCode::wrong_type : ErrorCode::bad_value,
                  format->value.at,
                  fmt::format("'format' is {}", describe(format->value)),
                  allowed);
    return false;
}

void read_title(Reader& reader, const Table& root, Draft& draft) {
    draft.result.title = draft.result.name;
    if (const Entry* title = find(root, "title")) {
        if (const std::string* text = reader.text(title->value, "'title'", "a text")) {
            draft.result.title = *text;
        }
    }
}

void read_system(Reader& reader, const Table& root, Draft& draft) {
    const Entry* system =
        reader.need(root, {}, "the case", "system", "[system] says how many sites the chain has");
    if (system == nullptr) {
        return;
    }
    draft.result.system_place = reader.place(system->at);
    const Table* table = find_section(reader, root, "system");
    if (table == nullptr) {
        return;
    }
    reader.only_keys(
        *table, "[system]", {"sites", "boundary", "spin", "temperature", "coincident"});
    if (const Entry* sites = reader.need(*table,
                                         system->at,
                                         "[system]",
                                         "sites",
                                         "give the number of sites, such as sites = 12")) {
        read_axis(reader, *sites, "[system]", GridKind::sites, draft);
    }
    if (const Entry* boundary = find(*table, "boundary")) {
        read_boundary(reader, boundary->value, draft);
    }
    if (const Entry* spin = find(*table, "spin")) {
        read_spin(reader, spin->value, draft);
    }
    if (const Entry* temperature = find(*table, "temperature")) {
        read_temperature(reader, *temperature, draft);
    }
    if (const Entry* coincident = find(*table, "coincident")) {
        read_coincident(reader, coincident->value, draft);
    }
}

void read_grid_section(Reader& reader, const Table& root, Draft& draft) {
    const Table* table = find_section(reader, root, "grid");
    if (table == nullptr) {
        return;
    }
    reader.only_keys(*table, "[grid]", {"combine"});
    if (const Entry* combine = find(*table, "combine")) {
        const auto chosen =
            reader.choice(combine->value, name_in("combine", "[grid]"), {"product", "zip"});
        draft.result.zip = chosen == std::size_t{1};
    }
}

void read_tolerance(Reader& reader,
                    const Table& table,
                    const std::string& owner,
                    Tolerance& tolerance) {
    reader.only_keys(table, owner, {"absolute", "relative"});
    const auto read = [&](const std::string& key, double& target) {
        const Entry* entry = find(table, key);
        if (entry == nullptr) {
            return;
        }
        const std::string what = name_in(key, owner);
        const auto value = reader.number(entry->value, what);
        if (value && *value < 0.0) {
            reader.bad_value(entry->value, what, "0 or more");
        } else if (value) {
            target = *value;
        }
    };
    read("absolute", tolerance.absolute);
    read("relative", tolerance.relative);
}

void read_tolerance_section(Reader& reader, const Table& root, Draft& draft) {
    if (const Table* table = find_section(reader, root, "tolerance")) {
        read_tolerance(reader, *table, "[tolerance]", draft.result.tolerance);
    }
}

void read_routes(Reader& reader, const Table& root, Draft& draft) {
    const Table* table = find_section(reader, root, "routes");
    if (table == nullptr) {
        return;
    }
    reader.only_keys(*table, "[routes]", {"use"});
    const Entry* use = find(*table, "use");
    const std::string what = name_in("use", "[routes]");
    const List* list =
        use == nullptr ? nullptr : reader.list(use->value, what, "a list of at least one route");
    if (list == nullptr) {
        return;
    }
    const std::vector<RouteId> ids = {
        RouteId::sector, RouteId::dense, RouteId::fermion, RouteId::limit};
    std::vector<std::string> names;
    for (const RouteId id : ids) {
        names.push_back(to_string(id));
    }
    std::vector<RouteId>& routes = draft.result.routes;
    for (const Node& item : *list) {
        const auto chosen = reader.choice(item, "a route of " + what, names);
        if (chosen && std::find(routes.begin(), routes.end(), ids[*chosen]) != routes.end()) {
            reader.bad_value(item, "a route of " + what, "every route once");
        } else if (chosen) {
            routes.push_back(ids[*chosen]);
        }
    }
}

}  // namespace chainmark
