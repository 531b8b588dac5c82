#pragma once

#include "chainmark/fermion/ground_space.hpp"
#include "chainmark/fermion/thermal.hpp"

namespace chainmark::fermion {

/// The classes of a solved chain in a field. sum_j Sz_j, O(L^3) where it is not conserved and the
/// couplings depend on the site, is found where `with_sz` asks for it.
ThermalModes thermal_modes(const Solution& solution, double field, bool with_sz);

}  // namespace chainmark::fermion
