#include "chainmark/formats/delimited.hpp"

#include <algorithm>
#include <limits>

#include <fmt/format.h>

#include "chainmark/base/words.hpp"
#include "chainmark/formats/line_cutter.hpp"
#include "chainmark/formats/number_reading.hpp"
#include "chainmark/formats/shown.hpp"

namespace chainmark {
namespace {

/// What separates the cells of a line, from the characters outside quotes and parentheses.
char separator_of(std::string_view line) {
    bool quoted = false;
    int depth = 0;
    bool comma = false;
    bool tab = false;
    char before = blanks;
    for (const char c : line) {
        if (c == '#' && before == blanks && !comma && !quoted) {
            break;  // a comment
        }
        before = c == '\t' ? blanks : c;
        quoted = c == '"' ? !quoted : quoted;
        if (quoted) {
            continue;
        }
        depth = std::max(0, depth + (c == '(' ? 1 : 0) - (c == ')' ? 1 : 0));
        if (c == ';') {
            return ';';
        }
        comma = comma || (c == ',' && depth == 0);
        tab = tab || c == '\t';
    }
    return comma ? ',' : tab ? '\t' : blanks;
}

/// From `begin` to the line break outside of quotes.
std::string_view line_at(const Text& text, std::size_t begin) {
    const std::string_view view = text.view();
    bool quoted = false;
    std::size_t end = begin;
    while (end < view.size() && (quoted || view[end] != '\n')) {
        quoted = view[end] == '"' ? !quoted : quoted;
        ++end;
    }
    return view.substr(begin, end - begin);
}

/// A comment line that may hold the names.
struct Comment {
    std::size_t begin = 0;
    std::size_t end = 0;
    std::int32_t line = 0;
};

class DelimitedReader {
public:
    DelimitedReader(Text text, const Context& context)
        : text_(std::move(text)),
          context_(context),
          first_room_(context),
          memory_(context),
          lines_(text_, 0, text_.size, 1) {}

    Result<Table> read() {
        Result<void> done = read_names();
        if (done) {
            done = check_names();
        }
        if (done) {
            done = read_rows();
        }
        if (!done) {
            return tl::unexpected(done.error());
        }
        return Table(
            std::move(text_), std::move(names_), std::move(cells_), true, std::move(memory_));
    }

private:
    std::string_view view(const CellSpan& cell) const {
        return {text_.bytes.get() + cell.begin, cell.size};
    }

    /// Skips to the next line with cells; remembers comment lines.
    bool to_content() {
        while (!lines_.at_end()) {
            const char first = lines_.first_character();
            if (first != '\n' && first != '#') {
                return true;
            }
            const std::size_t begin = lines_.at();
            const std::int32_t line = lines_.line();
            lines_.skip_line();
            if (first == '#') {
                comment_ = {text_.view().find_first_not_of("# \t", begin), lines_.at(), line};
            }
        }
        return false;
    }

    Result<void> read_names() {
        if (!to_content()) {
            return refuse(ErrorCode::bad_syntax,
                          {.source = text_.source},
                          "the file holds no table",
                          "a line with the names of the columns, then lines of values");
        }
        const std::string_view line = line_at(text_, lines_.at());
        const char separator = separator_of(line);
        LineCutter first = lines_;
        first.set_separator(separator);
        std::vector<CellSpan> cells;
        // Each cell takes at least one byte of the line; a vector grows to twice its content.
        const double most = 2.0 * sizeof(CellSpan) * static_cast<double>(line.size() + 1);
        Result<void> done = first_room_.take(most, text_.source, "the first line");
        if (done) {
            done = first.cut(cells);
        }
        if (!done) {
            return done;
        }
        const bool numbers = std::any_of(cells.begin(), cells.end(), [this](const CellSpan& cell) {
            return read_number(view(cell)).has_value();
        });
        const std::int32_t line_of_first = lines_.line();
        lines_ = first;
        if (!numbers) {
            return set_names(cells);
        }
        first_row_ = std::move(cells);
        return names_from_comment(line_of_first);
    }

    /// The first line is one of values: their names must stand in the comment before it.
    Result<void> names_from_comment(std::int32_t line_of_first) {
        for (const char named_by : {lines_.separator(), blanks, ','}) {
            if (comment_.line == 0 || comment_.begin >= comment_.end) {
                break;
            }
            LineCutter header(text_, comment_.begin, comment_.end, comment_.line);
            header.set_separator(named_by);
            std::vector<CellSpan> cells;
            const std::size_t most = 2 * sizeof(CellSpan) * (comment_.end - comment_.begin + 1);
            MemoryShare room(context_);
            Result<void> done =
                room.take(static_cast<double>(most), text_.source, "a comment line");
            if (done && header.cut(cells) && cells.size() == first_row_.size()) {
                return set_names(cells);
            }
        }
        return refuse(
            ErrorCode::bad_syntax,
            {text_.source, line_of_first, 1},
            fmt::format("the first line that is no comment holds numbers ({}), and no comment "
                        "before it names its columns",
                        counted(first_row_.size(), "column")),
            "a first line with the name of every column");
    }

    Result<void> set_names(const std::vector<CellSpan>& cells) {
        for (const CellSpan& cell : cells) {
            names_.emplace_back(view(cell));
        }
        header_line_ = cells.empty() ? 0 : cells.front().line;
        return memory_.take(bytes_of_names(names_), text_.source, "the column names");
    }

    Result<void> check_names() const {
        std::vector<std::string_view> sorted(names_.begin(), names_.end());
        std::sort(sorted.begin(), sorted.end());
        const auto twice = std::adjacent_find(sorted.begin(), sorted.end());
        if (twice != sorted.end()) {
            return refuse(ErrorCode::bad_syntax,
                          {text_.source, header_line_, 1},
                          twice->empty() ? "two columns have no name"
                                         : fmt::format("column {} occurs twice", shown(*twice)),
                          "one column a name");
        }
        return {};
    }

    /// Every row has a line and names_.size() cells, and every cell at least a byte to itself.
    Result<void> reserve() {
        const std::string_view rest = text_.view().substr(lines_.at());
        const auto breaks = std::count(rest.begin(), rest.end(), '\n') + 1;
        if (breaks > std::numeric_limits<std::int32_t>::max() / 2) {
            return refuse(ErrorCode::bad_syntax, {.source = text_.source}, "over 10^9 lines");
        }
        const double cells =
            std::min(static_cast<double>(breaks) * static_cast<double>(names_.size()),
                     static_cast<double>(rest.size() + 1));
        const double room = cells + static_cast<double>(names_.size());
        Result<void> taken = memory_.take(room * sizeof(CellSpan), text_.source, "the table");
        if (taken) {
            cells_.reserve(static_cast<std::size_t>(room));
            cells_.insert(cells_.end(), first_row_.begin(), first_row_.end());
        }
        return taken;
    }

    Result<void> read_rows() {
        Result<void> done = reserve();
        constexpr std::size_t often = 1U << 16;
        for (std::size_t row = 0; done && to_content(); ++row) {
            if (row % often == 0) {
                poll(context_);
            }
            const std::int32_t line = lines_.line();
            const std::size_t before = cells_.size();
            done = lines_.cut(cells_);
            const std::size_t found = cells_.size() - before;
            if (done && found != names_.size()) {
                done = wrong_count(line, found);
            }
        }
        return done;
    }

    tl::unexpected<Error> wrong_count(std::int32_t line, std::size_t found) const {
        return refuse(ErrorCode::bad_syntax,
                      {text_.source, line, 1},
                      fmt::format("the line has {}, the names of line {} have {}, separated by {}",
                                  counted(found, "cell"),
                                  header_line_,
                                  names_.size(),
                                  separator_name(lines_.separator())),
                      "one cell a column; quote cells that hold the separator, and write decimals "
                      "behind a point");
    }

    Text text_;
    const Context& context_;
    MemoryShare first_room_;
    MemoryShare memory_;
    LineCutter lines_;
    Comment comment_;
    std::vector<std::string> names_;
    std::vector<CellSpan> first_row_;  ///< where the first line is one of values
    std::vector<CellSpan> cells_;
    std::int32_t header_line_ = 0;
};

}  // namespace

Result<Table> read_delimited(const std::string& path, const Context& context) {
    Result<Text> text = read_text(path, context);
    if (!text) {
        return tl::unexpected(text.error());
    }
    return DelimitedReader(std::move(*text), context).read();
}

}  // namespace chainmark
