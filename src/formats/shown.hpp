#pragma once

#include <string>
#include <string_view>

#include "chainmark/base/error.hpp"

/// Pieces of foreign files in messages.
namespace chainmark {

/// The text in single quotes, at most 40 bytes of it, with what is not printable ASCII as \xNN:
/// foreign text must not be able to steer a terminal.
std::string shown(std::string_view text);

/// An error of a reader, as it goes into a Result.
tl::unexpected<Error> refuse(ErrorCode code,
                             Place where,
                             std::string found,
                             std::string allowed = "");

}  // namespace chainmark
