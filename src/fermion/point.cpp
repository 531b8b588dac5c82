#include "chainmark/fermion/point.hpp"

#include <algorithm>
#include <cmath>
#include <numeric>
#include <set>

#include <fmt/format.h>

#include "chainmark/base/error.hpp"
#include "chainmark/fermion/entropy.hpp"
#include "chainmark/fermion/jumps.hpp"
#include "chainmark/fermion/response.hpp"
#include "chainmark/fermion/sector_levels.hpp"

namespace chainmark::fermion {
namespace {

/// In a space of one state every element's range is the value itself.
Range point_range(const Value& value) {
    Range range;
    for (const std::complex<double>& element : value.data) {
        range.emplace_back(element.real(), element.real());
    }
    return range;
}

/// Strings of an odd number of Sx or Sy change the parity.
Keeps kept_by_strings(const Options& options) {
    if (options.axis == Axis::z) {
        return Keeps::sz;
    }
    const auto odd_string = [](int r) { return r != 0 && r % 2 == 0; };
    const bool changes =
        std::any_of(options.distance.begin(), options.distance.end(), odd_string) ||
        std::any_of(options.pairs.begin(), options.pairs.end(), [&](const auto& pair) {
            return odd_string(pair.second - pair.first);
        });
    return changes ? Keeps::nothing : Keeps::parity;
}

}  // namespace

Point::Point(const Solution& solution,
             const Problem& problem,
             double window,
             const Context& context)
    : solution_(solution),
      problem_(problem),
      context_(context),
      levels_(solution, problem.field),
      ground_(find_ground_space(levels_, window, context)),
      mixture_(solution, levels_, ground_, context) {}

Answer Point::answer(const Query& query) {
    const QuantityId id = query.spec->id;
    switch (id) {
        case QuantityId::ground_energy:
            return ground_energy(false);
        case QuantityId::ground_energy_per_site:
            return ground_energy(true);
        case QuantityId::levels:
            return lowest_levels(query.options.count, query.options.sector.value_or(Labels{}));
        case QuantityId::spectrum:
            return lowest_levels(std::int64_t{1} << length(), {});
        case QuantityId::jump_fields:
            return jump_fields();
        case QuantityId::mode_energies:
            return mode_energies(query.options.parity);
        default:
            break;
    }
    if (query.options.sector) {
        CHAINMARK_EXPECTS(id == QuantityId::gap);
        return sector_gap(*query.options.sector);
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
        case QuantityId::entanglement_entropy:
            return entropy(query.options);
        default:
            return correlation(id, query.options);
    }
}

Bounded Point::total(Real energy) const {
    return {energy, levels_.error() + real_epsilon * std::abs(energy)};
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

Answer Point::sector_gap(const Labels& wanted) {
    SectorLevels levels(solution_, problem_.field, wanted);
    const std::optional<State> state = levels.next(context_);
    if (!state) {
        return NotCovered{"no state of this sector was found"};
    }
    const Real gap = state->energy - ground_.lowest().energy;
    return number_reference({gap, 2 * levels.error() + real_epsilon * std::abs(gap)}, basis());
}

Answer Point::lowest_levels(std::int64_t count, const Labels& wanted) {
    SectorLevels levels(solution_, problem_.field, wanted);
    std::vector<Bounded> energies;
    std::vector<Labels> labels;
    for (std::int64_t n = 0; n < count; ++n) {
        const std::optional<State> state = levels.next(context_);
        if (!state) {
            return levels.gave_up()
                       ? Answer(Undecided{"too few levels of this momentum were found"})
                       : Answer(NotCovered{fmt::format("the sector has {} levels", n)});
        }
        energies.push_back(total(state->energy));
        labels.push_back(levels.labels(*state));
    }
    Reference reference = array_reference(energies, basis());
    reference.labels = std::move(labels);
    reference.complete = Completeness::proved;
    return reference;
}

bool Point::diagonal_between_states(Keeps keeps) const {
    if (keeps == Keeps::nothing) {
        return nondegenerate();
    }
    const auto sector = [&](const State& state) {
        const bool by_number = solution_.conserving && keeps == Keeps::sz;
        return by_number ? state.particles : static_cast<int>(state.up_count);
    };
    std::set<int> sectors;
    for (const State& state : ground_.states) {
        sectors.insert(sector(state));
    }
    return sectors.size() == ground_.states.size();
}

std::optional<Range> Point::range_of(const Measured& measured, Keeps keeps) const {
    if (!diagonal_between_states(keeps)) {
        return std::nullopt;
    }
    Range range;
    for (std::size_t s = 0; s < ground_.states.size(); ++s) {
        const std::vector<Average> own = measured(SingleMember(mixture_, s));
        for (std::size_t e = 0; e < own.size(); ++e) {
            const auto value = static_cast<double>(own[e].value.real());
            if (s == 0) {
                range.emplace_back(value, value);
            }
            range[e].first = std::min(range[e].first, value);
            range[e].second = std::max(range[e].second, value);
        }
    }
    return range;
}

Reference Point::averaged(const Measured& measured, Keeps keeps) const {
    Reference reference = average_reference(measured(mixture_), false, basis());
    reference.range = nondegenerate() ? point_range(reference.value) : range_of(measured, keeps);
    return with_ground_space(std::move(reference));
}

Answer Point::magnetization() {
    if (!solution_.conserving) {
        return mean_magnetization();
    }
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

Answer Point::mean_magnetization() {
    Reference reference = averaged(
        [&](const Mixture& mixture) {
            CompensatedSum sum;
            Real error = 0.0L;
            const Real sites = static_cast<Real>(length());
            for (const Average& sz : sz_profile(mixture, problem_.chain, context_)) {
                sum.add(sz.value.real());
                error += sz.error / sites;
            }
            return std::vector<Average>{{sum.value() / sites, error}};
        },
        Keeps::sz);
    reference.value.kind = Kind::number;
    reference.value.shape.clear();
    return reference;
}

Answer Point::local_magnetization(Axis axis) {
    if (axis == Axis::z) {
        return averaged(
            [&](const Mixture& mixture) { return sz_profile(mixture, problem_.chain, context_); },
            Keeps::sz);
    }
    // Sx and Sy change the parity of N, and the projector on the ground space does not.
    Reference reference =
        array_reference(std::vector<Bounded>(static_cast<std::size_t>(length())), Basis::exact);
    if (nondegenerate()) {
        reference.range = point_range(reference.value);
    }
    return with_ground_space(std::move(reference));
}

Answer Point::susceptibility() {
    if (!solution_.conserving) {
        const auto found = zero_temperature_response(solution_, levels_, ground_, context_);
        if (const auto* reason = std::get_if<std::string>(&found)) {
            return Undecided{*reason};
        }
        const auto* number = std::get_if<Bounded>(&found);
        return with_ground_space(number == nullptr ? status_reference(Special::jump)
                                                   : number_reference(*number, basis()));
    }
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

Answer Point::correlation(QuantityId id, const Options& options) {
    const bool order = id == QuantityId::string_order;
    const Measured measured = [&](const Mixture& mixture) {
        const auto of = order                                ? order_strings
                        : id == QuantityId::structure_factor ? structure_factors
                                                             : correlations;
        return of(mixture, problem_.chain, options, context_);
    };
    const bool complex =
        !order && id != QuantityId::structure_factor && options.axes == Axes::plus_minus;
    if (complex || options.connected) {  // these have no range
        return with_ground_space(average_reference(measured(mixture_), complex, basis()));
    }
    if (order) {
        return averaged(measured, kept_by_strings(options));
    }
    const bool along_one = options.axes == Axes::xx || options.axes == Axes::yy;
    return averaged(measured, along_one ? Keeps::parity : Keeps::sz);
}

Answer Point::entropy(const Options& options) {
    if (!nondegenerate()) {
        return Undecided{"the ground space is degenerate: the entropy depends on the state"};
    }
    std::vector<int> sites = entropy_sites(options.block, length()).value();
    WickState<double>& wick = mixture_.single();
    if (wick.state().homogeneous()) {  // the first ones do as well
        std::iota(sites.begin(), sites.end(), 0);
    }
    const RealMatrix gamma = wick.covariance(sites);
    const Bounded entropy =
        modes_entropy(gamma,
                      wick.state().bipartite(),
                      wick.covariance_error(static_cast<std::size_t>(gamma.rows())),
                      mixture_.tilt(),
                      {.order = options.order, .log2 = options.log2});
    return with_ground_space(number_reference(entropy, basis()));
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
    const Real field = solution_.outer_field(problem_.field);
    std::vector<Real> energies;
    for (std::size_t i = 0; i < modes.energy.size(); ++i) {
        const bool keeps_sign =
            solution_.conserving ||
            std::count(modes.unpaired.begin(), modes.unpaired.end(), modes.label[i]) > 0;
        const Real energy = modes.energy[i] - field;
        energies.push_back(keeps_sign ? energy : std::abs(energy));
    }
    std::sort(energies.begin(), energies.end());
    std::vector<Bounded> bounded_energies;
    for (const Real energy : energies) {
        bounded_energies.push_back(
            {energy, modes.mode_error + real_epsilon * (std::abs(energy) + 2 * std::abs(field))});
    }
    return array_reference(bounded_energies, basis());
}

}  // namespace chainmark::fermion
