#pragma once

#include <algorithm>
#include <array>
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

/// Sum of term(i) for i = first ... last-1 in eight interleaved partial sums, which the processor
/// adds side by side.
template <class Sum, class Term>
Sum sum_in_lanes(std::int64_t first, std::int64_t last, Term&& term) {
    constexpr std::int64_t n_lanes = 8;
    std::array<Sum, n_lanes> lanes{};
    std::int64_t i = first;
    for (; i + n_lanes <= last; i += n_lanes) {
        for (std::int64_t lane = 0; lane < n_lanes; ++lane) {
            lanes[static_cast<std::size_t>(lane)] += term(i + lane);
        }
    }
    for (; i < last; ++i) {
        lanes[0] += term(i);
    }
    Sum sum(0);
    for (const Sum& lane : lanes) {
        sum += lane;
    }
    return sum;
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
        return sum_in_lanes<Scalar>(first, last, [&](std::int64_t i) {
            if constexpr (std::is_same_v<Scalar, double>) {
                return metric.weight(i) * x[i] * y[i];
            } else {
                return metric.weight(i) * std::conj(x[i]) * y[i];
            }
        });
    };
    if constexpr (std::is_same_v<Scalar, double>) {
        return static_cast<double>(sum_over_runs<long double>(dim, threads, part));
    } else {
        return static_cast<Scalar>(sum_over_runs<std::complex<long double>>(dim, threads, part));
    }
}

/// y += factor x; returns ||y||^2 of the new y in the metric. A copy of the new y is written to
/// `copy` unless that is null.
template <class Scalar, class Stored = Scalar>
double add_scaled(const Metric& metric,
                  const Scalar* x,
                  Scalar* y,
                  Scalar factor,
                  std::int64_t dim,
                  int threads,
                  Stored* copy = nullptr) {
    return static_cast<double>(
        sum_over_runs<long double>(dim, threads, [&](std::int64_t first, std::int64_t last) {
            const double sum = sum_in_lanes<double>(first, last, [&](std::int64_t i) {
                y[i] += factor * x[i];
                return metric.weight(i) * real_product(y[i], y[i]);
            });
            if (copy != nullptr) {
                std::transform(y + first, y + last, copy + first, [](const Scalar& number) {
                    return static_cast<Stored>(number);
                });
            }
            return sum;
        }));
}

}  // namespace chainmark::sector
