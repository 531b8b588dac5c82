#include "chainmark/fermion/enclosures.hpp"

namespace chainmark::fermion {

bool can_enclose() {
    return false;
}

std::optional<Reference> enclose(const Problem& /*problem*/,
                                 const Query& /*query*/,
                                 const Context& /*context*/) {
    return std::nullopt;
}

}  // namespace chainmark::fermion
