#include "chainmark/sector/memory.hpp"

#include <stdexcept>

#include <fmt/format.h>

namespace chainmark::sector {

std::optional<MemoryBudget::Lease> take_memory(const Context& context,
                                               double bytes,
                                               const std::string& what) {
    if (!context.memory) {
        return std::nullopt;
    }
    auto lease = context.memory->take(bytes);
    if (!lease) {
        throw std::runtime_error(fmt::format(
            "{} needs {:.2g} GiB of memory, more than is left of the {:.2g} GiB allowed",
            what,
            bytes / 0x1p30,
            context.memory->limit() / 0x1p30));
    }
    return lease;
}

}  // namespace chainmark::sector
