#pragma once

#include <string>
#include <string_view>

#include "chainmark/base/error.hpp"

/// Output files.
namespace chainmark {

/// Whether `path` could be written now: an existing file that may be changed, or a new one in a
/// folder that may. Touches nothing. Fails with `cannot_write`.
Result<void> check_writable(const std::string& path);

/// Replaces the content of `path`. Fails with `cannot_write`, also where the disk is full.
Result<void> write_file(const std::string& path, std::string_view content);

}  // namespace chainmark
