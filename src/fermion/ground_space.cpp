#include "chainmark/fermion/ground_space.hpp"

#include <algorithm>
#include <cmath>

#include <fmt/format.h>

namespace chainmark::fermion {
namespace {

Real onsite_sum(const ChainForm& form) {
    CompensatedSum sum;
    for (const double onsite : form.onsite) {
        sum.add(onsite);
    }
    return sum.value();
}

ClassLevels class_levels(const Solution& solution, UpCount up_count, double field) {
    return {solution.of(up_count), up_count, field, -onsite_sum(solution.form) / 2};
}

/// n of k = (2 pi n + twist N)/L: k_m = (2 pi (m + 1/2 [N even]) + twist)/L, summed.
int momentum_number(std::int64_t label_sum, const State& state, int length) {
    const std::int64_t halves = state.up_count == UpCount::even ? state.particles / 2 : 0;
    std::int64_t n = (label_sum + halves) % length;
    if (2 * n > length) {
        n -= length;
    }
    return static_cast<int>(n);
}

}  // namespace

Solution solve(const ChainForm& form, const Context& context) {
    Solution solution{.form = form, .modes = {}};
    solution.modes[0] = solve_modes(form, UpCount::even, context);
    if (form.parity_matters()) {
        solution.modes[1] = solve_modes(form, UpCount::odd, context);
    }
    return solution;
}

Real Solution::sum_error(Real field) const {
    Real onsite = 0.0L;
    for (const double value : form.onsite) {
        onsite += std::abs(value);
    }
    return std::max(of(UpCount::even).sum_error(field), of(UpCount::odd).sum_error(field)) +
           4 * real_epsilon * onsite;
}

Levels::Levels(const Solution& solution, double field)
    : solution_(solution),
      classes_{class_levels(solution, UpCount::even, field),
               class_levels(solution, UpCount::odd, field)},
      error_(solution.sum_error(field)) {}

std::optional<State> Levels::next() {
    const std::optional<Real> even = classes_[0].peek();
    const std::optional<Real> odd = classes_[1].peek();
    const bool take_odd = odd && (!even || *odd < *even);
    return classes_[take_odd ? 1 : 0].next();
}

Occupation Levels::occupation(const State& state) {
    return classes_[static_cast<std::size_t>(state.up_count)].occupation(state);
}

Labels Levels::labels(const State& state) const {
    const int length = solution_.form.length();
    Labels labels;
    labels.sz = state.particles - length / 2.0;
    if (solution_.form.kind == FormKind::uniform_ring) {
        const ClassLevels& own = classes_[static_cast<std::size_t>(state.up_count)];
        labels.momentum = momentum_number(own.label_sum(state), state, length);
    }
    return labels;
}

bool GroundSpace::one_particle_number() const {
    return std::all_of(states.begin(), states.end(), [&](const State& state) {
        return state.particles == lowest().particles;
    });
}

std::optional<std::int64_t> GroundSpace::degeneracy() const {
    if (!undecided.empty()) {
        return std::nullopt;
    }
    return static_cast<std::int64_t>(states.size());
}

Real GroundSpace::tilt(Real distance) const {
    if (!gap || distance == 0.0L) {
        return 0.0L;
    }
    const Real room = *gap - 4 * energy_error;
    return room > distance ? distance / room : 1.0L;
}

GroundSpace find_ground_space(Levels& levels, double window, const Context& context) {
    GroundSpace ground;
    ground.energy_error = levels.error();
    ground.states.push_back(*levels.next());
    const Real error = 2 * levels.error();
    while (const std::optional<State> state = levels.next()) {
        if (ground.states.size() % 4096 == 0) {
            poll(context);
        }
        const Real above = state->energy - ground.lowest().energy;
        if (above - error > window) {
            ground.gap = above;
            break;
        }
        if (!(above + error <= window)) {
            ground.undecided = fmt::format(
                "a level {:.3g} +- {:.2g} above the lowest meets the edge of the ground space at "
                "{:.3g}, so its dimension is not known",
                static_cast<double>(above),
                static_cast<double>(error),
                window);
            break;
        }
        if (ground.states.size() == largest_ground_space) {
            ground.undecided =
                fmt::format("the ground space holds more than {} states", largest_ground_space);
            break;
        }
        ground.states.push_back(*state);
    }
    return ground;
}

}  // namespace chainmark::fermion
