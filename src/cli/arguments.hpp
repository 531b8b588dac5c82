#pragma once

#include <string>
#include <vector>

#include <CLI/CLI.hpp>

namespace chainmark::cli {

/// What a CASE argument may be.
inline constexpr const char* case_forms = "a file, a folder, or the name of an embedded case";

/// Gives an option a value of the form `form`, such as "FILE|-". What looks like another option is
/// refused: the value was forgotten.
CLI::Option* takes_value(CLI::Option* option, const std::string& form);

/// Adds --set KEY=VALUE, as often as it is given; `parse_settings` takes the texts apart.
void add_set_option(CLI::App& command, std::vector<std::string>& settings);

/// What to tell the user about words that could not be understood or are missing: the word, and
/// what would be right, with the nearest command or option.
std::string explain(const CLI::App& app, const CLI::ParseError& error);

/// The arguments as they could be typed in a shell.
std::string command_line(int argc, const char* const* argv);

}  // namespace chainmark::cli
