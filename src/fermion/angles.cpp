#include "chainmark/fermion/angles.hpp"

#include <cmath>

namespace chainmark::fermion {

Real sin_pi(std::int64_t p, std::int64_t q) {
    p %= 2 * q;
    if (p < 0) {
        p += 2 * q;
    }
    const bool negative = p > q;
    if (p >= q) {
        p -= q;
    }
    if (2 * p > q) {
        p = q - p;
    }
    // Now 0 <= p/q <= 1/2; beyond a quarter the cosine of the complement is the accurate one.
    const auto angle = [](std::int64_t numerator, std::int64_t denominator) {
        return real_pi * static_cast<Real>(numerator) / static_cast<Real>(denominator);
    };
    const Real value = 4 * p <= q ? std::sin(angle(p, q)) : std::cos(angle(q - 2 * p, 2 * q));
    return negative ? -value : value;
}

Real cos_pi(std::int64_t p, std::int64_t q) {
    const std::int64_t reduced = p % (2 * q);
    return sin_pi(2 * reduced + q, 2 * q);
}

void CompensatedSum::add(Real x) {
    const Real next = sum_ + x;
    lost_ += std::abs(sum_) >= std::abs(x) ? (sum_ - next) + x : (x - next) + sum_;
    sum_ = next;
}

}  // namespace chainmark::fermion
