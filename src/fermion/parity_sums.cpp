#include "chainmark/fermion/parity_sums.hpp"

#include <algorithm>
#include <cmath>

#include "chainmark/base/error.hpp"

namespace chainmark::fermion {
namespace {

Moments shifted(Moments moments, Real by) {
    moments.mean += by;
    return moments;
}

}  // namespace

ParitySums joined(const ParitySums& a, const ParitySums& b, Real square) {
    const Real both = square * a.odd * b.odd;
    return {a.log_even + b.log_even + std::log1p(both), (a.odd + b.odd) / (1 + both)};
}

Moments mixed(const Moments& a, Real weight_a, const Moments& b, Real weight_b) {
    const Real distance = b.mean - a.mean;
    const Real mean =
        weight_b < weight_a ? a.mean + weight_b * distance : b.mean - weight_a * distance;
    return {
        mean,
        weight_a * a.variance + weight_b * b.variance + weight_a * weight_b * distance * distance};
}

OccupiedModes::OccupiedModes(const std::vector<ModeWeight>& modes, Real temperature)
    : temperature_(temperature) {
    CHAINMARK_EXPECTS(!modes.empty() && temperature > 0);
    const auto cheapest =
        std::min_element(modes.begin(), modes.end(), [](const ModeWeight& a, const ModeWeight& b) {
            return a.cost < b.cost;
        });
    cheapest_ = cheapest->cost;
    root_ = std::exp(-cheapest_ / temperature_);
    square_ = root_ * root_;
    add(*cheapest);  // first: its y = 1 keeps odd >= 1
    for (auto mode = modes.begin(); mode != modes.end(); ++mode) {
        if (mode != cheapest) {
            add(*mode);
        }
    }
    sums_.log_even = log_even_.value();
}

Real OccupiedModes::weight_over_cheapest(Real cost) const {
    return std::exp(-(cost - cheapest_) / temperature_);
}

void OccupiedModes::add(const ModeWeight& mode) {
    const Real y = weight_over_cheapest(mode.cost);
    const Real both = square_ * y * sums_.odd;
    const Real even_from_odd = both / (1 + both);
    const Real even_from_even = 1 / (1 + both);
    const Real odd_from_even = y / (sums_.odd + y);
    const Real odd_from_odd = sums_.odd / (sums_.odd + y);
    const auto [even, odd] = branches_;
    branches_[0] = {
        mixed(
            even.energy, even_from_even, shifted(odd.energy, mode.cost + cheapest_), even_from_odd),
        mixed(even.sz, even_from_even, shifted(odd.sz, mode.sz), even_from_odd)};
    branches_[1] = {
        mixed(odd.energy, odd_from_odd, shifted(even.energy, mode.cost - cheapest_), odd_from_even),
        mixed(odd.sz, odd_from_odd, shifted(even.sz, mode.sz), odd_from_even)};
    sums_.odd = (sums_.odd + y) / (1 + both);
    log_even_.add(std::log1p(both));
}

Real OccupiedModes::odd_over_even() const {
    return root_ * sums_.odd;
}

Real OccupiedModes::log_sum(bool odd) const {
    return odd ? sums_.log_even + std::log(sums_.odd) : sums_.log_even;
}

}  // namespace chainmark::fermion
