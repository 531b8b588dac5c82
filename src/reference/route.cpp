#include "chainmark/reference/route.hpp"

#include <algorithm>

namespace chainmark {

bool Coverage::covers_any() const {
    return std::any_of(
        refusal.begin(), refusal.end(), [](const std::string& reason) { return reason.empty(); });
}

Coverage refuse_all(const Batch& batch, const std::string& reason) {
    return {.refusal = std::vector<std::string>(batch.queries.size(), reason)};
}

}  // namespace chainmark
