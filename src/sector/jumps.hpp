#pragma once

#include <vector>

#include "chainmark/sector/solution.hpp"

namespace chainmark::sector {

/// Jumps of the ground state's total Sz in a uniform field.
struct Staircase {
    std::vector<double> fields;
    std::vector<double> bounds;
    std::vector<double> sz;  ///< one more than fields
};

/// The lower convex hull of (Sz, E): in the field h the ground state minimizes E - h Sz, so the
/// corners are the Sz that become ground states and the slopes between them the fields. Fields that
/// lie within `window` of the next are one jump. `lowest` ascending in Sz.
Staircase staircase(const std::vector<Solution::SzMinimum>& lowest, double window);

}  // namespace chainmark::sector
