#pragma once

#include <string>
#include <string_view>
#include <utility>
#include <vector>

/// Plain text for a terminal.
namespace chainmark {

/// Columns that `text` (UTF-8) takes, one per character.
std::size_t display_width(std::string_view text);

/// `text` padded with spaces to `width` columns.
std::string padded(std::string text, std::size_t width);

/// `text` with control characters, which could steer the terminal, replaced by spaces.
std::string printable(std::string text);

/// `words` separated by `separator` in lines of at most `width` columns where the words allow; the
/// separator's trailing spaces do not end a line. Every line starts with `indent` spaces.
std::string wrapped(const std::vector<std::string>& words,
                    std::string_view separator,
                    std::size_t indent,
                    std::size_t width);

/// The same for the words of a sentence.
std::string wrapped(std::string_view sentence, std::size_t indent, std::size_t width);

/// Terms in a column, their explanations beside them, one paragraph each.
std::string definition_list(
    const std::vector<std::pair<std::string, std::vector<std::string>>>& entries);

/// How the cells of a column stand below each other.
enum class Align { left, right, point };  ///< point: numbers by their decimal point

struct Column {
    std::string heading;
    Align align = Align::left;
};

/// A cell; `before` and `after` (colours) take no columns.
struct Cell {
    std::string text;
    std::string before = {};
    std::string after = {};
};

/// Rows in columns two spaces apart, each row with optional lines of text below it. A column that
/// is empty in every row is left out.
class TextTable {
public:
    explicit TextTable(std::vector<Column> columns) : columns_(std::move(columns)) {}

    void add_row(std::vector<Cell> cells, std::string below = {});

    /// Complete lines below the last row (or the headings), as they are.
    void add_text(std::string lines);

    std::string text(std::size_t indent) const;

private:
    struct Row {
        std::vector<Cell> cells;  ///< empty: `below` alone
        std::string below;
    };

    std::vector<std::string> column_texts(std::size_t column) const;
    std::string line(const std::vector<std::vector<std::string>>& texts,
                     std::size_t row,
                     std::size_t indent) const;

    std::vector<Column> columns_;
    std::vector<Row> rows_;
};

}  // namespace chainmark
