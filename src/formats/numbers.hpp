#pragma once

#include <complex>
#include <string>

/// Numbers as text.
namespace chainmark {

/// Shortest decimal text that reads back to the same double; whole numbers below 10^15 without an
/// exponent. "nan", "inf" and "-inf" for what is no number.
std::string number_text(double value);

/// "a+bj" with both parts as `number_text`.
std::string number_text(std::complex<double> value);

/// `value` rounded so that one unit of the last digit shown is at least its error `bound`, with at
/// most `most` significant digits:
///   value -3.98205080756888, bound 2e-14 -> "-3.9820508075689".
/// A bound of 0 means exact: up to `most` significant digits, no trailing zeros. "0" where the
/// bound leaves no digit of the value. Scientific notation below 1e-5, from 1e15, and where the
/// last certain digit stands left of the decimal point.
std::string certain_digits(double value, double bound, int most = 15);

/// "a+bj" with both parts as `certain_digits`.
std::string certain_digits(std::complex<double> value, double bound, int most = 15);

}  // namespace chainmark
