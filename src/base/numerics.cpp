#include "chainmark/base/numerics.hpp"

#include <fmt/format.h>

#include <charconv>
#include <string>

namespace chainmark {

std::int64_t binomial(int n, int k) {
    if (k < 0 || k > n) {
        return 0;
    }
    // Every partial product i! / ... is itself a binomial coefficient, so the division is exact.
    __extension__ using Wide = __int128;
    Wide value = 1;
    for (int i = 1; i <= k; ++i) {
        value = value * (n - k + i) / i;
    }
    return static_cast<std::int64_t>(value);
}

double round_to_15_digits(double value) {
    const std::string text = fmt::format("{:.14e}", value);
    double rounded = value;
    std::from_chars(text.data(), text.data() + text.size(), rounded);  // no locale
    return rounded;
}

std::vector<double> even_grid(double from, double to, int count) {
    std::vector<double> values;
    values.reserve(static_cast<std::size_t>(count));
    for (int i = 0; i < count; ++i) {
        const double value = count == 1 ? from : from + (to - from) * i / (count - 1);
        values.push_back(round_to_15_digits(value));
    }
    return values;
}

}  // namespace chainmark
