#pragma once

#include <complex>
#include <string>
#include <string_view>

#include <tl/expected.hpp>

/// Numbers as people and programs print them. The locale never matters.
namespace chainmark {

/// Why a text is no number that can be used.
enum class NumberFault {
    empty,             ///< nothing there
    no_number,         ///< something else
    decimal_comma,     ///< 0,5 for 0.5
    out_of_range,      ///< beyond the largest double
    field_too_narrow,  ///< only asterisks: the format of the program that wrote it was too narrow
};

/// The fault as a clause that says what would be right.
std::string allowed_instead(NumberFault fault);

/// One real number and nothing else but blanks around it: decimal or hexadecimal (0x1.8p1), also
/// with D for the exponent's E, or with a three-digit exponent without letter (1.5-103), as Fortran
/// prints. Nearest double; below the smallest one 0. "nan" and "inf" in any case, with a sign, are
/// numbers here: whoever asks looks with isfinite.
tl::expected<double, NumberFault> read_real(std::string_view text);

/// A number that may be complex: a real one, a+bj, a+bi, a+b*I, a+bim, bj, (a,b), (a+bj).
struct ReadNumber {
    std::complex<double> value;
    bool is_complex = false;  ///< written as a complex number, even with an imaginary part of 0
};
tl::expected<ReadNumber, NumberFault> read_number(std::string_view text);

}  // namespace chainmark
