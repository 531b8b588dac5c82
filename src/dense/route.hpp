#pragma once

#include "chainmark/reference/route.hpp"

namespace chainmark {

/// Route `dense`: the full 2^L matrix by Kronecker products, fully diagonalized, L <= 12. Slow and
/// obvious; it watches over `sector` and shares nothing with it but the term list.
const Route& dense_route();

}  // namespace chainmark
