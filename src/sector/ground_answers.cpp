#include "chainmark/sector/ground_answers.hpp"

#include <algorithm>
#include <cmath>
#include <set>

#include "chainmark/base/numerics.hpp"
#include "chainmark/sector/entropy.hpp"
#include "chainmark/sector/level_answers.hpp"
#include "chainmark/sector/memory.hpp"
#include "chainmark/sector/response.hpp"
#include "chainmark/sector/sector_choice.hpp"

namespace chainmark::sector {
namespace {

Reference of_space(Reference result, const GroundSpace& ground) {
    result.complete = ground.complete;
    result.skipped = ground.skipped;
    result.degeneracy = static_cast<std::int64_t>(ground.members.size());
    return result;
}

/// An array, with ranges where every element has one.
Reference array(const std::vector<Average>& averages, bool complex, const GroundSpace& ground) {
    Reference result;
    result.value = Value::array(std::vector<double>(averages.size(), 0.0));
    result.value.complex = complex;
    result.basis = Basis::residual;
    Range range;
    for (std::size_t i = 0; i < averages.size(); ++i) {
        result.value.data[i] = complex ? averages[i].value : averages[i].value.real();
        result.bound.push_back(averages[i].bound);
        if (averages[i].range) {
            range.push_back(*averages[i].range);
        }
    }
    if (!complex && range.size() == averages.size()) {
        result.range = std::move(range);
    }
    const bool exact = std::all_of(
        averages.begin(), averages.end(), [](const Average& a) { return a.bound == 0.0; });
    if (exact) {
        result.basis = Basis::exact;
    }
    return of_space(std::move(result), ground);
}

}  // namespace

Answer magnetization_answer(const GroundSpace& ground,
                            const Solution& solution,
                            const Chain& chain,
                            GroundAverages& averages) {
    Average average;
    if (solution.field_outside()) {
        double sum = 0.0;
        double low = chain.length() * chain.spin();
        double high = -low;
        for (const SectorLevel& member : ground.members) {
            const double sz = solution.sz_of_sector(member.sector);
            sum += sz;
            low = std::min(low, sz);
            high = std::max(high, sz);
        }
        average.value = sum / static_cast<double>(ground.members.size()) / chain.length();
        average.bound = epsilon * std::abs(average.value);
        average.range = {low / chain.length(), high / chain.length()};
    } else {
        average = averages.of({mean_sz(chain)}, true).front();
    }
    Reference result = plain_reference(Value::number(average.value.real()), average.bound);
    if (average.range) {
        result.range = Range{*average.range};
    }
    if (solution.field_outside() || average.bound == 0.0) {
        result.basis = Basis::exact;
    }
    return of_space(std::move(result), ground);
}

Answer local_magnetization_answer(const GroundSpace& ground,
                                  const Chain& chain,
                                  Axis axis,
                                  GroundAverages& averages) {
    return array(averages.of(local_spins(chain, axis), true), false, ground);
}

Answer correlation_answer(const GroundSpace& ground,
                          const Chain& chain,
                          const Query& query,
                          GroundAverages& averages) {
    const Options& options = query.options;
    const bool factor = query.spec->id == QuantityId::structure_factor;
    const bool complex = !factor && options.axes == Axes::plus_minus;
    const std::vector<PairSum> sums =
        factor ? structure_factors(chain, options) : correlations(chain, options);
    std::vector<Observable> observables;
    for (const PairSum& sum : sums) {
        observables.push_back(observable_of(sum, chain));
    }
    std::vector<Average> values = averages.of(observables, !complex && !options.connected);
    if (options.connected) {
        for (std::size_t e = 0; e < sums.size(); ++e) {
            subtract_products(values[e], sums[e], averages.of(factors_of(sums[e], chain), false));
        }
    }
    return array(values, complex, ground);
}

Answer string_order_answer(const GroundSpace& ground,
                           const Chain& chain,
                           const Options& options,
                           GroundAverages& averages) {
    return array(averages.of_strings(pairs_of(chain, options), options.axis), false, ground);
}

Answer susceptibility_answer(const Problem& problem,
                             const GroundSpace& ground,
                             Solution& solution,
                             const Context& context) {
    Reference exact = plain_reference(Value::number(0.0), 0.0);
    exact.basis = Basis::exact;
    if (solution.field_outside()) {
        std::set<double> sz;
        for (const SectorLevel& member : ground.members) {
            sz.insert(solution.sz_of_sector(member.sector));
        }
        if (sz.size() > 1) {
            exact.value = Value::status(Special::jump);
        }
        return of_space(std::move(exact), ground);
    }
    const auto found = zero_temperature_response(problem, solution, ground, context);
    if (const auto* why = std::get_if<std::string>(&found)) {
        return Undecided{*why};
    }
    if (std::holds_alternative<Splits>(found)) {
        exact.value = Value::status(Special::jump);
        return of_space(std::move(exact), ground);
    }
    const auto& response = std::get<Response>(found);
    return of_space(plain_reference(Value::number(response.value),
                                    response.bound + epsilon * std::abs(response.value)),
                    ground);
}

Answer entropy_answer(const Problem& problem,
                      Solution& solution,
                      const Options& options,
                      const Context& context) {
    const SectorChoice choice = choose_sectors(problem, solution, options.sector);
    if (!choice.refusal.empty()) {
        return NotCovered{choice.refusal};
    }
    const std::vector<SectorLevel> lowest = solution.lowest(problem, 2, choice.accept());
    const SectorLevel& state = lowest.front();
    if (lowest.size() > 1) {
        const double edge = lowest[1].energy - state.energy - ground_window(problem);
        if (std::abs(edge) <= state.bound + lowest[1].bound) {
            return Undecided{"a level's error bound reaches over the edge of the lowest space"};
        }
        if (edge < 0) {
            return Undecided{
                options.sector ? "the sector's lowest level is degenerate: the entropy depends on "
                                 "the state"
                               : "the ground state is degenerate: the entropy depends on the "
                                 "state; a `sector` can choose one"};
        }
    }
    if (choice.combined[state.sector]) {
        return NotCovered{
            "the lowest state combines two sectors: give its momentum or Sz in place of the "
            "reflection or inversion"};
    }
    const SectorLabel& label = solution.sectors()[state.sector].label;
    const Packing packing(problem.chain);
    const double amplitudes = HalvesBasis::count(packing, label.conserved, label.value);
    const auto lease =
        take_memory(context, amplitudes * 32, "the state written out over all configurations");
    const HalvesBasis configurations(packing, label.conserved, label.value);
    const double tilt = solution.tilt_of({state});
    const Eigen::VectorXcd psi = solution.state(state, configurations);
    const Entropy found = entanglement_entropy(configurations, psi, options, tilt, context);
    Reference result = plain_reference(Value::number(found.value), found.bound);
    result.complete = solution.completeness(problem, state.energy, choice.accept());
    if (!options.sector) {
        result.degeneracy = 1;
    }
    return result;
}

}  // namespace chainmark::sector
