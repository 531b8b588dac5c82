#include "chainmark/fermion/levels.hpp"

#include <algorithm>
#include <cmath>

namespace chainmark::fermion {
namespace {

std::size_t at(int i) {
    return static_cast<std::size_t>(i);
}

}  // namespace

ClassLevels::ClassLevels(const ModeSet& modes, UpCount up_count, Real field, Real offset)
    : modes_(modes), up_count_(up_count), field_(field) {
    const auto first = std::lower_bound(modes.energy.begin(), modes.energy.end(), field);
    sea_ = static_cast<int>(first - modes.energy.begin());
    const bool odd_vacuum = modes.vacuum < 0;
    odd_flips_ = (sea_ + static_cast<int>(up_count) + (odd_vacuum ? 1 : 0)) % 2;
    const Real half = static_cast<Real>(modes.length()) / 2;
    base_ = offset + (modes.lowest[at(sea_)] - modes.trace / 2) -
            field * (static_cast<Real>(sea_) - half);
    below_ = sea_ - 1;
    above_ = sea_;
    nodes_.push_back({});
    open_.push({flips_cheapest(nodes_.front()) ? cost(0) : 0.0L, 0});
}

Real ClassLevels::cost(int i) {
    while (static_cast<int>(order_.size()) <= i) {
        const bool has_below = below_ >= 0;
        const bool has_above = above_ < modes_.length();
        const bool take_below = has_below && (!has_above || field_ - modes_.energy[at(below_)] <
                                                                modes_.energy[at(above_)] - field_);
        order_.push_back(take_below ? below_-- : above_++);
    }
    return std::abs(modes_.energy[at(order_[at(i)])] - field_);
}

void ClassLevels::push(int before, int largest) {
    const Node& parent = nodes_[at(before)];
    const Node node{.before = before,
                    .largest = largest,
                    .size = parent.size + 1,
                    .sum = parent.sum + cost(largest)};
    open_.push(
        {node.sum + (flips_cheapest(node) ? cost(0) : 0.0L), static_cast<int>(nodes_.size())});
    nodes_.push_back(node);
}

std::optional<Real> ClassLevels::peek() const {
    if (open_.empty()) {
        return std::nullopt;
    }
    return base_ + open_.top().key;
}

std::optional<State> ClassLevels::next() {
    if (open_.empty()) {
        return std::nullopt;
    }
    const OpenNode top = open_.top();
    open_.pop();
    const Node node = nodes_[at(top.node)];
    if (node.largest + 1 < modes_.length()) {
        push(top.node, node.largest + 1);
        if (node.before >= 0) {
            push(node.before, node.largest + 1);
        }
    }
    State state{.up_count = up_count_, .particles = sea_, .energy = base_ + top.key, .flips = {}};
    if (flips_cheapest(node)) {
        state.flips.push_back(order_.front());
    }
    for (int member = top.node; member > 0; member = nodes_[at(member)].before) {
        state.flips.push_back(order_[at(nodes_[at(member)].largest)]);
    }
    for (const int position : state.flips) {
        state.particles += is_filled(position) ? -1 : 1;
    }
    return state;
}

std::vector<Real> ClassLevels::signs(const State& state) const {
    std::vector<Real> signs(modes_.label.size(), 1.0L);
    for (int position = 0; position < sea_; ++position) {
        signs[at(modes_.label[at(position)])] = -1.0L;
    }
    for (const int position : state.flips) {
        signs[at(modes_.label[at(position)])] *= -1.0L;
    }
    return signs;
}

std::int64_t ClassLevels::label_sum(const State& state) const {
    std::int64_t sum = modes_.label_sum[at(sea_)];
    for (const int position : state.flips) {
        const std::int64_t label = modes_.label[at(position)];
        sum += is_filled(position) ? -label : label;
    }
    return sum;
}

}  // namespace chainmark::fermion
