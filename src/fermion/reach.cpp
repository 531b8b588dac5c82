#include "chainmark/fermion/reach.hpp"

namespace chainmark::fermion {

std::string beyond_free_fermions(const Query& query) {
    switch (query.spec->id) {
        case QuantityId::structure_factor:
        case QuantityId::string_order:
        case QuantityId::entanglement_entropy:
        case QuantityId::energy:
        case QuantityId::energy_per_site:
        case QuantityId::free_energy:
        case QuantityId::free_energy_per_site:
        case QuantityId::entropy:
        case QuantityId::entropy_per_site:
        case QuantityId::specific_heat:
        case QuantityId::specific_heat_per_site:
            return "not covered by this route";
        default:
            break;
    }
    if (query.options.sector) {
        return "a sector of the user's is not covered by this route";
    }
    return query.options.axes == Axes::zz ? "" : "only the zz correlation is covered";
}

}  // namespace chainmark::fermion
