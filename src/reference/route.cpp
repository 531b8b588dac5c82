#include "chainmark/reference/route.hpp"

#include <algorithm>

#include <fmt/format.h>

namespace chainmark {

bool Coverage::covers_any() const {
    return std::any_of(
        refusal.begin(), refusal.end(), [](const std::string& reason) { return reason.empty(); });
}

Coverage refuse_all(const Batch& batch, const std::string& reason) {
    return {.refusal = std::vector<std::string>(batch.queries.size(), reason)};
}

std::string without_meaning(const Query& query, const Problem& problem) {
    const Chain& chain = problem.chain;
    switch (query.spec->id) {
        case QuantityId::mode_energies:
            return "a quantity of free fermions";
        case QuantityId::fermi_momentum:
        case QuantityId::phase:
            return "a quantity of the infinite chain";
        case QuantityId::string_order:
            if (chain.two_s % 2 == 1 && chain.two_s != 1) {
                return "string order is defined for whole spins and for 1/2";
            }
            break;
        default:
            break;
    }
    if (problem.temperature && query.spec->when == When::ground_state) {
        return "a quantity of the ground state, without a temperature";
    }
    if (!problem.temperature && query.spec->when == When::thermal) {
        return "needs a temperature";
    }
    for (const int distance : query.options.distance) {
        if (distance >= chain.length()) {
            return fmt::format("no two sites are at a distance of {}", distance);
        }
    }
    return {};
}

}  // namespace chainmark
