#pragma once

#include <string>

#include <CLI/CLI.hpp>

namespace chainmark::cli {

/// What to tell the user about words that could not be understood: the word, and what would be
/// right, with the nearest command or option.
std::string explain(const CLI::App& app, const CLI::ParseError& error);

/// The arguments as they could be typed in a shell.
std::string command_line(int argc, const char* const* argv);

}  // namespace chainmark::cli
