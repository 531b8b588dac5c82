#include "chainmark/fermion/point.hpp"

#include <algorithm>
#include <cmath>

#include "chainmark/base/error.hpp"
#include "chainmark/fermion/correlations.hpp"
#include "chainmark/fermion/jumps.hpp"

namespace chainmark::fermion {
namespace {

std::vector<PairFamily> pair_families(const Options& options, const Chain& chain) {
    std::vector<PairFamily> families;
    for (const auto& [first, second] : options.pairs) {
        families.push_back({first, second, 1});
    }
    for (const int r : options.distance) {
        families.push_back({0, r, chain.is_ring() ? chain.length() : chain.length() - r});
    }
    return families;
}

std::vector<Bounded> bounded(const Averages& averages) {
    std::vector<Bounded> numbers;
    for (const Real value : averages.value) {
        numbers.push_back({value, averages.error});
    }
    return numbers;
}

/// In a space of one state every element's range is the value itself.
Range point_range(const Value& value) {
    Range range;
    for (const std::complex<double>& element : value.data) {
        range.emplace_back(element.real(), element.real());
    }
    return range;
}

}  // namespace

Point::Point(const Solution& solution, const Problem& problem, const Context& context)
    : solution_(solution),
      problem_(problem),
      context_(context),
      levels_(solution, problem.field),
      ground_(find_ground_space(levels_, ground_window(problem), context)) {}

Answer Point::answer(const Query& query) {
    const QuantityId id = query.spec->id;
    switch (id) {
        case QuantityId::ground_energy:
            return ground_energy(false);
        case QuantityId::ground_energy_per_site:
            return ground_energy(true);
        case QuantityId::levels:
            return lowest_levels(query.options.count);
        case QuantityId::spectrum:
            return lowest_levels(std::int64_t{1} << length());
        case QuantityId::jump_fields:
            return jump_fields();
        case QuantityId::mode_energies:
            return mode_energies(query.options.parity);
        default:
            break;
    }
    if (!ground_.undecided.empty()) {
        return Undecided{ground_.undecided};
    }
    switch (id) {
        case QuantityId::gap:
            return gap();
        case QuantityId::magnetization:
            return magnetization();
        case QuantityId::local_magnetization:
            return local_magnetization(query.options.axis);
        case QuantityId::susceptibility:
            return susceptibility();
        default:
            CHAINMARK_EXPECTS(id == QuantityId::spin_correlation);
            return spin_correlation(query.options);
    }
}

Bounded Point::total(Real energy) const {
    const Real constant = solution_.form.constant;
    return {energy + constant, levels_.error() + real_epsilon * std::abs(energy + constant)};
}

Reference Point::with_ground_space(Reference reference) const {
    reference.degeneracy = ground_.degeneracy();
    if (reference.degeneracy) {
        reference.complete = Completeness::proved;
    }
    return reference;
}

Answer Point::ground_energy(bool per_site) {
    const Bounded energy = total(ground_.lowest().energy);
    const Real sites = per_site ? static_cast<Real>(length()) : 1.0L;
    const Real value = energy.value / sites;
    return with_ground_space(
        number_reference({value, energy.error / sites + real_epsilon * std::abs(value)}, basis()));
}

Answer Point::gap() {
    if (!ground_.gap) {  // every state is a ground state
        return with_ground_space(status_reference(Special::undefined));
    }
    return with_ground_space(number_reference({*ground_.gap, 2 * levels_.error()}, basis()));
}

Answer Point::lowest_levels(std::int64_t count) {
    Levels levels(solution_, problem_.field);
    std::vector<Bounded> energies;
    std::vector<Labels> labels;
    for (std::int64_t n = 0; n < count; ++n) {
        if (n % 4096 == 0) {
            poll(context_);
        }
        const std::optional<State> state = levels.next();
        CHAINMARK_EXPECTS(state.has_value());
        energies.push_back(total(state->energy));
        labels.push_back(levels.labels(*state));
    }
    Reference reference = array_reference(energies, basis());
    reference.labels = std::move(labels);
    reference.complete = Completeness::proved;
    return reference;
}

Answer Point::magnetization() {
    // sum over states of 2 N - L, a whole number: the average is rounded once.
    std::int64_t sum = 0;
    int least = length();
    int most = 0;
    for (const State& state : ground_.states) {
        sum += 2 * static_cast<std::int64_t>(state.particles) - length();
        least = std::min(least, state.particles);
        most = std::max(most, state.particles);
    }
    const Real sites = static_cast<Real>(length());
    const Real states = static_cast<Real>(ground_.states.size());
    const Real value = static_cast<Real>(sum) / (2 * sites * states);
    Reference reference =
        number_reference({value, 2 * real_epsilon * std::abs(value)}, Basis::rounding);
    const auto per_site = [&](int particles) {
        return static_cast<double>((2 * static_cast<Real>(particles) - sites) / (2 * sites));
    };
    reference.range = Range{{per_site(least), per_site(most)}};
    return with_ground_space(std::move(reference));
}

Answer Point::local_magnetization(Axis axis) {
    // Sx and Sy change N, and the projector on the ground space does not.
    const bool transverse = axis != Axis::z;
    Reference reference =
        transverse
            ? array_reference(std::vector<Bounded>(static_cast<std::size_t>(length())),
                              Basis::exact)
            : array_reference(bounded(average_sz(solution_, levels_, ground_, context_)), basis());
    if (nondegenerate()) {
        reference.range = point_range(reference.value);
    }
    return with_ground_space(std::move(reference));
}

Answer Point::susceptibility() {
    // Between jumps the ground state does not change with the field.
    const bool jump = !ground_.one_particle_number();
    return with_ground_space(jump ? status_reference(Special::jump)
                                  : number_reference({0.0L, 0.0L}, Basis::exact));
}

Answer Point::jump_fields() {
    const double window = ground_window({problem_.chain, problem_.terms, 0.0});
    const auto jumps = find_jumps(solution_, window, context_);
    if (!jumps) {
        return Undecided{jumps.error()};
    }
    std::vector<Bounded> fields;
    for (std::size_t i = 0; i < jumps->field.size(); ++i) {
        const Real field = jumps->field[i] - static_cast<Real>(problem_.field);
        fields.push_back({field, jumps->error[i] + real_epsilon * std::abs(field)});
    }
    Reference reference = array_reference(fields, basis());
    for (const int particles : jumps->particles) {
        reference.value.total_sz.push_back(particles - length() / 2.0);
    }
    reference.complete = Completeness::proved;
    return reference;
}

Answer Point::spin_correlation(const Options& options) {
    const std::vector<PairFamily> families = pair_families(options, problem_.chain);
    const Averages averages =
        average_szsz(solution_, levels_, ground_, families, options.connected, context_);
    Reference reference = array_reference(bounded(averages), basis());
    if (nondegenerate() && !options.connected) {
        reference.range = point_range(reference.value);
    }
    return with_ground_space(std::move(reference));
}

std::optional<UpCount> Point::resolve(Parity parity) const {
    if (parity == Parity::even || !solution_.form.parity_matters()) {
        return UpCount::even;
    }
    if (parity == Parity::odd) {
        return UpCount::odd;
    }
    const UpCount lowest = ground_.lowest().up_count;
    const bool unique = std::all_of(ground_.states.begin(),
                                    ground_.states.end(),
                                    [&](const State& state) { return state.up_count == lowest; });
    return unique && ground_.undecided.empty() ? std::optional(lowest) : std::nullopt;
}

Answer Point::mode_energies(Parity parity) {
    const std::optional<UpCount> up_count = resolve(parity);
    if (!up_count) {
        return Undecided{
            ground_.undecided.empty()
                ? "the ground space holds states of both parities of the up count, whose "
                  "modes differ: give parity = \"even\" or \"odd\""
                : ground_.undecided + ": give parity = \"even\" or \"odd\""};
    }
    const ModeSet& modes = solution_.of(*up_count);
    const Real field = problem_.field;
    std::vector<Bounded> energies;
    for (const Real energy : modes.energy) {
        energies.push_back(
            {energy - field,
             modes.mode_error + real_epsilon * (std::abs(energy) + std::abs(field))});
    }
    return array_reference(energies, basis());
}

}  // namespace chainmark::fermion
