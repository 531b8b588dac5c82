#include "chainmark/formats/number_reading.hpp"

#include <algorithm>
#include <charconv>
#include <cmath>
#include <limits>
#include <optional>

namespace chainmark {
namespace {

bool is_digit(char c) {
    return c >= '0' && c <= '9';
}

bool is_blank(char c) {
    return c == ' ' || c == '\t' || c == '\r' || c == '\n';
}

std::string_view trimmed(std::string_view text) {
    while (!text.empty() && is_blank(text.front())) {
        text.remove_prefix(1);
    }
    while (!text.empty() && is_blank(text.back())) {
        text.remove_suffix(1);
    }
    return text;
}

/// A number at the front of a text, and how many characters it takes.
struct Leading {
    double value = 0;
    std::size_t size = 0;
    bool out_of_range = false;
};

/// Without sign. from_chars does not say on which side of the range a number lies: the wider
/// exponents of long double do; beyond those, too, it counts as too large, which is never silent.
std::optional<Leading> unsigned_real(std::string_view text, std::chars_format format) {
    Leading result;
    const char* last = text.data() + text.size();
    auto [end, error] = std::from_chars(text.data(), last, result.value, format);
    if (error == std::errc::invalid_argument) {
        return std::nullopt;
    }
    result.size = static_cast<std::size_t>(end - text.data());
    if (error == std::errc::result_out_of_range) {
        long double wide = 0;
        const auto again = std::from_chars(text.data(), last, wide, format);
        result.out_of_range = again.ec != std::errc() || wide > 1.0L;
        result.value = 0;
    }
    return result;
}

/// Characters of "D+05" at the front of `text`, 0 where there is no such exponent.
std::size_t fortran_exponent(std::string_view text) {
    if (text.size() < 2 || (text[0] != 'D' && text[0] != 'd')) {
        return 0;
    }
    std::size_t size = text[1] == '+' || text[1] == '-' ? 2 : 1;
    const std::size_t first = size;
    while (size < text.size() && is_digit(text[size])) {
        ++size;
    }
    return size > first ? size : 0;
}

std::optional<Leading> leading_real(std::string_view text) {
    const bool has_sign = !text.empty() && (text[0] == '+' || text[0] == '-');
    const std::string_view rest = text.substr(has_sign ? 1 : 0);
    if (rest.empty() || rest[0] == '-' || rest[0] == '+') {
        return std::nullopt;
    }
    const bool hex = rest.size() > 2 && rest[0] == '0' && (rest[1] == 'x' || rest[1] == 'X');
    std::optional<Leading> found = hex ? unsigned_real(rest.substr(2), std::chars_format::hex)
                                       : unsigned_real(rest, std::chars_format::general);
    if (!found) {
        return std::nullopt;
    }
    found->size += hex ? 2 : 0;
    const std::size_t exponent = hex ? 0 : fortran_exponent(rest.substr(found->size));
    if (exponent > 0) {
        std::string with_e(rest.substr(0, found->size + exponent));
        with_e[found->size] = 'e';
        found = unsigned_real(with_e, std::chars_format::general);
    }
    if (found) {
        found->size += has_sign ? 1 : 0;
        found->value = has_sign && text[0] == '-' ? -found->value : found->value;
    }
    return found;
}

/// "1.5-103": three digits of exponent leave Fortran's E12.5 no room for the letter.
std::optional<double> letterless_exponent(std::string_view text) {
    if (text.size() < 6) {
        return std::nullopt;
    }
    const std::string_view tail = text.substr(text.size() - 4);
    const std::string_view head = text.substr(0, text.size() - 4);
    const bool exponent = (tail[0] == '+' || tail[0] == '-') && is_digit(tail[1]) &&
                          is_digit(tail[2]) && is_digit(tail[3]);
    if (!exponent || head.find('.') == std::string_view::npos ||
        !std::all_of(
            head.begin() + 1, head.end(), [](char c) { return is_digit(c) || c == '.'; })) {
        return std::nullopt;
    }
    const std::string with_e = std::string(head) + 'e' + std::string(tail);
    const std::optional<Leading> found = leading_real(with_e);
    return found && found->size == with_e.size() && !found->out_of_range
               ? std::optional(found->value)
               : std::nullopt;
}

NumberFault fault_of(std::string_view text) {
    if (text.empty()) {
        return NumberFault::empty;
    }
    if (text.find_first_not_of('*') == std::string_view::npos) {
        return NumberFault::field_too_narrow;
    }
    const std::size_t comma = text.find(',');
    const bool one_comma = comma != std::string_view::npos && comma > 0 &&
                           comma + 1 < text.size() && is_digit(text[comma - 1]) &&
                           is_digit(text[comma + 1]);
    if (one_comma && text.find_first_not_of("+-0123456789,eE") == std::string_view::npos) {
        return NumberFault::decimal_comma;
    }
    return NumberFault::no_number;
}

bool is_imaginary_unit(std::string_view text) {
    text = trimmed(text);
    if (!text.empty() && text[0] == '*') {
        text = trimmed(text.substr(1));
    }
    return text == "j" || text == "i" || text == "J" || text == "I" || text == "im";
}

tl::expected<ReadNumber, NumberFault> read_pair(std::string_view real, std::string_view imaginary) {
    const auto re = read_real(real);
    const auto im = read_real(imaginary);
    if (!re || !im) {
        return tl::unexpected(re ? im.error() : re.error());
    }
    return ReadNumber{{*re, *im}, true};
}

/// a+bj or bj, where `first` is what could be read at the front of `text`.
tl::expected<ReadNumber, NumberFault> read_sum(std::string_view text, const Leading& first) {
    std::string_view rest = trimmed(text.substr(first.size));
    if (is_imaginary_unit(rest)) {
        if (first.out_of_range) {
            return tl::unexpected(NumberFault::out_of_range);
        }
        return ReadNumber{{0.0, first.value}, true};
    }
    if (rest.empty() || (rest[0] != '+' && rest[0] != '-')) {
        return tl::unexpected(fault_of(text));
    }
    const double sign = rest[0] == '-' ? -1.0 : 1.0;
    rest = trimmed(rest.substr(1));
    const std::optional<Leading> second = leading_real(rest);
    if (!second || !is_imaginary_unit(rest.substr(second->size))) {
        return tl::unexpected(fault_of(text));
    }
    if (first.out_of_range || second->out_of_range) {
        return tl::unexpected(NumberFault::out_of_range);
    }
    return ReadNumber{{first.value, sign * second->value}, true};
}

}  // namespace

std::string allowed_instead(NumberFault fault) {
    switch (fault) {
        case NumberFault::empty:
            return "a number";
        case NumberFault::no_number:
            return "a number such as -0.25, 1e-3, 0.5+0.1j or (0.5,0.1)";
        case NumberFault::decimal_comma:
            return "decimals behind a point: 0.5, not 0,5";
        case NumberFault::out_of_range:
            return "a number below 1.8e308 in size";
        case NumberFault::field_too_narrow:
            return "a number; asterisks are printed where a format is too narrow for it";
    }
    return "";
}

tl::expected<double, NumberFault> read_real(std::string_view text) {
    text = trimmed(text);
    const std::optional<Leading> found = leading_real(text);
    if (found && found->size == text.size()) {
        if (found->out_of_range) {
            return tl::unexpected(NumberFault::out_of_range);
        }
        return found->value;
    }
    const std::optional<double> letterless = letterless_exponent(text);
    if (letterless) {
        return *letterless;
    }
    return tl::unexpected(fault_of(text));
}

tl::expected<ReadNumber, NumberFault> read_number(std::string_view text) {
    text = trimmed(text);
    if (text.size() > 2 && text.front() == '(' && text.back() == ')') {
        text = trimmed(text.substr(1, text.size() - 2));
        const std::size_t comma = text.find(',');
        if (comma != std::string_view::npos) {
            return read_pair(text.substr(0, comma), text.substr(comma + 1));
        }
    }
    const auto real = read_real(text);
    if (real) {
        return ReadNumber{{*real, 0.0}, false};
    }
    const std::optional<Leading> first = leading_real(text);
    if (real.error() == NumberFault::out_of_range || !first) {
        return tl::unexpected(real.error());
    }
    return read_sum(text, *first);
}

}  // namespace chainmark
