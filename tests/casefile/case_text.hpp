#pragma once

#include <string>
#include <vector>

#include <doctest/doctest.h>

#include "chainmark/casefile/case.hpp"

namespace chainmark::test {

/// A valid case; line 3 is `sites`, line 6 `J`.
inline const std::string small_case =
    "format = 1\n"
    "[system]\n"
    "sites = [8, 12]\n"
    "[hamiltonian]\n"
    "family = \"xx\"\n"
    "J = 1.0\n"
    "[[quantity]]\n"
    "name = \"ground_energy\"\n";

/// small_case with `from` replaced by `to`.
inline std::string changed(const std::string& from,
                           const std::string& to,
                           std::string text = small_case) {
    const std::size_t at = text.find(from);
    REQUIRE(at != std::string::npos);
    return text.replace(at, from.size(), to);
}

inline std::string listing(const Errors& errors) {
    std::string text;
    for (const Error& error : errors) {
        text += error_id(error.code) + " " + to_string(error) + "\n";
    }
    return text;
}

inline Errors errors_of(const std::string& text, const std::vector<Setting>& settings = {}) {
    const Checked<Case> result = parse_case(text, "c.toml", settings);
    return result ? Errors{} : result.error();
}

inline Case case_of(const std::string& text, const std::vector<Setting>& settings = {}) {
    Checked<Case> result = parse_case(text, "c.toml", settings);
    const std::string errors = result ? "" : listing(result.error());
    INFO(text);
    INFO(errors);
    REQUIRE(result.has_value());
    return *result;
}

/// What an error is expected to say: words that must stand in its line as printed.
struct Expected {
    ErrorCode code;
    std::string place;  ///< "c.toml:3:9"
    std::vector<std::string> words;
};

/// Exactly one error, the expected one.
inline void check_only_error(const std::string& text,
                             const Expected& expected,
                             const std::vector<Setting>& settings = {}) {
    const Errors errors = errors_of(text, settings);
    INFO(text.substr(0, 1000));
    INFO(listing(errors));
    REQUIRE(errors.size() == 1);
    CHECK(error_id(errors[0].code) == error_id(expected.code));
    CHECK(to_string(errors[0].where) == expected.place);
    const std::string line = to_string(errors[0]);
    for (const std::string& word : expected.words) {
        INFO(word);
        CHECK(line.find(word) != std::string::npos);
    }
}

}  // namespace chainmark::test
