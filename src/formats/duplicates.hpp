#pragma once

#include <cstdint>
#include <optional>
#include <vector>

#include "chainmark/formats/memory_share.hpp"

namespace chainmark {

/// Notices whether places come in strictly ascending order, by rows or by columns: then none comes
/// twice, and nothing needs to be remembered.
class OrderWatch {
public:
    void see(std::int64_t row, std::int64_t column) {
        const bool by_rows = row > row_ || (row == row_ && column > column_);
        const bool by_columns = column > column_ || (column == column_ && row > row_);
        by_rows_ = by_rows_ && by_rows;
        by_columns_ = by_columns_ && by_columns;
        row_ = row;
        column_ = column;
    }
    bool ascending() const { return by_rows_ || by_columns_; }

private:
    std::int64_t row_ = -1;
    std::int64_t column_ = -1;
    bool by_rows_ = true;
    bool by_columns_ = true;
};

/// Remembers places, 8 bytes each, to count those that come more than once.
class PlaceList {
public:
    /// Room for `count` places of a matrix; nothing where the memory does not suffice.
    static std::optional<PlaceList> make(std::int64_t rows,
                                         std::int64_t columns,
                                         std::int64_t count,
                                         const Context& context);
    void add(std::int64_t row, std::int64_t column) {
        places_.push_back(static_cast<std::uint64_t>(row) * width_ +
                          static_cast<std::uint64_t>(column));
    }
    /// How many of the places repeat another one.
    std::int64_t repeated();

private:
    PlaceList(std::uint64_t width, MemoryShare memory)
        : width_(width), memory_(std::move(memory)) {}
    std::uint64_t width_;
    MemoryShare memory_;
    std::vector<std::uint64_t> places_;
};

}  // namespace chainmark
