#pragma once

#include <optional>

#include "chainmark/formats/table.hpp"

namespace chainmark {

/// How finely the numbers of a column were printed.
///
/// Fixed format shows in equal decimals (all cells 0.500000), scientific in equal significant
/// digits (5.00000e-01). Where neither is equal, trailing zeros were dropped, and a cell may have
/// been rounded to the most decimals or to the most significant digits that occur: both are given,
/// and the coarser counts.
struct PrintedDigits {
    std::optional<int> decimals;     ///< behind the point
    std::optional<int> significant;  ///< from the first digit that is not 0

    /// Half a unit of the last digit that a number of this size was printed with.
    double half_unit(double value) const;
};

/// From the texts of a column's finite numbers; of complex ones both parts count. Nothing where
/// digits mean nothing: fewer than three numbers, a table that is not printed text, or a column of
/// whole numbers without point and exponent, which count as exact.
std::optional<PrintedDigits> printed_digits(const Table& table, std::size_t column);

}  // namespace chainmark
