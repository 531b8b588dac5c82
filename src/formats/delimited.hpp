#pragma once

#include "chainmark/formats/table.hpp"

namespace chainmark {

/// Text in columns: separated by commas (RFC 4180, doubled quotes), semicolons, tabs or blanks,
/// whatever the line of the column names shows. The names stand in the first line, or in the last
/// comment line (#) before the first line of numbers. Other comment lines and blank lines are
/// skipped. A cell that starts with a parenthesis reaches to the closing one: "(0.5,0.1)" is one
/// cell in any of them.
///
/// Fails with `bad_syntax` and line and column: no names, a name twice, too few or too many cells
/// in a row, a quote that does not end, decimal commas; and as `read_text` does.
Result<Table> read_delimited(const std::string& path, const Context& context);

}  // namespace chainmark
