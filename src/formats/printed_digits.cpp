#include "chainmark/formats/printed_digits.hpp"

#include <algorithm>
#include <charconv>
#include <cmath>
#include <limits>

#include "chainmark/formats/number_reading.hpp"

namespace chainmark {
namespace {

bool is_digit(char c) {
    return c >= '0' && c <= '9';
}

/// The smallest and the largest of what occurs.
struct Extent {
    int least = std::numeric_limits<int>::max();
    int most = std::numeric_limits<int>::min();

    void add(int value) {
        least = std::min(least, value);
        most = std::max(most, value);
    }
    bool empty() const { return most < least; }
    bool equal() const { return most == least; }
};

/// One decimal number as it is written.
struct Written {
    int places = 0;       ///< digits behind the point
    int significant = 0;  ///< digits from the first that is not 0; of a zero all digits
    bool point = false;
    bool scientific = false;
    int exponent = 0;

    int last_place() const { return places - exponent; }  ///< its unit is 10^-last_place
};

struct Seen {
    Extent last_places;
    Extent fixed_decimals;
    Extent significant;
    Extent scientific_digits;
    std::size_t numbers = 0;
    bool any_point = false;

    void add(const Written& number) {
        last_places.add(number.last_place());
        significant.add(number.significant);
        if (number.scientific) {
            scientific_digits.add(number.significant);
        } else {
            fixed_decimals.add(number.places);
        }
        any_point = any_point || number.point || number.scientific;
    }
};

/// Reads the number at `at` and moves behind it. A digit must stand at or soon behind `at`.
Written written_at(std::string_view text, std::size_t& at) {
    Written result;
    int digits = 0;
    for (; at < text.size() && (is_digit(text[at]) || text[at] == '.'); ++at) {
        if (text[at] == '.') {
            result.point = true;
            continue;
        }
        ++digits;
        result.places += result.point ? 1 : 0;
        result.significant += result.significant > 0 || text[at] != '0' ? 1 : 0;
    }
    result.significant = result.significant == 0 ? digits : result.significant;
    const std::size_t letter = at;
    const bool marked =
        at < text.size() && std::string_view("eEdD").find(text[at]) != std::string_view::npos;
    if (marked) {
        ++at;
        at += at < text.size() && text[at] == '+' ? 1 : 0;
        const char* last = text.data() + text.size();
        const auto [end, error] = std::from_chars(text.data() + at, last, result.exponent);
        result.scientific = error == std::errc();
        result.exponent = std::clamp(result.exponent, -100000, 100000);  // 0e-2000000000 is a zero
        at = result.scientific ? static_cast<std::size_t>(end - text.data()) : letter + 1;
    }
    return result;
}

void add_numbers(Seen& seen, std::string_view text) {
    std::size_t at = 0;
    while (at < text.size()) {
        const bool starts = is_digit(text[at]) ||
                            (text[at] == '.' && at + 1 < text.size() && is_digit(text[at + 1]));
        if (starts) {
            seen.add(written_at(text, at));
        } else {
            ++at;
        }
    }
}

}  // namespace

double PrintedDigits::half_unit(double value) const {
    double half = 0;
    if (decimals) {
        half = 0.5 * std::pow(10.0, -*decimals);
    }
    if (significant && value != 0.0 && std::isfinite(value)) {
        const double exponent = std::floor(std::log10(std::abs(value)));
        half = std::max(half, 0.5 * std::pow(10.0, exponent + 1 - *significant));
    }
    return half;
}

std::optional<PrintedDigits> printed_digits(const Table& table, std::size_t column) {
    constexpr std::size_t fewest = 3;
    if (!table.printed()) {
        return std::nullopt;
    }
    Seen seen;
    for (std::size_t row = 0; row < table.rows(); ++row) {
        const std::string_view text = table.text(row, column);
        const auto number = read_number(text);
        const bool finite =
            number && std::isfinite(number->value.real()) && std::isfinite(number->value.imag());
        const bool hex = text.find_first_of("xX") != std::string_view::npos;
        if (finite && hex) {
            return std::nullopt;  // exact
        }
        if (finite) {
            ++seen.numbers;
            add_numbers(seen, text);
        }
    }
    if (seen.numbers < fewest || !seen.any_point) {
        return std::nullopt;
    }
    if (seen.scientific_digits.empty() && seen.fixed_decimals.equal()) {
        return PrintedDigits{.decimals = seen.fixed_decimals.most, .significant = std::nullopt};
    }
    if (seen.fixed_decimals.empty() && seen.scientific_digits.equal()) {
        return PrintedDigits{.decimals = std::nullopt, .significant = seen.significant.most};
    }
    return PrintedDigits{.decimals = seen.last_places.most, .significant = seen.significant.most};
}

}  // namespace chainmark
