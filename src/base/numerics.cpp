#include "chainmark/base/numerics.hpp"

#include <charconv>
#include <string>

#include <fmt/format.h>

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

double accurate_dot(std::span<const double> a, std::span<const double> b) {
    long double sum = 0;
    for (std::size_t i = 0; i < a.size(); ++i) {
        sum += static_cast<long double>(a[i]) * static_cast<long double>(b[i]);
    }
    return static_cast<double>(sum);
}

std::complex<double> accurate_dot(std::span<const std::complex<double>> a,
                                  std::span<const std::complex<double>> b) {
    long double real = 0;
    long double imaginary = 0;
    for (std::size_t i = 0; i < a.size(); ++i) {
        const long double ar = a[i].real();
        const long double ai = a[i].imag();
        const long double br = b[i].real();
        const long double bi = b[i].imag();
        real += ar * br + ai * bi;
        imaginary += ar * bi - ai * br;
    }
    return {static_cast<double>(real), static_cast<double>(imaginary)};
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
