#pragma once

#include "chainmark/reference/route.hpp"

namespace chainmark {

/// Route `dense`: the full (2S+1)^L matrix by Kronecker products, fully diagonalized, up to
/// dimension 4096 (L <= 12 for S = 1/2, 7 for S = 1, 6 for S = 3/2). Slow and obvious; it watches
/// over `sector` and shares nothing with it but the term list.
const Route& dense_route();

}  // namespace chainmark
