#pragma once

#include <cstdint>
#include <optional>
#include <queue>
#include <vector>

#include "chainmark/fermion/modes.hpp"

/// Many-body levels from modes alone: which occupations exist, in which order, at what energy.
namespace chainmark::fermion {

/// A many-body state: modes of one class, the sea of all negative ones with some flipped.
struct State {
    UpCount up_count = UpCount::even;
    int particles = 0;  ///< filled modes: the up count where N is conserved
    Real energy = 0.0L;
    std::vector<int> flips;  ///< positions in the ascending list of modes
};

/// A node whose state was not handed out yet. The cheapest comes first out of a priority queue, of
/// equal ones the one that was made first.
struct OpenNode {
    Real key;
    int node;
    bool operator<(const OpenNode& other) const {
        return key > other.key || (key == other.key && node > other.node);
    }
};

/// The states of one parity class in ascending order of energy, every one exactly once.
///
/// With a_0 <= a_1 <= ... the |energy - field| of the modes, a state is the sea (all modes below
/// the field filled) with a set of modes flipped, at the energy of the sea plus the sum of their a.
/// The P of the class, with that of the state without filled modes, fixes the parity of the number
/// of flips. Sets T of positions 1, 2, ... are
/// free: position 0, the cheapest, is flipped where the parity asks for it. Starting from T = {},
/// each T with largest element i has two children, T + {i+1} and T with i replaced by i+1; neither
/// is cheaper than T since a_0 <= a_{i+1}, and every T is reached once, so a heap gives the states
/// in order at O(log n) each, with no state skipped whatever the degeneracies. Method: best-first
/// enumeration of subset sums, common practice, no source.
class ClassLevels {
public:
    /// `offset`: the constant of the class.
    ClassLevels(const ModeSet& modes, UpCount up_count, Real field, Real offset);

    /// The next state; nothing after the last of 2^(L-1).
    std::optional<State> next();

    /// Energy of the next state without taking it.
    std::optional<Real> peek() const;

    /// -1 for the labels of filled modes, 1 for the others: <1 - 2 n> of each, for the frame. O(L).
    std::vector<Real> signs(const State& state) const;

    /// Sum of the filled labels.
    std::int64_t label_sum(const State& state) const;

private:
    struct Node {
        int before = -1;  ///< the node of T without its largest element
        int largest = 0;
        int size = 0;
        Real sum = 0.0L;
    };

    /// a_i; the positions are found outward from the field as they are needed.
    Real cost(int i);
    bool is_filled(int position) const { return position < sea_; }
    bool flips_cheapest(const Node& node) const { return node.size % 2 != odd_flips_; }
    void push(int before, int largest);

    const ModeSet& modes_;
    UpCount up_count_;
    Real field_;
    int sea_;                 ///< number of modes below the field
    int odd_flips_;           ///< 1 where the class needs an odd number of flips
    Real base_;               ///< energy of the sea
    std::vector<int> order_;  ///< positions by |energy - field|, as far as known
    int below_;               ///< next position to enter `order_` from below the field ...
    int above_;               ///< ... and from above
    std::vector<Node> nodes_;
    std::priority_queue<OpenNode> open_;
};

}  // namespace chainmark::fermion
