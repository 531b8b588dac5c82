#pragma once

#include <array>
#include <vector>

#include "chainmark/fermion/angles.hpp"

/// Sums over the subsets with an even, or an odd, number of elements: how the parity of the fermion
/// number is imposed without a subtraction.
///
/// The usual projection, (prod (1 + x_k) -+ prod (1 - x_k))/2, loses all digits for the odd subsets
/// at low temperatures. With e and o the two sums, adding a mode gives
///   e' = e + x o,   o' = o + x e,
/// and joining two sets e = e1 e2 + o1 o2, o = e1 o2 + o1 e2: no cancellation ever. The odd sum is
/// kept relative to e and to the cheapest mode, o = e x_0 odd, so that nothing underflows: with
/// y_k = x_k/x_0 <= 1
///   odd' = (odd + y)/(1 + x_0^2 y odd),   e' = e (1 + x_0^2 y odd).
namespace chainmark::fermion {

struct ParitySums {
    Real log_even = 0.0L;  ///< ln e
    Real odd = 0.0L;       ///< o/(e x_0)
};

/// Two disjoint sets of modes; `square` = x_0^2.
ParitySums joined(const ParitySums& a, const ParitySums& b, Real square);

/// Mean and variance of a number.
struct Moments {
    Real mean = 0.0L;
    Real variance = 0.0L;
};

/// Of two mixed distributions with weights that add up to 1. Both are given, since the smaller one
/// may be far below the rounding of the other.
Moments mixed(const Moments& a, Real weight_a, const Moments& b, Real weight_b);

/// What a mode adds when it is occupied.
struct ModeWeight {
    Real cost = 0.0L;  ///< energy, >= 0
    Real sz = 0.0L;    ///< change of <sum_j Sz_j>
};

/// Modes occupied independently with weights x_k = exp(-cost_k/T), of given parity of the number of
/// occupied ones. O(number of modes); all sums positive, so relative errors stay below
/// 8 real_epsilon a mode.
class OccupiedModes {
public:
    OccupiedModes(const std::vector<ModeWeight>& modes, Real temperature);

    Real temperature() const { return temperature_; }
    Real cheapest() const { return cheapest_; }
    Real square() const { return square_; }  ///< x_0^2
    const ParitySums& sums() const { return sums_; }
    Real weight_over_cheapest(Real cost) const;  ///< y of a mode

    /// o/e
    Real odd_over_even() const;

    /// ln of the sum of weights, with the lowest state's, 1 or x_0, divided out.
    Real log_sum(bool odd) const;

    /// Energy above the lowest state of this parity, and the sum of sz.
    const Moments& energy(bool odd) const { return branches_[odd ? 1 : 0].energy; }
    const Moments& sz(bool odd) const { return branches_[odd ? 1 : 0].sz; }

private:
    struct Branch {
        Moments energy;
        Moments sz;
    };

    void add(const ModeWeight& mode);

    Real temperature_;
    Real cheapest_ = 0.0L;
    Real root_ = 0.0L;  ///< x_0
    Real square_ = 0.0L;
    ParitySums sums_;
    CompensatedSum log_even_;
    std::array<Branch, 2> branches_;
};

}  // namespace chainmark::fermion
