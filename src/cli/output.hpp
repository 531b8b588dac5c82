#pragma once

#include <string>

#include "chainmark/base/error.hpp"

namespace chainmark::cli {

/// Stands for standard output where a file is asked for.
inline constexpr const char* standard_output = "-";

/// One error a line on stderr.
void print_errors(const Errors& errors);

/// `text` to the file `path`, or to standard output for "-". Fails with `cannot_write`.
Result<void> write_output(const std::string& path, const std::string& text);

/// True where stdout is a terminal that shows colours and the user has not set NO_COLOR.
bool stdout_shows_colour();

/// `write_output` with the error printed; the exit code.
int print_output(const std::string& path, const std::string& text);

}  // namespace chainmark::cli
