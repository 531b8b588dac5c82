#pragma once

#include <vector>

namespace chainmark::dense {

/// Lowest energy among the states of one total Sz, in zero uniform field.
struct SzMinimum {
    double sz, energy, bound;
};

/// A field at which the ground state's total Sz changes.
struct Jump {
    double field, bound, below, above;
};

/// Tries every pair of total Sz: their energies cross at one field, and it is a jump if nothing
/// lies lower there. Jumps whose fields lie within `window` of the next are one. `lowest` ascending
/// in sz; the jumps ascend too.
std::vector<Jump> find_jumps(const std::vector<SzMinimum>& lowest, double window);

}  // namespace chainmark::dense
