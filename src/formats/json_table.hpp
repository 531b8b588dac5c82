#pragma once

#include "chainmark/formats/table.hpp"

namespace chainmark {

/// A table written as JSON: an array of records ([{"sites": 8, "E": -3.6}, ...]), an object whose
/// members are all arrays, the columns ({"sites": [8, 10], "E": [...]}), or one record.
///
/// Arrays inside a record become the columns name[0], name[1], name[1][0], objects name.inner. A
/// record, or the object of the columns, with "complex": true (or "complex": ["name", ...], for
/// these alone) holds its complex numbers as pairs [re, im], each of which is then one cell; the
/// key "complex" itself is no column. A key that some records lack, and null, are empty cells.
/// JSON numbers count as full doubles: `Table::printed` is false.
///
/// Fails with `bad_syntax` and line and column, and as `read_text` does.
Result<Table> read_json_table(const std::string& path, const Context& context);

}  // namespace chainmark
