#include "chainmark/formats/numbers.hpp"

#include <algorithm>
#include <array>
#include <charconv>
#include <cmath>

#include <fmt/format.h>

namespace chainmark {
namespace {

constexpr double largest_plain = 1e15;  // above it not every whole number has 15 digits

/// n of the leading digit d * 10^n of `value` written with `digits` significant digits. Read off
/// the rounded text, since 9.99... may round up to 10.
int leading_place(double value, int digits) {
    const std::string text = fmt::format("{:.{}e}", value, digits - 1);
    return std::stoi(text.substr(text.find('e') + 1));
}

/// Place of the last digit that `bound` supports: the smallest n with 10^n >= bound.
int supported_place(double bound) {
    return static_cast<int>(std::ceil(std::log10(bound)));
}

std::string joined(const std::string& real, std::string imaginary) {
    const bool negative = imaginary.front() == '-';
    return fmt::format("{}{}{}j", real, negative ? "" : "+", imaginary);
}

/// A value of which not even the leading digit is certain, to the nearest unit of 10^place.
std::string rounded_to_unit(double value, int place) {
    const double unit = std::pow(10.0, place);
    const double units = std::round(value / unit);
    return units == 0.0 ? "0" : fmt::format("{:.0e}", units * unit);
}

}  // namespace

std::string number_text(double value) {
    const bool whole = std::abs(value) < largest_plain && value == std::trunc(value);
    if (whole && !(value == 0.0 && std::signbit(value))) {
        return fmt::format("{:.0f}", value);
    }
    std::array<char, 32> buffer{};
    const auto end = std::to_chars(buffer.data(), buffer.data() + buffer.size(), value).ptr;
    return {buffer.data(), end};
}

std::string number_text(std::complex<double> value) {
    return joined(number_text(value.real()), number_text(value.imag()));
}

std::string certain_digits(double value, double bound, int most) {
    if (!std::isfinite(value)) {
        return number_text(value);
    }
    if (value == 0.0) {
        return "0";
    }
    if (bound == 0.0) {
        return fmt::format("{:.{}g}", value, most);
    }
    const int leading = leading_place(value, most);
    if (!std::isfinite(bound)) {
        return fmt::format("{:.0e}", value);
    }
    const int last = std::max(leading - most + 1, supported_place(std::abs(bound)));
    if (last > leading) {
        return rounded_to_unit(value, last);
    }
    if (leading < -5 || last > 0 || std::abs(value) >= largest_plain) {
        return fmt::format("{:.{}e}", value, leading - last);
    }
    return fmt::format("{:.{}f}", value, -last);
}

std::string certain_digits(std::complex<double> value, double bound, int most) {
    return joined(certain_digits(value.real(), bound, most),
                  certain_digits(value.imag(), bound, most));
}

}  // namespace chainmark
