#pragma once

#include <string>
#include <vector>

#include <tl/expected.hpp>

#include "chainmark/fermion/ground_space.hpp"

namespace chainmark::fermion {

/// The uniform fields h at which the ground state's number N of up spins changes.
struct Jumps {
    std::vector<Real> field;     ///< ascending
    std::vector<Real> error;     ///< one per field
    std::vector<int> particles;  ///< below the first field, between neighbours, above the last
};

/// With E(N) the lowest energy of N fermions (in the class of the parity of N) the ground state of
/// E(N) - h (N - L/2) follows the lower convex hull of E(N) from N = 0 to L as h grows; its slopes
/// are the fields. Slopes within `window` of the next are one jump. Fails with a reason where that
/// is left open by their errors. O(L).
tl::expected<Jumps, std::string> find_jumps(const Solution& solution,
                                            double window,
                                            const Context& context);

}  // namespace chainmark::fermion
