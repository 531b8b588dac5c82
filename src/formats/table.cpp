#include "chainmark/formats/table.hpp"

#include <fmt/format.h>

#include "chainmark/base/words.hpp"
#include "chainmark/formats/delimited.hpp"
#include "chainmark/formats/json_table.hpp"
#include "chainmark/formats/number_reading.hpp"
#include "chainmark/formats/shown.hpp"

namespace chainmark {
namespace {

bool ends_in(std::string_view text, std::string_view end) {
    return text.size() >= end.size() && text.substr(text.size() - end.size()) == end;
}

Error bad_number(const Table& table, std::size_t row, std::size_t column, NumberFault fault) {
    const std::string& name = table.names()[column];
    const std::string_view text = table.text(row, column);
    return {ErrorCode::bad_value,
            table.place(row, column),
            text.empty() ? fmt::format("column {} is empty in data row {}", shown(name), row + 1)
                         : fmt::format("column {} holds {}", shown(name), shown(text)),
            allowed_instead(fault)};
}

}  // namespace

Table::Table(Text text,
             std::vector<std::string> names,
             std::vector<CellSpan> cells,
             bool printed,
             MemoryShare memory)
    : text_(std::move(text)),
      names_(std::move(names)),
      cells_(std::move(cells)),
      printed_(printed),
      memory_(std::move(memory)) {
    index_.reserve(names_.size());
    for (std::size_t i = 0; i < names_.size(); ++i) {
        index_.emplace(names_[i], i);
    }
}

std::optional<std::size_t> Table::find(const std::string& name) const {
    const auto found = index_.find(name);
    return found == index_.end() ? std::nullopt : std::optional(found->second);
}

Result<std::size_t> Table::column(const std::string& name) const {
    const std::optional<std::size_t> found = find(name);
    if (!found) {
        constexpr std::size_t few = 30;  // a list for people
        return refuse(ErrorCode::missing_key,
                      {.source = source()},
                      fmt::format("there is no column {}", shown(name)),
                      names_.size() <= few ? suggestion(name, names_)
                                           : fmt::format("there are {} columns, the first is {}",
                                                         names_.size(),
                                                         shown(names_.front())));
    }
    return *found;
}

const CellSpan& Table::span(std::size_t row, std::size_t column) const {
    CHAINMARK_EXPECTS(column < names_.size() && row < rows());
    return cells_[row * names_.size() + column];
}

std::string_view Table::text(std::size_t row, std::size_t column) const {
    const CellSpan& cell = span(row, column);
    return {text_.bytes.get() + cell.begin, cell.size};
}

Place Table::place(std::size_t row, std::size_t column) const {
    const CellSpan& cell = span(row, column);
    if (cell.line == 0) {
        return {.source = source()};
    }
    std::uint64_t first = cell.begin;
    while (first > 0 && text_.bytes[first - 1] != '\n') {
        --first;
    }
    return {source(), cell.line, static_cast<int>(cell.begin - first) + 1};
}

Result<double> Table::real(std::size_t row, std::size_t column) const {
    const auto value = read_real(text(row, column));
    if (!value) {
        return tl::unexpected(bad_number(*this, row, column, value.error()));
    }
    return *value;
}

Result<std::complex<double>> Table::number(std::size_t row, std::size_t column) const {
    const auto value = read_number(text(row, column));
    if (!value) {
        return tl::unexpected(bad_number(*this, row, column, value.error()));
    }
    return value->value;
}

Result<Table> read_table(const std::string& path, const Context& context) {
    const bool json = ends_in(path, ".json") || ends_in(path, ".json.gz");
    return json ? read_json_table(path, context) : read_delimited(path, context);
}

double bytes_of_names(const std::vector<std::string>& names) {
    double bytes = 0;
    for (const std::string& name : names) {
        bytes += 160.0 + 2.0 * static_cast<double>(name.size());
    }
    return bytes;
}

}  // namespace chainmark
