#pragma once

#include <complex>
#include <cstdint>
#include <optional>
#include <string>
#include <string_view>
#include <unordered_map>
#include <vector>

#include "chainmark/formats/byte_stream.hpp"

/// Named columns of cells, from CSV, TSV, columns between blanks, or JSON.
namespace chainmark {

/// Where a cell's text stands in the text of the file. Line 0: the cell is absent there.
struct CellSpan {
    std::uint64_t begin = 0;
    std::uint32_t size = 0;
    std::int32_t line = 0;
};

class Table {
public:
    /// `cells` row by row, names.size() of them each. `printed`: the numbers are text that a
    /// program printed, so that their digits mean something.
    Table(Text text,
          std::vector<std::string> names,
          std::vector<CellSpan> cells,
          bool printed,
          MemoryShare memory);

    const std::string& source() const { return text_.source; }
    bool printed() const { return printed_; }
    std::size_t rows() const { return names_.empty() ? 0 : cells_.size() / names_.size(); }
    const std::vector<std::string>& names() const { return names_; }

    std::optional<std::size_t> find(const std::string& name) const;

    /// The column's number. Fails with `missing_key` and the nearest name there is.
    Result<std::size_t> column(const std::string& name) const;

    /// The cell's text without quotes and outer blanks; empty where the file has nothing. Valid as
    /// long as the table.
    std::string_view text(std::size_t row, std::size_t column) const;

    /// Line and column in the file, for messages.
    Place place(std::size_t row, std::size_t column) const;

    /// The cell as a real number; NaN and infinities are values. Fails with `bad_value`.
    Result<double> real(std::size_t row, std::size_t column) const;

    /// The cell as a number that may be complex.
    Result<std::complex<double>> number(std::size_t row, std::size_t column) const;

private:
    const CellSpan& span(std::size_t row, std::size_t column) const;

    Text text_;
    std::vector<std::string> names_;
    std::vector<CellSpan> cells_;
    std::unordered_map<std::string, std::size_t> index_;
    bool printed_;
    MemoryShare memory_;
};

/// Reads a table: JSON where the name ends in .json (or .json.gz), else text in columns. Fails as
/// `read_text`, `read_delimited` and `read_json_table` do.
Result<Table> read_table(const std::string& path, const Context& context);

/// Bytes that the names of a table's columns and their index take, generously.
double bytes_of_names(const std::vector<std::string>& names);

}  // namespace chainmark
