#pragma once

#include <cstdint>
#include <limits>
#include <numbers>

/// Arithmetic of the two routes of free fermions.
namespace chainmark::fermion {

/// Sums over up to 10^6 modes keep their last double digit in this type.
using Real = long double;

inline constexpr Real real_epsilon = std::numeric_limits<Real>::epsilon();
inline constexpr Real real_pi = std::numbers::pi_v<Real>;

/// Largest relative error made by rounding a Real to a double.
inline constexpr Real double_rounding = 0x1p-53L;

/// sin(pi p/q) and cos(pi p/q) for whole p and q > 0 with |p| and q below 2^61. The angle is
/// reduced in whole numbers, so the relative error stays below 4 real_epsilon for every p, zeros
/// are exact zeros and the symmetries p -> -p, p -> q - p, p -> p + 2q hold to the last bit.
Real sin_pi(std::int64_t p, std::int64_t q);
Real cos_pi(std::int64_t p, std::int64_t q);

/// A sum with the rounding of every addition carried along: relative error of about two
/// real_epsilon for any number of summands of one sign.
/// Source: A. Neumaier, Z. Angew. Math. Mech. 54, 39 (1974).
class CompensatedSum {
public:
    void add(Real x);
    Real value() const { return sum_ + lost_; }

private:
    Real sum_ = 0.0L;
    Real lost_ = 0.0L;
};

}  // namespace chainmark::fermion
