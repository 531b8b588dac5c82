#include "chainmark/formats/duplicates.hpp"

#include <algorithm>

namespace chainmark {

std::optional<PlaceList> PlaceList::make(std::int64_t rows,
                                         std::int64_t columns,
                                         std::int64_t count,
                                         const Context& context) {
    constexpr double largest_key = 1.8e19;
    MemoryShare memory(context);
    const bool fits = static_cast<double>(rows) * static_cast<double>(columns) < largest_key;
    if (!fits || !memory.take(8.0 * static_cast<double>(count), "", "")) {
        return std::nullopt;
    }
    PlaceList list(static_cast<std::uint64_t>(columns), std::move(memory));
    list.places_.reserve(static_cast<std::size_t>(count));
    return list;
}

std::int64_t PlaceList::repeated() {
    std::sort(places_.begin(), places_.end());
    const auto distinct = std::unique(places_.begin(), places_.end());
    return places_.end() - distinct;
}

}  // namespace chainmark
