#include "chainmark/formats/json_table.hpp"

#include <algorithm>
#include <limits>
#include <unordered_set>

#include <fmt/format.h>

#include "chainmark/base/words.hpp"
#include "chainmark/formats/json_events.hpp"

namespace chainmark {
namespace {

constexpr const char* records_example = R"(records: [{"sites": 8, "E": -3.6}, ...])";

/// A cell before its place in the table is known.
struct Placed {
    std::uint32_t row;
    std::uint32_t column;
    CellSpan span;
};

enum class Layout { records, columns, one_record };

/// P of the name "P[digit]" with that digit, else empty.
std::string_view stem(std::string_view name, char digit) {
    const std::size_t size = name.size();
    const bool fits =
        size > 3 && name[size - 3] == '[' && name[size - 2] == digit && name[size - 1] == ']';
    return fits ? name.substr(0, size - 3) : std::string_view();
}

/// Turns the events of a document into cells, whose texts stay where they stand in the file.
class TableEvents : public JsonEvents {
public:
    TableEvents(Text& text, Layout layout, MemoryShare& memory, const Context& context)
        : JsonEvents(text, context), bytes_(text.bytes.get()), layout_(layout), memory_(memory) {}

    std::vector<Placed> cells;
    std::vector<std::string> names;
    std::size_t rows() const { return layout_ == Layout::one_record ? 1 : rows_; }

    bool null() { return add(word(4).substr(0, 0)); }
    bool boolean(bool value) {
        if (in_flag_ && levels_.size() == record_depth()) {
            all_complex_ = value;
            return true;
        }
        return add(word(value ? 4 : 5));
    }
    // NOLINTNEXTLINE(readability-identifier-naming)
    bool number_integer(std::int64_t /*value*/) { return integer(); }
    bool number_unsigned(std::uint64_t /*value*/) { return integer(); }
    bool number_float(double /*value*/, const std::string& text) {
        return add({last() - text.size(), text.size()});
    }
    bool string(const std::string& value) {
        if (in_flag_) {
            complex_names_.insert(value);
            return took(memory_.take(
                128.0 + static_cast<double>(value.size()), text_.source, "a list of names"));
        }
        // An unescaped string is never longer than its escaped form, which has been read already.
        char* end = bytes_ + (last() - bytes_);
        std::copy(value.begin(), value.end(), end - value.size());
        return add({end - value.size(), value.size()});
    }
    bool binary(const std::vector<std::uint8_t>& /*value*/) { return false; }

    bool key(const std::string& name) {
        path_.resize(levels_.back().base);
        path_ += path_.empty() ? name : "." + name;
        in_flag_ = name == "complex" && levels_.size() == record_depth();
        return true;
    }
    bool start_object(std::size_t /*size*/) { return start(false); }
    bool start_array(std::size_t /*size*/) { return start(true); }
    bool end_object() { return end(); }
    bool end_array() {
        const bool column_ends = layout_ == Layout::columns && levels_.size() == 2 && !in_flag_;
        return (!column_ends || column_length_fits(levels_.back().index)) && end();
    }

private:
    struct Level {
        bool array = false;
        std::size_t base = 0;   ///< length of the path that leads here
        std::size_t index = 0;  ///< of the next element
    };

    /// Levels that are open while a record's own keys are read.
    std::size_t record_depth() const { return layout_ == Layout::records ? 2 : 1; }
    /// Whether the elements of the open array are the rows.
    bool elements_are_rows() const {
        return (layout_ == Layout::records && levels_.size() == 1) ||
               (layout_ == Layout::columns && levels_.size() == 2);
    }

    std::string_view word(std::size_t size) const { return {last() + 1 - size, size}; }

    bool integer() {
        const char* begin = last();
        while (begin > bytes_ && (begin[-1] == '-' || (begin[-1] >= '0' && begin[-1] <= '9'))) {
            --begin;
        }
        return add({begin, static_cast<std::size_t>(last() - begin)});
    }

    /// Moves the path to the value that comes now, and to its row.
    bool begin_value() {
        poll_sometimes();
        if (levels_.empty() || !levels_.back().array || in_flag_) {
            return true;
        }
        Level& top = levels_.back();
        path_.resize(top.base);
        if (!elements_are_rows()) {
            path_ += fmt::format("[{}]", top.index++);
            return true;
        }
        row_ = top.index++;
        rows_ = std::max(rows_, row_ + 1);
        record_start_ = layout_ == Layout::records ? cells.size() : 0;
        return row_ < std::numeric_limits<std::uint32_t>::max() ||
               fail("more than 4 * 10^9 rows", "");
    }

    bool start(bool array) {
        if (in_flag_) {
            return array && levels_.size() == record_depth() ? open(true) : bad_flag();
        }
        if (array && layout_ == Layout::records && levels_.size() == 1) {
            return fail("an array stands where a record is expected", records_example);
        }
        return begin_value() && open(array);
    }
    bool open(bool array) {
        levels_.push_back({array, path_.size(), 0});
        return true;
    }
    bool end() {
        const bool record_ends = levels_.size() == record_depth();
        levels_.pop_back();
        in_flag_ = false;
        if (record_ends) {
            join_pairs();
            all_complex_ = false;
            complex_names_.clear();
        }
        return true;
    }
    bool bad_flag() {
        return fail("\"complex\" is neither true nor false nor a list of names",
                    R"("complex": true, or "complex": ["czz"])");
    }

    bool column_length_fits(std::size_t length) {
        if (!first_length_) {
            first_length_ = length;
        }
        return length == *first_length_ ||
               fail(fmt::format("column {} has {}, the first column {}",
                                shown(std::string_view(path_).substr(0, levels_.back().base)),
                                counted(length, "element"),
                                *first_length_),
                    "columns of the same length");
    }

    bool add(std::string_view cell) {
        if (in_flag_) {
            return bad_flag();
        }
        if (!begin_value()) {
            return false;
        }
        if (layout_ == Layout::records && levels_.size() == 1) {
            return fail("a single value stands where a record is expected", records_example);
        }
        if (cell.size() > std::numeric_limits<std::uint32_t>::max()) {
            return fail("a text of over 4 GiB", "");
        }
        const std::optional<std::uint32_t> column = column_of_path();
        if (!column) {
            return false;
        }
        count_lines();
        cells.push_back({static_cast<std::uint32_t>(row_),
                         *column,
                         {static_cast<std::uint64_t>(cell.data() - bytes_),
                          static_cast<std::uint32_t>(cell.size()),
                          line_}});
        return true;
    }

    bool took(const Result<void>& taken) { return taken.has_value() || fail(taken.error()); }

    std::optional<std::uint32_t> column_of_path() {
        const auto found = index_.find(path_);
        if (found != index_.end()) {
            return found->second;
        }
        if (!took(memory_.take(2 * bytes_of_names({path_}), text_.source, "the column names"))) {
            return std::nullopt;
        }
        const auto column = static_cast<std::uint32_t>(names.size());
        names.push_back(path_);
        index_.emplace(path_, column);
        return column;
    }

    void count_lines() {
        for (; counted_to_ < last(); ++counted_to_) {
            line_ += *counted_to_ == '\n' ? 1 : 0;
        }
    }

    bool is_complex(std::string_view name) const {
        return all_complex_ ||
               (!complex_names_.empty() &&
                complex_names_.count(std::string(name.substr(0, name.find('[')))) > 0);
    }

    /// Whether cells at and at + 1 are the whole of an array [re, im].
    bool is_pair(std::size_t at) const {
        if (at + 1 >= cells.size() || cells[at + 1].row != cells[at].row) {
            return false;
        }
        const std::string_view name = stem(names[cells[at].column], '0');
        const bool goes_on = at + 2 < cells.size() && cells[at + 2].row == cells[at].row &&
                             stem(names[cells[at + 2].column], '2') == name;
        return !name.empty() && stem(names[cells[at + 1].column], '1') == name && !goes_on &&
               is_complex(name);
    }

    /// Makes one cell "(re, im)" of each pair of the record that ends: there is a bracket or a
    /// blank on either side, which the parentheses replace.
    void join_pairs() {
        count_lines();  // the parentheses may take the places of line breaks
        std::size_t to = record_start_;
        for (std::size_t at = record_start_; at < cells.size(); ++at, ++to) {
            if (!is_pair(at)) {
                cells[to] = cells[at];
                continue;
            }
            path_ = stem(names[cells[at].column], '0');
            const std::optional<std::uint32_t> column = column_of_path();
            const std::uint64_t begin = cells[at].span.begin - 1;
            const CellSpan& second = cells[at + 1].span;
            const std::uint64_t end = second.begin + second.size + 1;
            if (!column) {
                return;  // the error is kept
            }
            bytes_[begin] = '(';
            bytes_[end - 1] = ')';
            cells[to] = {cells[at].row,
                         *column,
                         {begin, static_cast<std::uint32_t>(end - begin), cells[at].span.line}};
            ++at;
        }
        cells.resize(to);
    }

    char* bytes_;
    Layout layout_;
    MemoryShare& memory_;
    std::vector<Level> levels_;
    std::string path_;
    std::unordered_map<std::string, std::uint32_t> index_;
    std::size_t row_ = 0;
    std::size_t rows_ = 0;
    std::size_t record_start_ = 0;
    std::optional<std::size_t> first_length_;
    bool in_flag_ = false;  ///< inside the value of "complex"
    bool all_complex_ = false;
    std::unordered_set<std::string> complex_names_;
    const char* counted_to_ = bytes_;
    std::int32_t line_ = 1;
};

/// Columns without a cell go: those of complex parts that were joined.
void drop_unused_columns(TableEvents& events) {
    std::vector<bool> used(events.names.size(), false);
    for (const Placed& cell : events.cells) {
        used[cell.column] = true;
    }
    std::vector<std::uint32_t> moved(events.names.size(), 0);
    std::vector<std::string> kept;
    for (std::size_t i = 0; i < used.size(); ++i) {
        moved[i] = static_cast<std::uint32_t>(kept.size());
        if (used[i]) {
            kept.push_back(events.names[i]);
        }
    }
    for (Placed& cell : events.cells) {
        cell.column = moved[cell.column];
    }
    events.names = std::move(kept);
}

Result<Table> assembled(Text text, TableEvents& events, MemoryShare memory) {
    drop_unused_columns(events);
    const std::size_t width = events.names.size();
    const double count = static_cast<double>(width) * static_cast<double>(events.rows());
    Result<void> taken = memory.take(count * sizeof(CellSpan), text.source, "the table");
    if (!taken) {
        return tl::unexpected(taken.error());
    }
    std::vector<CellSpan> cells(width * events.rows());
    for (const Placed& cell : events.cells) {
        CellSpan& place = cells[cell.row * width + cell.column];
        if (place.line != 0) {
            return refuse(
                ErrorCode::bad_syntax,
                {text.source, cell.span.line, 1},
                fmt::format("{} occurs twice in a record", shown(events.names[cell.column])),
                "each key once");
        }
        place = cell.span;
    }
    return Table(
        std::move(text), std::move(events.names), std::move(cells), false, std::move(memory));
}

Layout layout_of(const JsonSurvey& survey) {
    if (survey.top_is_array) {
        return Layout::records;
    }
    return survey.members_are_arrays && survey.containers > 1 ? Layout::columns
                                                              : Layout::one_record;
}

}  // namespace

Result<Table> read_json_table(const std::string& path, const Context& context) {
    Result<Text> text = read_json_text(path, context);
    if (!text) {
        return tl::unexpected(text.error());
    }
    const Result<JsonSurvey> survey = survey_json(*text, context);
    if (!survey) {
        return tl::unexpected(survey.error());
    }
    if (!survey->top_is_array && !survey->top_is_object) {
        return refuse(ErrorCode::bad_syntax,
                      {path, 1, 1},
                      "the document is a single value",
                      std::string(records_example) + ", or an object of columns");
    }
    MemoryShare memory(context);
    MemoryShare passing(context);
    const auto scalars = static_cast<std::size_t>(survey->scalars);
    Result<void> taken =
        passing.take(static_cast<double>(scalars * sizeof(Placed)), path, "the cells");
    if (!taken) {
        return tl::unexpected(taken.error());
    }
    TableEvents events(*text, layout_of(*survey), memory, context);
    events.cells.reserve(scalars);
    if (const std::optional<Error> error = run_events(events)) {
        return tl::unexpected(*error);
    }
    if (events.names.empty()) {
        return refuse(ErrorCode::bad_syntax,
                      {path, 1, 1},
                      "the document holds no values",
                      std::string(records_example) + ", or an object of columns");
    }
    return assembled(std::move(*text), events, std::move(memory));
}

}  // namespace chainmark
