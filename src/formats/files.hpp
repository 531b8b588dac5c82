#pragma once

#include <string>
#include <string_view>

#include "chainmark/base/error.hpp"

/// Output files.
namespace chainmark {

/// Whether `path` could be written now: an existing file that may be changed, or a new one in a
/// folder that may. Touches nothing. Fails with `cannot_write`.
Result<void> check_writable(const std::string& path);

/// Replaces the content of `path`, all of it or nothing: it is written beside and then renamed, so
/// that no reader ever sees half a file, and a full disk leaves the old one. Devices, and files in
/// folders that take no new ones, are written in place. Fails with `cannot_write`.
Result<void> write_file(const std::string& path, std::string_view content);

}  // namespace chainmark
