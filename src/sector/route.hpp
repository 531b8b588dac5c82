#pragma once

#include "chainmark/reference/route.hpp"

namespace chainmark {

/// Route `sector`: the Hamiltonian in the sectors of its symmetries, sparse or dense.
const Route& sector_route();

}  // namespace chainmark
