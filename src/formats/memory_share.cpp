#include "chainmark/formats/memory_share.hpp"

#include <limits>

#include <fmt/format.h>

namespace chainmark {
namespace {

std::string size_text(double bytes) {
    constexpr double mebi = 1024.0 * 1024.0;
    return bytes < 1024.0 * mebi ? fmt::format("{:.3g} MiB", bytes / mebi)
                                 : fmt::format("{:.3g} GiB", bytes / (1024.0 * mebi));
}

}  // namespace

Result<void> MemoryShare::take(double bytes, const std::string& source, const std::string& what) {
    if (budget_ == nullptr || bytes <= 0) {
        return {};
    }
    std::optional<MemoryBudget::Lease> lease = budget_->take(bytes);
    if (!lease) {
        return tl::unexpected(
            Error{ErrorCode::over_memory,
                  {.source = source},
                  fmt::format("{} needs {} of memory", what, size_text(bytes)),
                  fmt::format("the budget is {}, shared with what is already read; raise it or "
                              "give a smaller file",
                              size_text(budget_->limit()))});
    }
    leases_.push_back(std::move(*lease));
    return {};
}

double MemoryShare::limit() const {
    return budget_ == nullptr ? std::numeric_limits<double>::infinity() : budget_->limit();
}

}  // namespace chainmark
