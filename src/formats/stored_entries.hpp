#pragma once

#include <charconv>
#include <cmath>
#include <string>
#include <string_view>

#include <fmt/format.h>

#include "chainmark/formats/entry_source.hpp"
#include "chainmark/formats/matrix_market_header.hpp"
#include "chainmark/formats/number_reading.hpp"
#include "chainmark/formats/shown.hpp"

namespace chainmark {

/// Reads entries as they are stored.
class StoredEntries {
    using Field = MatrixMarketHeader::Field;
    using Symmetry = MatrixMarketHeader::Symmetry;

public:
    StoredEntries(LineReader& lines, const MatrixMarketHeader& header)
        : lines_(lines), header_(header) {
        if (!header.coordinate) {
            entry_.row = first_row(0);
        }
    }

    /// The next entry; false behind the last one, where nothing may follow.
    Result<bool> next(MatrixEntry& entry) {
        std::string_view line;
        Result<bool> any = next_content(lines_, line);
        if (!any) {
            return any;
        }
        if (!*any || done_ == header_.stored) {
            return at_end(*any);
        }
        line_ = line;
        Result<void> read = header_.coordinate ? read_coordinate(line) : read_array(line);
        if (!read) {
            return tl::unexpected(read.error());
        }
        ++done_;
        entry = entry_;
        if (!header_.coordinate) {
            step();
        }
        return true;
    }

    int line() const { return lines_.line(); }

private:
    Result<bool> at_end(bool more) const {
        if (!more && done_ == header_.stored) {
            return false;
        }
        return refuse(
            ErrorCode::bad_syntax,
            {lines_.stream().source(), lines_.line(), 1},
            more ? fmt::format("more than the {} that are announced", entries(header_.stored))
                 : fmt::format("the file ends after {} of {}", done_, entries(header_.stored)),
            "a complete file whose sizes are true");
    }
    static std::string entries(std::int64_t count) {
        return fmt::format("{} {}", count, count == 1 ? "entry" : "entries");
    }

    tl::unexpected<Error> wrong(std::string_view word,
                                const std::string& what,
                                const std::string& allowed) const {
        const bool inside = word.data() >= line_.data() && !word.empty();
        const auto column = inside ? word.data() - line_.data() + 1 : 1;
        return refuse(ErrorCode::bad_value,
                      {lines_.stream().source(), lines_.line(), static_cast<int>(column)},
                      word.empty() ? "the line ends too early" : shown(word) + " " + what,
                      allowed);
    }

    Result<std::int64_t> read_index(std::string_view& line, std::int64_t size) const {
        const std::string_view word = next_word(line);
        std::int64_t index = 0;
        const auto [end, error] = std::from_chars(word.data(), word.data() + word.size(), index);
        if (error != std::errc() || end != word.data() + word.size() || index < 1 || index > size) {
            return wrong(word, "is no index here", fmt::format("1 to {}", size));
        }
        return index - 1;
    }

    Result<double> read_part(std::string_view& line) const {
        const std::string_view word = next_word(line);
        const auto value = read_real(word);
        if (!value) {
            return wrong(word, "is no number", allowed_instead(value.error()));
        }
        if (!std::isfinite(*value)) {
            return wrong(word, "is not finite", "finite matrix elements");
        }
        if (header_.field == Field::integer &&
            (*value != std::trunc(*value) || std::abs(*value) > 9007199254740992.0)) {
            return wrong(word, "is no integer that a double holds", "integers up to 2^53, or real");
        }
        return *value;
    }

    Result<void> read_value(std::string_view line) {
        double re = 1.0;
        double im = 0.0;
        if (header_.field != Field::pattern) {
            Result<double> part = read_part(line);
            if (!part) {
                return tl::unexpected(part.error());
            }
            re = *part;
        }
        if (header_.field == Field::complex) {
            Result<double> part = read_part(line);
            if (!part) {
                return tl::unexpected(part.error());
            }
            im = *part;
        }
        const std::string_view more = next_word(line);
        if (!more.empty()) {
            return wrong(more, "follows a complete entry", "one entry a line");
        }
        entry_.value = {re, im};
        return check_diagonal();
    }

    Result<void> check_diagonal() const {
        if (entry_.row != entry_.column) {
            return {};
        }
        const Place place{lines_.stream().source(), lines_.line(), 1};
        if (header_.symmetry == Symmetry::hermitian && entry_.value.imag() != 0.0) {
            return refuse(ErrorCode::bad_value,
                          place,
                          fmt::format("diagonal element {} has the imaginary part {}",
                                      entry_.row + 1,
                                      entry_.value.imag()),
                          "a real diagonal, or symmetric for a complex symmetric matrix");
        }
        if (header_.symmetry == Symmetry::skew && entry_.value != 0.0) {
            return refuse(ErrorCode::bad_value,
                          place,
                          fmt::format("diagonal element {} is not 0", entry_.row + 1),
                          "a diagonal of zeros under skew-symmetric");
        }
        return {};
    }

    Result<void> read_coordinate(std::string_view line) {
        Result<std::int64_t> row = read_index(line, header_.rows);
        if (!row) {
            return tl::unexpected(row.error());
        }
        Result<std::int64_t> column = read_index(line, header_.columns);
        if (!column) {
            return tl::unexpected(column.error());
        }
        entry_.row = *row;
        entry_.column = *column;
        return read_value(line);
    }
    Result<void> read_array(std::string_view line) { return read_value(line); }

    /// First row that an array file stores of a column.
    std::int64_t first_row(std::int64_t column) const {
        switch (header_.symmetry) {
            case Symmetry::general:
                return 0;
            case Symmetry::skew:
                return column + 1;
            default:
                return column;
        }
    }
    void step() {
        if (++entry_.row >= header_.rows) {
            ++entry_.column;
            entry_.row = first_row(entry_.column);
        }
    }

    LineReader& lines_;
    const MatrixMarketHeader& header_;
    MatrixEntry entry_;
    std::string_view line_;
    std::int64_t done_ = 0;
};

}  // namespace chainmark
