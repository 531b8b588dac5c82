#include <algorithm>
#include <limits>

#include <fmt/format.h>

#include "chainmark/casefile/sections.hpp"

namespace chainmark {
namespace {

const std::string owner = "[hamiltonian]";

std::vector<std::string> family_names() {
    std::vector<std::string> names;
    for (const Family& family : families()) {
        names.push_back(family.name);
    }
    return names;
}

std::vector<std::string> parameter_names(const Family& family) {
    std::vector<std::string> names;
    for (const FamilyParameter& parameter : family.parameters) {
        names.push_back(parameter.name);
    }
    return names;
}

bool holds(const std::vector<std::string>& words, const std::string& word) {
    return std::find(words.begin(), words.end(), word) != words.end();
}

/// Letters, digits and _, not starting with a digit.
bool is_name(const std::string& text) {
    const auto is_letter = [](char c) {
        return (c >= 'a' && c <= 'z') || (c >= 'A' && c <= 'Z') || c == '_';
    };
    return !text.empty() && is_letter(text.front()) &&
           std::all_of(text.begin(), text.end(), [&](char c) {
               return is_letter(c) || (c >= '0' && c <= '9');
           });
}

void read_parameters(Reader& reader, const Table& root, Draft& draft) {
    const Table* table = find_section(reader, root, "parameters");
    if (table == nullptr) {
        return;
    }
    constexpr std::size_t most_parameters = 100;
    if (table->size() > most_parameters) {
        reader.report(ErrorCode::grid_too_large,
                      find(root, "parameters")->at,
                      fmt::format("[parameters] has {} names", table->size()),
                      fmt::format("take at most {}", most_parameters));
        draft.terms_complete = false;
        return;
    }
    std::vector<std::string> taken = {"sites", "temperature", "h"};
    if (draft.result.family != nullptr) {
        for (const std::string& name : parameter_names(*draft.result.family)) {
            taken.push_back(name);
        }
    }
    for (const Entry& entry : *table) {
        const bool clashes = holds(taken, entry.key);
        if (clashes || !is_name(entry.key)) {
            reader.report(ErrorCode::bad_value,
                          entry.at,
                          fmt::format("'{}' cannot name a parameter", shown(entry.key)),
                          clashes ? "the case has that name already: take another"
                                  : "a name holds letters, digits and _ and starts with no digit");
        }
        draft.parameters.push_back(entry.key);
        read_axis(reader, entry, "[parameters]", GridKind::real, draft);
    }
}

/// Keys that only a family gives a meaning.
void refuse_without_family(Reader& reader, const Table& table) {
    for (const Entry& entry : table) {
        if (holds({"family", "term"}, entry.key)) {
            continue;
        }
        const bool of_families =
            std::any_of(families().begin(), families().end(), [&](const Family& family) {
                return holds(parameter_names(family), entry.key);
            });
        if (entry.key != "h" && !of_families) {
            reader.unknown_key(entry, owner, {"family", "h", "term"});
            continue;
        }
        reader.report(ErrorCode::unknown_key,
                      entry.at,
                      fmt::format("{} has no key '{}' without a family", owner, entry.key),
                      of_families
                          ? "name the family, or write [[hamiltonian.term]]"
                          : "write the field as a [[hamiltonian.term]] with operators = [\"Sz\"]");
    }
}

void read_family_parameters(
    Reader& reader, const Table& table, const Position& at, const Family& family, Draft& draft) {
    std::vector<std::string> keys = {"family"};
    for (const FamilyParameter& parameter : family.parameters) {
        keys.push_back(parameter.name);
        const Entry* entry = reader.need(
            table,
            at,
            fmt::format("{} with the family '{}'", owner, family.name),
            parameter.name,
            fmt::format("{} ({}) is a number or a grid", parameter.name, parameter.sentence));
        if (entry != nullptr) {
            read_axis(reader, *entry, owner, GridKind::real, draft);
        }
    }
    keys.insert(keys.end(), {"h", "term"});
    reader.only_keys(table, owner, keys);
    if (const Entry* field = find(table, "h")) {
        read_axis(reader, *field, owner, GridKind::real, draft);
    } else {
        // Like a setting after all others: varies fastest.
        const Position end = {.setting = std::numeric_limits<int>::max()};
        draft.axes.push_back({"h", end, at, {{0.0, at}}});
    }
}

void read_terms(Reader& reader, const Entry& entry, Draft& draft) {
    const auto* list = std::get_if<List>(&entry.value.value);
    if (list == nullptr) {
        reader.wrong_type(entry.value, name_in("term", owner), "[[hamiltonian.term]]");
        draft.terms_complete = false;
        return;
    }
    for (const Node& node : *list) {
        read_term(reader, node, draft);
    }
}

void refuse_unused(Reader& reader, const Table& root, const Draft& draft) {
    const Entry* section = find(root, "parameters");
    const Table* table = section == nullptr ? nullptr : std::get_if<Table>(&section->value.value);
    if (table == nullptr || !draft.terms_complete) {
        return;
    }
    for (const Entry& entry : *table) {
        if (draft.used_parameters.count(entry.key) == 0) {
            reader.report(
                ErrorCode::bad_value,
                entry.at,
                fmt::format("the parameter '{}' is used by no term", shown(entry.key)),
                fmt::format("remove it, or use it in a [[hamiltonian.term]] as coupling = "
                            "{{ parameter = \"{}\" }}",
                            shown(entry.key)));
        }
    }
}

const Family* read_family(Reader& reader, const Entry& entry) {
    const auto names = family_names();
    const auto chosen = reader.choice(entry.value, name_in("family", owner), names);
    return chosen ? find_family(names[*chosen]) : nullptr;
}

}  // namespace

void read_hamiltonian(Reader& reader, const Table& root, Draft& draft) {
    const std::string wanted = "a family with its parameters, or [[hamiltonian.term]]";
    const Entry* section = reader.need(root, {}, "the case", "hamiltonian", "expected " + wanted);
    const Table* table = find_section(reader, root, "hamiltonian");
    const Entry* family = table == nullptr ? nullptr : find(*table, "family");
    const Entry* terms = table == nullptr ? nullptr : find(*table, "term");
    if (family != nullptr) {
        draft.result.family = read_family(reader, *family);
    }
    read_parameters(reader, root, draft);
    if (table == nullptr) {
        return;
    }
    if (draft.result.family != nullptr) {
        read_family_parameters(reader, *table, section->at, *draft.result.family, draft);
    } else if (family == nullptr) {
        refuse_without_family(reader, *table);
    }
    if (terms != nullptr) {
        read_terms(reader, *terms, draft);
    }
    const bool no_terms = draft.terms_complete && draft.result.terms.empty();
    if (family == nullptr && no_terms) {
        reader.report(ErrorCode::missing_key,
                      section->at,
                      fmt::format("{} has neither 'family' nor a term", owner),
                      "expected " + wanted);
    } else {
        refuse_unused(reader, root, draft);
    }
}

}  // namespace chainmark
