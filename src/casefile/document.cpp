#include "chainmark/casefile/document.hpp"

#include <algorithm>
#include <memory>
#include <optional>
#include <string_view>
#include <tuple>

#include <fmt/format.h>
#include <toml++/toml.h>

#include "chainmark/casefile/settings.hpp"

namespace chainmark {
namespace {

/// toml++ hands a source path through to every node: none for the file, the setting's number for
/// what a setting wrote.
Position position_of(const toml::source_region& region) {
    if (region.path) {
        return {.setting = std::stoi(*region.path)};
    }
    return {.line = static_cast<int>(region.begin.line),
            .column = static_cast<int>(region.begin.column)};
}

Node to_node(const toml::node& node);

Table to_table(const toml::table& source) {
    Table table;
    table.reserve(source.size());
    for (auto&& [key, value] : source) {
        table.push_back({std::string(key.str()), position_of(key.source()), to_node(value)});
    }
    std::stable_sort(
        table.begin(), table.end(), [](const Entry& a, const Entry& b) { return a.at < b.at; });
    return table;
}

List to_list(const toml::array& source) {
    List list;
    list.reserve(source.size());
    for (const toml::node& item : source) {
        list.push_back(to_node(item));
    }
    return list;
}

Node to_node(const toml::node& node) {
    const Position at = position_of(node.source());
    switch (node.type()) {
        case toml::node_type::string:
            return {at, node.as_string()->get()};
        case toml::node_type::integer:
            return {at, node.as_integer()->get()};
        case toml::node_type::floating_point:
            return {at, node.as_floating_point()->get()};
        case toml::node_type::boolean:
            return {at, node.as_boolean()->get()};
        case toml::node_type::array:
            return {at, to_list(*node.as_array())};
        case toml::node_type::table:
            return {at, to_table(*node.as_table())};
        default:
            return {at, DateOrTime{}};
    }
}

/// Index just past the string that starts with the quote at `start`; the end of the line where a
/// one-line string is not closed.
std::size_t skip_string(const std::string& text, std::size_t start) {
    const char quote = text[start];
    const bool escapes = quote == '"';
    const std::string fence(3, quote);
    const bool long_form = text.compare(start, 3, fence) == 0;
    for (std::size_t i = start + (long_form ? 3 : 1); i < text.size(); ++i) {
        if (escapes && text[i] == '\\') {
            ++i;
        } else if (long_form && text.compare(i, 3, fence) == 0) {
            return i + 3;
        } else if (!long_form && text[i] == quote) {
            return i + 1;
        } else if (!long_form && text[i] == '\n') {
            return i;
        }
    }
    return text.size();
}

/// toml++ 3.3 limits how deep brackets nest but not how many parts a dotted key has, and takes down
/// the nested tables by recursion: a key of a hundred thousand parts would overflow the stack.
/// Returns the line of the first key with more parts than any case needs, 0 if there is none.
int line_of_deep_key(const std::string& text) {
    constexpr int most_dots = 16;
    int dots = 0;
    int line = 1;
    for (std::size_t i = 0; i < text.size();) {
        const char c = text[i];
        std::size_t next = i + 1;
        if (c == '#') {
            next = std::min(text.find('\n', i), text.size());
        } else if (c == '"' || c == '\'') {
            next = skip_string(text, i);
        } else if (c == '.' && ++dots > most_dots) {
            return line;
        } else if (c != '\0' && std::string_view("\n,=[]{}").find(c) != std::string_view::npos) {
            dots = 0;
        }
        line += static_cast<int>(std::count(text.begin() + static_cast<std::ptrdiff_t>(i),
                                            text.begin() + static_cast<std::ptrdiff_t>(next),
                                            '\n'));
        i = next;
    }
    return 0;
}

Error no_toml(const Place& place, const std::string& reason) {
    return {ErrorCode::bad_syntax, place, "this is not TOML: " + reason, ""};
}

Result<toml::table> parse_toml(const std::string& text,
                               const std::string& source,
                               const std::string& node_path) {
    if (const int line = line_of_deep_key(text); line > 0) {
        return tl::unexpected(no_toml({source, line, 1}, "a dotted key has too many parts"));
    }
    try {
        return toml::parse(text, std::string_view(node_path));
    } catch (const toml::parse_error& error) {
        const toml::source_position& at = error.source().begin;
        return tl::unexpected(
            no_toml({source, static_cast<int>(at.line), static_cast<int>(at.column)},
                    std::string(error.description())));
    }
}

bool is_bare_word(const std::string& value) {
    return !value.empty() && std::all_of(value.begin(), value.end(), [](char c) {
        return (c >= 'a' && c <= 'z') || (c >= 'A' && c <= 'Z') || (c >= '0' && c <= '9') ||
               std::string_view("_-+./").find(c) != std::string_view::npos;
    });
}

Error bad_setting(const Setting& setting, const std::string& found, const std::string& allowed) {
    return {ErrorCode::bad_option, {to_string(setting), 0, 0}, found, allowed};
}

/// A table { x = VALUE }.
Result<toml::table> parse_value(const Setting& setting, const std::string& number) {
    Result<toml::table> parsed = parse_toml("x = " + setting.value, "", number);
    if (parsed && parsed->size() == 1) {
        return parsed;
    }
    if (is_bare_word(setting.value)) {
        return parse_toml("x = " + quoted(setting.value), "", number);
    }
    return tl::unexpected(
        bad_setting(setting,
                    fmt::format("the value {} is not TOML", quoted(setting.value)),
                    "write it as in the file, such as 12, [8, 12], \"open\" or "
                    "{ from = 0, to = 1, count = 5 }"));
}

std::vector<std::string> keys_of(const toml::table* table) {
    std::vector<std::string> keys;
    if (table != nullptr) {
        for (auto&& [key, value] : *table) {
            keys.emplace_back(key.str());
        }
    }
    return keys;
}

toml::key new_key(const std::string& name, const std::string& number) {
    return toml::key(name,
                     toml::source_region{{}, {}, std::make_shared<const std::string>(number)});
}

/// The table a path's last key stands in, made where the file has none; nullptr where the file has
/// something else in its place.
toml::table* parent_table(toml::table& root, const KeyPath& path, const std::string& number) {
    if (path.size() == 1) {
        return &root;
    }
    if (!root.contains(path.front())) {
        root.insert(new_key(path.front(), number), toml::table{});
    }
    return root.get(path.front())->as_table();
}

/// Nothing, or what is wrong with the setting.
std::optional<Error> apply(toml::table& root, const Setting& setting, const std::string& number) {
    Result<KeyPath> path = setting_path(setting.key, keys_of(root["parameters"].as_table()));
    if (!path) {
        path.error().where = {to_string(setting), 0, 0};
        return path.error();
    }
    Result<toml::table> parsed = parse_value(setting, number);
    if (!parsed) {
        return parsed.error();
    }
    toml::table* parent = parent_table(root, *path, number);
    if (parent == nullptr) {
        return bad_setting(setting,
                           fmt::format("'{}' is no table in the file", path->front()),
                           fmt::format("expected a table [{}]", path->front()));
    }
    // An existing key keeps its place, and with it an axis its rank; the moved value brings its
    // own.
    parsed->get("x")->visit([&](auto& value) {
        parent->insert_or_assign(new_key(path->back(), number), std::move(value));
    });
    return std::nullopt;
}

}  // namespace

bool Position::operator<(const Position& other) const {
    return std::tie(setting, line, column) < std::tie(other.setting, other.line, other.column);
}

std::string to_string(const Setting& setting) {
    return fmt::format("--set {}={}", setting.key, setting.value);
}

Error too_long(const std::string& source) {
    return {ErrorCode::cannot_read,
            {source, 0, 0},
            "the file is too long for a case",
            fmt::format("a case has at most {} MiB", longest_file / (std::size_t{1024} * 1024))};
}

Result<Document> read_document(const std::string& text,
                               const std::string& source,
                               const std::vector<Setting>& settings) {
    if (text.size() > longest_file) {
        return tl::unexpected(too_long(source));
    }
    if (text.find('\0') != std::string::npos) {
        return tl::unexpected(Error{ErrorCode::cannot_read,
                                    {source, 0, 0},
                                    "the file is not text: it holds zero bytes",
                                    "a case is a TOML file"});
    }
    Result<toml::table> table = parse_toml(text, source, "");
    if (!table) {
        return tl::unexpected(table.error());
    }
    if (table->empty()) {
        return tl::unexpected(Error{
            ErrorCode::missing_key,
            {source, 0, 0},
            "the file is empty",
            "a case needs at least format = 1, [system] with sites, [hamiltonian] with a family "
            "and its parameters or a [[hamiltonian.term]], and one [[quantity]] with a name"});
    }
    Document document;
    for (std::size_t i = 0; i < settings.size(); ++i) {
        if (const auto error = apply(*table, settings[i], std::to_string(i))) {
            document.setting_errors.push_back(*error);
        }
    }
    document.root = to_node(*table);
    return document;
}

}  // namespace chainmark
