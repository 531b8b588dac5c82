#include <algorithm>

#include <fmt/format.h>

#include "chainmark/casefile/document.hpp"

namespace chainmark {
namespace {

std::string key_text(const std::string& key) {
    const bool bare = !key.empty() && std::all_of(key.begin(), key.end(), [](char c) {
        return (c >= 'a' && c <= 'z') || (c >= 'A' && c <= 'Z') || (c >= '0' && c <= '9') ||
               c == '_' || c == '-';
    });
    return bare ? key : quoted(key);
}

std::string value_text(const Node& node);

std::string list_text(const List& list) {
    std::string text;
    const bool of_tables = !list.empty() && std::holds_alternative<Table>(list.front().value);
    for (const Node& item : list) {
        text += of_tables ? "\n    " : text.empty() ? "" : " ";
        text += value_text(item) + ",";
    }
    if (!of_tables && !text.empty()) {
        text.pop_back();
    }
    return fmt::format("[{}{}]", text, of_tables ? "\n" : "");
}

std::string table_text(const Table& table) {
    std::string text;
    for (const Entry& entry : table) {
        text += fmt::format(
            "{}{} = {}", text.empty() ? "" : ", ", key_text(entry.key), value_text(entry.value));
    }
    return text.empty() ? "{}" : fmt::format("{{ {} }}", text);
}

struct ValueText {
    std::string operator()(const std::string& text) const { return quoted(text); }
    std::string operator()(std::int64_t value) const { return std::to_string(value); }
    std::string operator()(double value) const { return real_text(value); }
    std::string operator()(bool value) const { return value ? "true" : "false"; }
    std::string operator()(DateOrTime) const { return "\"\""; }
    std::string operator()(const List& list) const { return list_text(list); }
    std::string operator()(const Table& table) const { return table_text(table); }
};

std::string value_text(const Node& node) {
    return std::visit(ValueText{}, node.value);
}

struct Line {
    Position at;
    std::string text;
};

void add_line(std::vector<Line>& lines, const std::string& path, const Entry& entry) {
    lines.push_back({entry.at, fmt::format("{} = {}\n", path, value_text(entry.value))});
}

}  // namespace

std::string effective_text(const Node& root) {
    std::vector<Line> lines;
    for (const Entry& entry : std::get<Table>(root.value)) {
        if (const Table* section = std::get_if<Table>(&entry.value.value)) {
            for (const Entry& inner : *section) {
                add_line(lines, key_text(entry.key) + "." + key_text(inner.key), inner);
            }
        } else {
            add_line(lines, key_text(entry.key), entry);
        }
    }
    std::stable_sort(
        lines.begin(), lines.end(), [](const Line& a, const Line& b) { return a.at < b.at; });
    std::string text;
    for (const Line& line : lines) {
        text += line.text;
    }
    return text;
}

}  // namespace chainmark
