#pragma once

#include <complex>
#include <cstdint>
#include <limits>
#include <numbers>
#include <span>
#include <vector>

/// Numerics without physics.
namespace chainmark {

/// Unit roundoff times two: distance from 1 to the next double.
inline constexpr double epsilon = std::numeric_limits<double>::epsilon();
inline constexpr double pi = std::numbers::pi;

/// n over k, exact in 64 bits for every n <= 62; 0 for k outside 0 ... n.
std::int64_t binomial(int n, int k);

/// sum_i conj(a_i) b_i, summed in extended precision: a plain sum over a million terms of one sign
/// loses three digits.
double accurate_dot(std::span<const double> a, std::span<const double> b);
std::complex<double> accurate_dot(std::span<const std::complex<double>> a,
                                  std::span<const std::complex<double>> b);

/// `count` values from `from` to `to`, both included, each rounded to 15 significant decimals so
/// that a step of 0.05 meets 0.15 and 1 exactly and not one unit of rounding beside them.
std::vector<double> even_grid(double from, double to, int count);

/// The double nearest to `value` written with 15 significant decimals.
double round_to_15_digits(double value);

}  // namespace chainmark
