#pragma once

#include "chainmark/fermion/thermal.hpp"

namespace chainmark::fermion {

/// What the elements of M = sum_j Sz_j between different occupations add, in one class.
struct MixedResponse {
    Real response = 0.0L;  ///< to sum_nm |<n|M|m>|^2 (p_n - p_m)/(E_m - E_n)
    Real square = 0.0L;    ///< to <M^2>
};

/// In terms of excitations (a mode of negative energy is a hole, which turns hop into pair) with
/// the costs c_k, x_k = exp(-c_k/T) and w the weight of the other modes' occupations of the parity
/// that is left for them:
///   hop:   2 |h_kl|^2 w (x_k - x_l)/(c_l - c_k),    other modes: parity changed by one,
///   pair:  2 |p_kl|^2 w (1 - x_k x_l)/(c_k + c_l),  other modes: parity as in all.
/// O(number of modes squared); O(number of modes) where each is mixed with one other.
MixedResponse mixed_response(const ThermalClass& own, const OccupiedModes& occupied);

}  // namespace chainmark::fermion
