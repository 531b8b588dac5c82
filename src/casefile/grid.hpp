#pragma once

#include <optional>
#include <string>
#include <vector>

#include "chainmark/casefile/reader.hpp"

namespace chainmark {

struct GridValue {
    double value = 0.0;
    Position at;
};

/// What the values of a grid may be.
enum class GridKind {
    real,
    sites,  ///< whole numbers from 1 to 10^6, and `infinite_sites` for the text "infinite"
};

/// Most values of one axis.
inline constexpr int longest_axis = 100000;

/// number | list | { from, to, count } | { from, to, step }: at least one value.
std::optional<std::vector<GridValue>> read_grid(Reader& reader,
                                                const Node& node,
                                                const std::string& what,
                                                GridKind kind);

}  // namespace chainmark
