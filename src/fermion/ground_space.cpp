#include "chainmark/fermion/ground_space.hpp"

#include <algorithm>
#include <cmath>
#include <map>

#include <fmt/format.h>

#include "chainmark/fermion/fixed_number_levels.hpp"

namespace chainmark::fermion {
namespace {

ClassLevels class_levels(const Solution& solution, UpCount up_count, double field) {
    return {solution.of(up_count),
            up_count,
            static_cast<Real>(solution.outer_field(field)),
            solution.form.constant_of(up_count)};
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

Solution solve(QuadraticForm form, const Context& context) {
    Solution solution{.form = std::move(form), .modes = {}};
    const QuadraticForm& own = solution.form;
    solution.conserving = own.conserves_number();
    solution.two_classes = own.parity_matters();
    solution.constants = std::abs(own.constant) + std::abs(own.constant_times_parity);
    for (int j = 0; j < own.length(); ++j) {
        solution.constants += std::max(std::abs(own.field_at(j, UpCount::even)),
                                       std::abs(own.field_at(j, UpCount::odd)));
    }
    solution.modes[0] = solve_modes(own, UpCount::even, context);
    if (solution.two_classes) {
        solution.modes[1] = solve_modes(own, UpCount::odd, context);
    }
    return solution;
}

Real Solution::sum_error(Real outer_field) const {
    return std::max(of(UpCount::even).sum_error(outer_field),
                    of(UpCount::odd).sum_error(outer_field)) +
           4 * real_epsilon * constants;
}

Levels::Levels(const Solution& solution, double field, std::optional<UpCount> only)
    : solution_(solution),
      field_(static_cast<Real>(solution.outer_field(field))),
      classes_{class_levels(solution, UpCount::even, field),
               class_levels(solution, UpCount::odd, field)},
      only_(only),
      error_(solution.sum_error(solution.outer_field(field))) {}

std::optional<State> Levels::next() {
    if (only_) {
        return classes_[static_cast<std::size_t>(*only_)].next();
    }
    const std::optional<Real> even = classes_[0].peek();
    const std::optional<Real> odd = classes_[1].peek();
    const bool take_odd = odd && (!even || *odd < *even);
    return classes_[take_odd ? 1 : 0].next();
}

std::optional<Real> Levels::in_sector(const State& state, std::int64_t skipped) const {
    const auto after = [&](auto levels) {
        for (std::int64_t n = 0; n < skipped; ++n) {
            levels.next();
        }
        const std::optional<State> found = levels.next();
        return found ? std::optional(found->energy) : std::nullopt;
    };
    const ModeSet& modes = solution_.of(state.up_count);
    const Real constant = solution_.form.constant_of(state.up_count);
    return solution_.conserving
               ? after(FixedNumberLevels(modes, state.up_count, field_, constant, state.particles))
               : after(ClassLevels(modes, state.up_count, field_, constant));
}

std::unique_ptr<GaussianState> Levels::gaussian(const State& state) const {
    return solution_.of(state.up_count).frame->filled(signs(state));
}

Labels Levels::labels(const State& state) const {
    const int length = solution_.form.length();
    Labels labels;
    if (solution_.conserving) {
        labels.sz = state.particles - length / 2.0;
    } else {
        labels.parity = parity_of(state.up_count);
    }
    const bool has_momentum = solution_.form.kind == FormKind::uniform_ring &&
                              (solution_.conserving || solution_.form.chain.twist == 0.0);
    if (has_momentum) {
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
    if (!sector_gap || distance == 0.0L) {
        return 0.0L;
    }
    const Real room = *sector_gap - 4 * energy_error;
    return room > distance ? distance / room : 1.0L;
}

namespace {

struct OneSector {
    State example;
    std::int64_t count = 0;
    Real highest = 0.0L;
};

std::optional<Real> find_sector_gap(const Levels& levels,
                                    const std::vector<State>& states,
                                    bool conserving) {
    std::map<int, OneSector> sectors;
    for (const State& state : states) {
        OneSector& own = sectors[conserving ? state.particles : static_cast<int>(state.up_count)];
        own = {state, own.count + 1, state.energy};
    }
    std::optional<Real> least;
    for (const auto& [key, own] : sectors) {
        if (const std::optional<Real> next = levels.in_sector(own.example, own.count)) {
            least = std::min(least.value_or(*next - own.highest), *next - own.highest);
        }
    }
    return least;
}

}  // namespace

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
    if (ground.undecided.empty()) {
        ground.sector_gap = find_sector_gap(levels, ground.states, levels.conserving());
    }
    return ground;
}

}  // namespace chainmark::fermion
