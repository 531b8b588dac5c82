#include <algorithm>

#include <fmt/format.h>

#include "chainmark/casefile/document.hpp"

namespace chainmark {
namespace {

/// The first 60 bytes of a longer text, cut between two characters.
std::string shortened(const std::string& text) {
    constexpr std::size_t most = 60;
    if (text.size() <= most) {
        return text;
    }
    std::size_t end = most;
    while (end > 0 && (static_cast<unsigned char>(text[end]) & 0xC0U) == 0x80U) {
        --end;
    }
    return text.substr(0, end) + "...";
}

struct Description {
    std::string operator()(const std::string& text) const {
        return fmt::format("the text \"{}\"", shown(text));
    }
    std::string operator()(std::int64_t value) const { return fmt::format("the number {}", value); }
    std::string operator()(double value) const { return "the number " + real_text(value); }
    std::string operator()(bool value) const { return value ? "true" : "false"; }
    std::string operator()(DateOrTime) const { return "a date or time"; }
    std::string operator()(const List& list) const {
        return list.empty() ? "an empty list" : "a list";
    }
    std::string operator()(const Table& table) const {
        return table.empty() ? "an empty table" : "a table";
    }
};

}  // namespace

const Entry* find(const Table& table, const std::string& key) {
    const auto at = std::find_if(
        table.begin(), table.end(), [&](const Entry& entry) { return entry.key == key; });
    return at == table.end() ? nullptr : &*at;
}

std::string real_text(double value) {
    const std::string text = fmt::format("{}", value);
    return text.find_first_of(".en") == std::string::npos ? text + ".0" : text;
}

std::string describe(const Node& node) {
    return std::visit(Description{}, node.value);
}

std::string quoted(const std::string& text) {
    std::string result = "\"";
    for (const char c : text) {
        if (c == '"' || c == '\\') {
            result += '\\';
            result += c;
        } else if (static_cast<unsigned char>(c) < 0x20 || c == 0x7F) {
            result += fmt::format("\\u{:04X}", static_cast<unsigned char>(c));
        } else {
            result += c;
        }
    }
    return result + '"';
}

std::string shown(const std::string& text) {
    const std::string with_quotes = quoted(shortened(text));
    return with_quotes.substr(1, with_quotes.size() - 2);
}

}  // namespace chainmark
