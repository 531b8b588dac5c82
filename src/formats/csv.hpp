#pragma once

#include <string>
#include <string_view>
#include <vector>

/// Comma-separated tables.
namespace chainmark {

/// The field as it stands in a line: in quotes, inner quotes doubled, where it holds a comma, a
/// quote, a line break or outer spaces (RFC 4180, section 2, rules 5 to 7).
std::string csv_field(std::string_view text);

/// The fields as one line, with its line feed.
std::string csv_line(const std::vector<std::string>& fields);

}  // namespace chainmark
