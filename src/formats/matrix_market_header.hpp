#pragma once

#include "chainmark/formats/line_reader.hpp"
#include "chainmark/formats/matrix_market.hpp"

namespace chainmark {

/// The next line that is neither blank nor a comment; false at the end.
Result<bool> next_content(LineReader& lines, std::string_view& line);

/// Reads up to and with the line of the sizes.
Result<MatrixMarketHeader> read_matrix_market_header(LineReader& lines);

/// The first word of `line`, which is cut off; empty at its end.
std::string_view next_word(std::string_view& line);

}  // namespace chainmark
