#pragma once

#include <optional>
#include <queue>
#include <vector>

#include "chainmark/fermion/levels.hpp"

namespace chainmark::fermion {

/// The states with `particles` filled modes in ascending order of energy, every one exactly once.
///
/// A state moves the i-th highest of the `particles` lowest modes up by p_i places,
/// p_0 >= p_1 >= ... >= 0: a partition. Each has one parent, with its last nonzero p_i one less,
/// and none is cheaper than its parent, so a heap gives them in order.
class FixedNumberLevels {
public:
    FixedNumberLevels(
        const ModeSet& modes, UpCount up_count, Real field, Real offset, int particles);

    std::optional<State> next();

private:
    struct Node {
        int before = -1;  ///< the node without the last row
        int row = -1;
        int places = 0;
        Real sum = 0.0L;
    };

    void push(int before, int row, int places);

    const ModeSet& modes_;
    UpCount up_count_;
    int particles_;
    int sea_;  ///< modes below the field: what the flips of a State refer to
    Real base_;
    std::vector<Node> nodes_;
    std::priority_queue<OpenNode> open_;
};

}  // namespace chainmark::fermion
