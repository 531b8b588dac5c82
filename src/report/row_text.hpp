#pragma once

#include <string>

#include "chainmark/plan/plan.hpp"

/// What a table of the terminal report says about one quantity at one point.
namespace chainmark {

/// Columns of the terminal report.
inline constexpr std::size_t page_width = 110;

/// True for what the reader has to look at: differ, undecided.
bool is_bad(Verdict verdict);

/// A number to its certain digits, a text, "[8 values]", or a status in words.
std::string value_cell(const Reference& reference);

/// The largest bound of the ordinary elements; empty for a text.
std::string bound_cell(const Reference& reference);

/// The infinite chain's number or text; empty without one, and for arrays.
std::string infinite_cell(const QuantityResult& result);

/// "sector fermion", or "none".
std::string route_names(const QuantityResult& result);

/// The lines below the row: elements of arrays, the total Sz of jump fields, and for what differs
/// or is undecided the reason and every route's own value.
std::string lines_below(const QuantityResult& result);

}  // namespace chainmark
