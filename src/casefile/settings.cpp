#include "chainmark/casefile/settings.hpp"

#include <algorithm>

#include <fmt/format.h>

#include "chainmark/base/words.hpp"
#include "chainmark/operators/hamiltonian.hpp"

namespace chainmark {
namespace {

using Words = std::vector<std::string>;

bool holds(const Words& words, const std::string& word) {
    return std::find(words.begin(), words.end(), word) != words.end();
}

Words hamiltonian_names() {
    Words names = {"family", "h"};
    for (const Family& family : families()) {
        for (const FamilyParameter& parameter : family.parameters) {
            if (!holds(names, parameter.name)) {
                names.push_back(parameter.name);
            }
        }
    }
    return names;
}

/// The tables a bare name is looked for in, in this order: a name that the case gives comes first.
struct Section {
    std::string name;
    Words keys;
};

std::vector<Section> bare_names(const Words& parameters) {
    return {{"parameters", parameters},
            {"system", {"sites", "boundary", "coincident", "spin", "temperature"}},
            {"hamiltonian", hamiltonian_names()},
            {"grid", {"combine"}},
            {"tolerance", {"absolute", "relative"}},
            {"routes", {"use"}}};
}

Error unknown_setting(const std::string& key, const std::string& allowed) {
    return {ErrorCode::bad_option, {}, fmt::format("nothing can be set by '{}'", key), allowed};
}

}  // namespace

Result<KeyPath> setting_path(const std::string& key, const Words& parameters) {
    const std::size_t dot = key.find('.');
    if (dot != std::string::npos) {
        const Words sections = {
            "system", "parameters", "hamiltonian", "grid", "tolerance", "routes"};
        const std::string section = key.substr(0, dot);
        const std::string name = key.substr(dot + 1);
        if (name.empty() || name.find('.') != std::string::npos) {
            return tl::unexpected(unknown_setting(
                key, "a path has two parts, SECTION.NAME, such as system.boundary"));
        }
        if (!holds(sections, section)) {
            return tl::unexpected(unknown_setting(key, suggestion(section, sections)));
        }
        return KeyPath{section, name};
    }
    if (key == "title") {
        return KeyPath{key};
    }
    Words known = {"title"};
    for (const Section& section : bare_names(parameters)) {
        if (holds(section.keys, key)) {
            return KeyPath{section.name, key};
        }
        known.insert(known.end(), section.keys.begin(), section.keys.end());
    }
    return tl::unexpected(
        unknown_setting(key, suggestion(key, known) + ", or SECTION.NAME as in the file"));
}

}  // namespace chainmark
