#include "chainmark/fermion/fixed_number_levels.hpp"

#include <algorithm>

namespace chainmark::fermion {
namespace {

std::size_t at(int i) {
    return static_cast<std::size_t>(i);
}

}  // namespace

FixedNumberLevels::FixedNumberLevels(
    const ModeSet& modes, UpCount up_count, Real field, Real offset, int particles)
    : modes_(modes), up_count_(up_count), particles_(particles) {
    const auto first = std::lower_bound(modes.energy.begin(), modes.energy.end(), field);
    sea_ = static_cast<int>(first - modes.energy.begin());
    const Real half = static_cast<Real>(modes.length()) / 2;
    base_ = offset + (modes.lowest[at(particles)] - modes.trace / 2) -
            field * (static_cast<Real>(particles) - half);
    nodes_.push_back({});
    open_.push({0.0L, 0});
}

void FixedNumberLevels::push(int before, int row, int places) {
    const int from = particles_ - 1 - row;
    const Real step = modes_.energy[at(from + places)] - modes_.energy[at(from)];
    const Node node{
        .before = before, .row = row, .places = places, .sum = nodes_[at(before)].sum + step};
    open_.push({node.sum, static_cast<int>(nodes_.size())});
    nodes_.push_back(node);
}

std::optional<State> FixedNumberLevels::next() {
    if (open_.empty()) {
        return std::nullopt;
    }
    const OpenNode top = open_.top();
    open_.pop();
    const Node node = nodes_[at(top.node)];
    const int holes = modes_.length() - particles_;
    if (node.row >= 0) {
        const Node& before = nodes_[at(node.before)];
        if (node.places < (before.row >= 0 ? before.places : holes)) {
            push(node.before, node.row, node.places + 1);
        }
    }
    if (node.row + 1 < particles_ && holes > 0) {
        push(top.node, node.row + 1, 1);
    }
    State state{
        .up_count = up_count_, .particles = particles_, .energy = base_ + top.key, .flips = {}};
    std::vector<int> changed;
    for (int position = std::min(sea_, particles_); position < std::max(sea_, particles_);
         ++position) {
        changed.push_back(position);
    }
    for (int member = top.node; member > 0; member = nodes_[at(member)].before) {
        const int from = particles_ - 1 - nodes_[at(member)].row;
        changed.push_back(from);
        changed.push_back(from + nodes_[at(member)].places);
    }
    // A position that changes twice does not change.
    std::sort(changed.begin(), changed.end());
    for (const int position : changed) {
        if (!state.flips.empty() && state.flips.back() == position) {
            state.flips.pop_back();
        } else {
            state.flips.push_back(position);
        }
    }
    return state;
}

}  // namespace chainmark::fermion
