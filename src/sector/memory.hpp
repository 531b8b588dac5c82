#pragma once

#include <optional>
#include <string>

#include "chainmark/base/context.hpp"

namespace chainmark::sector {

/// Takes the bytes from the budget of the context; nothing where there is no budget. Throws
/// std::runtime_error, "`what` needs ... of memory", where they do not fit beside what is taken.
std::optional<MemoryBudget::Lease> take_memory(const Context& context,
                                               double bytes,
                                               const std::string& what);

}  // namespace chainmark::sector
