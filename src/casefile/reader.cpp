#include "chainmark/casefile/reader.hpp"

#include <algorithm>
#include <cmath>

#include <fmt/format.h>

#include "chainmark/base/words.hpp"

namespace chainmark {
namespace {

constexpr std::size_t most_errors = 1000;

bool holds(const std::vector<std::string>& words, const std::string& word) {
    return std::find(words.begin(), words.end(), word) != words.end();
}

}  // namespace

Reader::Reader(std::string source, const std::vector<Setting>& settings)
    : source_(std::move(source)) {
    for (const Setting& setting : settings) {
        settings_.push_back(to_string(setting));
    }
}

Place Reader::place(const Position& at) const {
    if (at.setting >= 0) {
        return {settings_.at(static_cast<std::size_t>(at.setting)), 0, 0};
    }
    return {source_, at.line, at.column};
}

void Reader::report(ErrorCode code, const Position& at, std::string found, std::string allowed) {
    ++count_;
    if (errors_.size() < most_errors) {
        errors_.emplace_back(at, Error{code, place(at), std::move(found), std::move(allowed)});
    }
}

void Reader::wrong_type(const Node& node, const std::string& what, const std::string& expected) {
    report(ErrorCode::wrong_type,
           node.at,
           fmt::format("{} is {}", what, describe(node)),
           "expected " + expected);
}

void Reader::bad_value(const Node& node, const std::string& what, const std::string& expected) {
    report(ErrorCode::bad_value,
           node.at,
           fmt::format("{} is {}", what, describe(node)),
           "expected " + expected);
}

Errors Reader::errors() const {
    auto sorted = errors_;
    std::stable_sort(sorted.begin(), sorted.end(), [](const auto& a, const auto& b) {
        return a.first < b.first;
    });
    Errors errors;
    for (const auto& [at, error] : sorted) {
        errors.push_back(error);
    }
    if (count_ > most_errors) {
        errors.push_back({ErrorCode::bad_value,
                          {source_, 0, 0},
                          fmt::format("there are {} errors", count_),
                          fmt::format("{} of them are shown", most_errors)});
    }
    return errors;
}

std::optional<double> Reader::number(const Node& node, const std::string& what) {
    if (const auto* integer = std::get_if<std::int64_t>(&node.value)) {
        return static_cast<double>(*integer);
    }
    const auto* real = std::get_if<double>(&node.value);
    if (real == nullptr) {
        wrong_type(node, what, "a number");
        return std::nullopt;
    }
    if (!std::isfinite(*real)) {
        bad_value(node, what, "a finite number");
        return std::nullopt;
    }
    return *real + 0.0;
}

std::optional<std::int64_t> Reader::whole(const Node& node,
                                          const std::string& what,
                                          std::int64_t lowest,
                                          std::int64_t highest) {
    const auto* integer = std::get_if<std::int64_t>(&node.value);
    if (integer == nullptr) {
        const auto* real = std::get_if<double>(&node.value);
        const bool is_whole =
            real != nullptr && std::abs(*real) < 1e15 && std::trunc(*real) == *real;
        wrong_type(node,
                   what,
                   is_whole ? fmt::format("a whole number without a point, as in {:.0f}", *real)
                            : "a whole number");
        return std::nullopt;
    }
    if (*integer < lowest || *integer > highest) {
        bad_value(node, what, fmt::format("a whole number from {} to {}", lowest, highest));
        return std::nullopt;
    }
    return *integer;
}

std::optional<bool> Reader::flag(const Node& node, const std::string& what) {
    const auto* value = std::get_if<bool>(&node.value);
    if (value == nullptr) {
        wrong_type(node, what, "true or false");
        return std::nullopt;
    }
    return *value;
}

std::optional<std::size_t> Reader::choice(const Node& node,
                                          const std::string& what,
                                          const std::vector<std::string>& words,
                                          const std::string& other_form) {
    const std::string* word = text(node, what, "one of the texts " + join(words));
    if (word == nullptr) {
        return std::nullopt;
    }
    const auto at = std::find(words.begin(), words.end(), *word);
    if (at == words.end()) {
        report(ErrorCode::unknown_name,
               node.at,
               fmt::format("{} is {}", what, describe(node)),
               suggestion(*word, words) + (other_form.empty() ? "" : ", or " + other_form));
        return std::nullopt;
    }
    return static_cast<std::size_t>(at - words.begin());
}

const std::string* Reader::text(const Node& node,
                                const std::string& what,
                                const std::string& expected) {
    const auto* value = std::get_if<std::string>(&node.value);
    if (value == nullptr) {
        wrong_type(node, what, expected);
    }
    return value;
}

const List* Reader::list(const Node& node, const std::string& what, const std::string& expected) {
    const auto* value = std::get_if<List>(&node.value);
    if (value == nullptr) {
        wrong_type(node, what, expected);
    } else if (value->empty()) {
        bad_value(node, what, expected);
        return nullptr;
    }
    return value;
}

const Table* Reader::table(const Node& node, const std::string& what, const std::string& expected) {
    const auto* value = std::get_if<Table>(&node.value);
    if (value == nullptr) {
        wrong_type(node, what, expected);
    }
    return value;
}

const Entry* Reader::need(const Table& table,
                          const Position& at,
                          const std::string& owner,
                          const std::string& key,
                          const std::string& expected) {
    const Entry* entry = find(table, key);
    if (entry == nullptr) {
        report(ErrorCode::missing_key, at, fmt::format("{} has no '{}'", owner, key), expected);
    }
    return entry;
}

void Reader::unknown_key(const Entry& entry,
                         const std::string& owner,
                         const std::vector<std::string>& allowed) {
    std::string right;
    if (entry.at.setting < 0 && holds(top_level_keys(), entry.key)) {
        right = fmt::format(
            "'{}' is a key of the top level, and those stand above the first [table]", entry.key);
    } else if (errors_.size() < most_errors) {
        // A file of a million keys is refused without looking for what each may have meant.
        right = suggestion(entry.key, allowed);
    }
    report(ErrorCode::unknown_key,
           entry.at,
           fmt::format("{} has no key '{}'", owner, shown(entry.key)),
           std::move(right));
}

void Reader::only_keys(const Table& table,
                       const std::string& owner,
                       const std::vector<std::string>& allowed) {
    for (const Entry& entry : table) {
        if (!holds(allowed, entry.key)) {
            unknown_key(entry, owner, allowed);
        }
    }
}

const std::vector<std::string>& top_level_keys() {
    static const std::vector<std::string> keys = {"format",
                                                  "title",
                                                  "system",
                                                  "parameters",
                                                  "hamiltonian",
                                                  "grid",
                                                  "quantity",
                                                  "tolerance",
                                                  "routes"};
    return keys;
}

std::string name_in(const std::string& key, const std::string& owner) {
    return fmt::format("'{}' in {}", key, owner);
}

}  // namespace chainmark
