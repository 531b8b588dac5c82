#pragma once

#include <algorithm>
#include <complex>
#include <cstdint>
#include <vector>

#include "chainmark/base/parallel.hpp"
#include "chainmark/sector/linear_operator.hpp"

/// Sums over the amplitudes of a sector, on several threads and with the same result on any number
/// of them: in double over runs of 256, in long double over the runs. Plain double sums over 10^6
/// numbers of one sign lose four digits.
namespace chainmark::sector {

inline constexpr std::int64_t run_length = 256;

inline double real_product(double a, double b) {
    return a * b;
}
inline double real_product(const std::complex<double>& a, const std::complex<double>& b) {
    return a.real() * b.real() + a.imag() * b.imag();
}

/// Sum of part(first, last) over runs of components that cover 0 ... dim-1. The parts may write
/// to their own components.
template <class Sum, class Part>
Sum sum_over_runs(std::int64_t dim, int threads, Part&& part) {
    constexpr std::int64_t piece = 1 << 16;
    const auto pieces = static_cast<std::size_t>((dim + piece - 1) / piece);
    std::vector<Sum> sums(pieces, Sum(0));
    parallel_for(pieces, threads, [&](std::size_t p) {
        const std::int64_t first = static_cast<std::int64_t>(p) * piece;
        const std::int64_t last = std::min(dim, first + piece);
        for (std::int64_t run = first; run < last; run += run_length) {
            sums[p] += static_cast<Sum>(part(run, std::min(last, run + run_length)));
        }
    });
    Sum sum(0);
    for (const Sum& s : sums) {
        sum += s;
    }
    return sum;
}

/// <x|y> in the metric.
template <class Scalar>
Scalar inner_product(
    const Metric& metric, const Scalar* x, const Scalar* y, std::int64_t dim, int threads) {
    const auto part = [&](std::int64_t first, std::int64_t last) {
        Scalar sum(0);
        for (std::int64_t i = first; i < last; ++i) {
            if constexpr (std::is_same_v<Scalar, double>) {
                sum += metric.weight(i) * x[i] * y[i];
            } else {
                sum += metric.weight(i) * std::conj(x[i]) * y[i];
            }
        }
        return sum;
    };
    if constexpr (std::is_same_v<Scalar, double>) {
        return static_cast<double>(sum_over_runs<long double>(dim, threads, part));
    } else {
        return static_cast<Scalar>(sum_over_runs<std::complex<long double>>(dim, threads, part));
    }
}

/// y += factor x; returns ||y||^2 of the new y in the metric.
template <class Scalar>
double add_scaled(const Metric& metric,
                  const Scalar* x,
                  Scalar* y,
                  Scalar factor,
                  std::int64_t dim,
                  int threads) {
    return static_cast<double>(
        sum_over_runs<long double>(dim, threads, [&](std::int64_t first, std::int64_t last) {
            double sum = 0.0;
            for (std::int64_t i = first; i < last; ++i) {
                y[i] += factor * x[i];
                sum += metric.weight(i) * real_product(y[i], y[i]);
            }
            return sum;
        }));
}

}  // namespace chainmark::sector
