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
/// E(N) - h (N - L/2) follows the lower convex hull of E(N) from N = 0 to L as h grows. From N it
/// jumps to the farthest vertex N' of the hull whose level lies within `window` of the lowest at
/// the field of the smallest slope from N on; that field is (E(N') - E(N))/(N' - N). Fails with a
/// reason where a level meets the edge of the window within its error. O(L).
tl::expected<Jumps, std::string> find_jumps(const Solution& solution,
                                            double window,
                                            const Context& context);

}  // namespace chainmark::fermion
