#include "chainmark/sector/level_answers.hpp"

#include <cmath>

#include <fmt/format.h>

#include "chainmark/base/numerics.hpp"
#include "chainmark/sector/jumps.hpp"
#include "chainmark/sector/sector_choice.hpp"

namespace chainmark::sector {

Reference plain_reference(Value value, double bound) {
    Reference result;
    result.value = std::move(value);
    result.bound = {bound};
    result.basis = Basis::residual;
    return result;
}

namespace {

/// On chains of up to so many states the whole ground space is found for its energy, too, and its
/// dimension told. Beyond, only sectors that can hold the lowest level are solved.
constexpr double small_chain = 1e5;

}  // namespace

Answer ground_energy_answer(const Problem& problem, Solution& solution, double factor) {
    if (std::pow(problem.chain.site_dim(), problem.chain.length()) <= small_chain) {
        const GroundSpace space = solution.ground_space(problem);
        const double energy = space.lowest().energy * factor;
        Reference result = plain_reference(
            Value::number(energy), space.lowest().bound * factor + epsilon * std::abs(energy));
        result.complete = space.complete;
        if (!space.straddles) {
            result.degeneracy = static_cast<std::int64_t>(space.members.size());
        }
        return result;
    }
    const GroundEnergy ground = solution.ground_energy(problem);
    const double value = ground.energy * factor;
    Reference result =
        plain_reference(Value::number(value), ground.bound * factor + epsilon * std::abs(value));
    result.complete = ground.complete;
    result.skipped = ground.skipped;
    return result;
}

Answer levels_answer(const Problem& problem, Solution& solution, const Options& options) {
    const SectorChoice choice = choose_sectors(problem, solution, options.sector);
    if (!choice.refusal.empty()) {
        return NotCovered{choice.refusal};
    }
    if (options.count > choice.dim) {
        return NotCovered{fmt::format(
            "there are {:.0f} levels{}", choice.dim, options.sector ? " in this sector" : "")};
    }
    const std::vector<SectorLevel> lowest =
        solution.lowest(problem, static_cast<std::size_t>(options.count), choice.accept());
    std::vector<double> energies;
    Reference result;
    result.complete = solution.completeness(problem, lowest.back().energy, choice.accept());
    for (const SectorLevel& level : lowest) {
        energies.push_back(level.energy);
        result.bound.push_back(level.bound);
        result.labels.push_back(choice.labels(solution, level.sector));
    }
    result.value = Value::array(energies);
    result.basis = Basis::residual;
    return result;
}

Answer spectrum_answer(const Problem& problem, Solution& solution) {
    std::vector<double> energies;
    Reference result;
    for (const LabelledLevel& level : solution.all_levels(problem)) {
        energies.push_back(level.energy);
        result.bound.push_back(level.bound);
        result.labels.push_back(level.labels);
    }
    result.value = Value::array(energies);
    result.basis = Basis::residual;
    result.complete = Completeness::proved;
    return result;
}

namespace {

Answer gap_to_sector(const Problem& problem, Solution& solution, const Options& options) {
    const SectorChoice choice = choose_sectors(problem, solution, options.sector);
    if (!choice.refusal.empty()) {
        return NotCovered{choice.refusal};
    }
    const GroundEnergy ground = solution.ground_energy(problem);
    const SectorLevel lowest = solution.lowest(problem, 1, choice.accept()).front();
    const double value = lowest.energy - ground.energy;
    Reference result = plain_reference(Value::number(value),
                                       lowest.bound + ground.bound + epsilon * std::abs(value));
    result.complete = solution.completeness(problem, lowest.energy, choice.accept());
    return result;
}

}  // namespace

Answer gap_answer(const Problem& problem, Solution& solution, const Options& options) {
    if (options.sector) {
        return gap_to_sector(problem, solution, options);
    }
    const GroundSpace ground = solution.ground_space(problem);
    if (ground.straddles) {
        return Undecided{"a level's error bound reaches over the edge of the ground space"};
    }
    Reference result = plain_reference(Value::status(Special::undefined), 0.0);
    if (ground.next) {
        const double value = ground.next->energy - ground.lowest().energy;
        result = plain_reference(Value::number(value),
                                 ground.next->bound + ground.lowest().bound + epsilon * value);
    }
    result.complete = ground.complete;
    result.degeneracy = static_cast<std::int64_t>(ground.members.size());
    return result;
}

Answer jump_fields_answer(const Problem& problem, Solution& solution) {
    const double window = ground_window({problem.chain, problem.terms, 0.0, {}});
    Staircase jumps = staircase(solution.lowest_by_sz(), window);
    for (std::size_t i = 0; i < jumps.fields.size(); ++i) {
        jumps.fields[i] -= problem.field;
        jumps.bounds[i] += epsilon * std::abs(problem.field);
    }
    Reference result;
    result.value = Value::array(jumps.fields);
    result.value.total_sz = std::move(jumps.sz);
    result.bound = std::move(jumps.bounds);
    result.basis = Basis::residual;
    return result;
}

}  // namespace chainmark::sector
