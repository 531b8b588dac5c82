#pragma once

#include <string>

#include "chainmark/base/context.hpp"
#include "chainmark/base/error.hpp"

namespace chainmark {

/// SHA-256 (FIPS 180-4) of the bytes of a file, as 64 lower-case hexadecimal digits: what
/// sha256sum prints. Fails with `cannot_read`.
Result<std::string> sha256_of_file(const std::string& path, const Context& context);

}  // namespace chainmark
