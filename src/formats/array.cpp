#include "chainmark/formats/array.hpp"

#include <fmt/format.h>
#include <fmt/ranges.h>

namespace chainmark {

std::size_t Array::size() const {
    return std::visit([](const auto& data) { return data.size(); }, values);
}

std::string shape_text(const ArrayShape& shape) {
    return shape.empty() ? "a single number" : fmt::format("{}", fmt::join(shape, " x "));
}

}  // namespace chainmark
