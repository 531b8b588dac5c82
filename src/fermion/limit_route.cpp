#include <algorithm>
#include <cmath>
#include <optional>

#include <fmt/format.h>

#include "chainmark/fermion/answers.hpp"
#include "chainmark/fermion/bulk.hpp"
#include "chainmark/fermion/bulk_correlations.hpp"
#include "chainmark/fermion/bulk_entropy.hpp"
#include "chainmark/fermion/infinite_phase.hpp"
#include "chainmark/fermion/routes.hpp"

namespace chainmark {
namespace {

using fermion::Bands;
using fermion::Bounded;
using fermion::InfiniteChain;
using fermion::Phase;
using fermion::Real;

Reference answer_of(const fermion::GroundValue& found) {
    return fermion::number_reference(found.value, found.closed ? Basis::rounding : Basis::estimate);
}

/// With a band of no width at zero energy every filling of it is a ground state.
Reference magnetization(const Bands& bands) {
    Reference reference = answer_of(fermion::ground_magnetization(bands));
    const InfiniteChain& chain = bands.chain();
    const double sign = chain.field > 0 ? 1.0 : -1.0;
    if (fermion::phase_of(chain) == Phase::trivial) {
        reference.range = Range{{-0.5, 0.5}};
    } else if (fermion::at_flat_band(chain)) {
        reference = fermion::number_reference({0.25L * sign, 0.0L}, Basis::exact);
        reference.range = Range{{std::min(0.0, 0.5 * sign), std::max(0.0, 0.5 * sign)}};
    }
    return reference;
}

Reference susceptibility(const Bands& bands) {
    const InfiniteChain& chain = bands.chain();
    const Phase phase = fermion::phase_of(chain);
    if (phase == Phase::trivial || fermion::at_flat_band(chain)) {
        return fermion::status_reference(Special::jump);
    }
    const bool diverges = phase == Phase::saturation_point || phase == Phase::gap_edge ||
                          (phase == Phase::critical && !chain.conserves_sz());
    if (diverges) {
        return fermion::status_reference(Special::infinite);
    }
    if (chain.conserves_sz() && phase != Phase::critical) {
        return fermion::number_reference({0.0L, 0.0L}, Basis::exact);
    }
    return answer_of(fermion::ground_susceptibility(bands));
}

Reference gap(const Bands& bands) {
    const Bounded found = fermion::gap_of(bands);
    const bool exact = found.value == 0.0L && found.error == 0.0L;
    return fermion::number_reference(found, exact ? Basis::exact : Basis::rounding);
}

/// XX: J cos k = h has the solution k = arccos(h/J) in [0, pi] for |h| <= |J|. With pairing e
/// vanishes at k = 0 or pi alone, at the border of the phases.
Reference fermi_momentum(const InfiniteChain& chain) {
    constexpr Real few = 16 * fermion::real_epsilon;
    const Phase phase = fermion::phase_of(chain);
    const bool gapless = phase == Phase::critical || phase == Phase::saturation_point;
    const Real border = chain.hopping();
    if (!gapless || border == 0.0L) {
        return fermion::status_reference(Special::undefined);
    }
    if (!chain.conserves_sz()) {
        const bool at_zero = chain.field * border > 0;
        return fermion::number_reference({at_zero ? 0.0L : fermion::real_pi, 0.0L},
                                         Basis::rounding);
    }
    const Real inside = (std::abs(border) - chain.field) * (std::abs(border) + chain.field);
    const Real h_over_sign = border > 0 ? chain.field : -chain.field;
    return fermion::number_reference(
        {std::atan2(std::sqrt(std::max(0.0L, inside)), h_over_sign), few * fermion::real_pi},
        Basis::rounding);
}

Reference phase(const InfiniteChain& chain) {
    const std::string word = fermion::to_string(fermion::phase_of(chain));
    return word.empty() ? fermion::status_reference(Special::undefined)
                        : fermion::text_reference(word);
}

Reference spin_correlation(const Bands& bands,
                           const std::optional<Real>& temperature,
                           const Options& options) {
    const fermion::Correlations correlations(bands, temperature, options);
    Reference reference = fermion::array_reference(
        correlations.values(), correlations.closed() ? Basis::rounding : Basis::estimate);
    reference.value.complex = options.axes == Axes::plus_minus;
    return reference;
}

Reference string_order(const Bands& bands, const Options& options) {
    return fermion::array_reference(fermion::string_orders(bands, options), Basis::estimate);
}

/// Where the ground space holds more than one state the entropy depends on which.
Answer entanglement_entropy(const Bands& bands, const Options& options) {
    const Phase phase = fermion::phase_of(bands.chain());
    if (phase == Phase::trivial || phase == Phase::ordered_x || phase == Phase::ordered_y ||
        fermion::at_flat_band(bands.chain())) {
        return Undecided{"depends on the state: there is more than one ground state"};
    }
    return fermion::number_reference(fermion::block_entropy(bands, options), Basis::estimate);
}

Reference thermal(const fermion::BulkThermal& thermal, QuantityId id) {
    const auto bounded = [&]() -> Bounded {
        switch (id) {
            case QuantityId::free_energy_per_site:
                return thermal.free_energy();
            case QuantityId::energy_per_site:
                return thermal.energy();
            case QuantityId::entropy_per_site:
                return thermal.entropy();
            case QuantityId::specific_heat_per_site:
                return thermal.specific_heat();
            case QuantityId::magnetization:
                return thermal.magnetization();
            default:
                return thermal.susceptibility();
        }
    };
    return fermion::number_reference(bounded(), Basis::estimate);
}

Reference ground(const Bands& bands, QuantityId id) {
    switch (id) {
        case QuantityId::ground_energy_per_site:
            return answer_of(fermion::ground_energy_per_site(bands));
        case QuantityId::magnetization:
            return magnetization(bands);
        case QuantityId::susceptibility:
            return susceptibility(bands);
        case QuantityId::gap:
            return gap(bands);
        case QuantityId::fermi_momentum:
            return fermi_momentum(bands.chain());
        default:
            return phase(bands.chain());
    }
}

/// tanh(e/2T) turns within T of a Fermi point, and momenta are no finer than this.
constexpr Real lowest_temperature = 1e-12L;

Answer answer(const Bands& bands, const Problem& problem, const Query& query) {
    const std::optional<Real> temperature = problem.temperature;
    if (temperature && *temperature < lowest_temperature * bands.chain().scale()) {
        return Undecided{fmt::format("temperatures below {} of the couplings are not resolved",
                                     static_cast<double>(lowest_temperature))};
    }
    if (query.spec->id == QuantityId::spin_correlation) {
        return spin_correlation(bands, temperature, query.options);
    }
    if (temperature) {
        return thermal({bands, *temperature}, query.spec->id);
    }
    if (query.spec->id == QuantityId::string_order) {
        return string_order(bands, query.options);
    }
    if (query.spec->id == QuantityId::entanglement_entropy) {
        Answer entropy = entanglement_entropy(bands, query.options);
        if (auto* reference = std::get_if<Reference>(&entropy)) {
            reference->approach =
                fermion::approach_of(bands, problem.chain, QuantityId::entanglement_entropy);
        }
        return entropy;
    }
    Reference reference = ground(bands, query.spec->id);
    reference.approach = fermion::approach_of(bands, problem.chain, query.spec->id);
    reference.critical = fermion::critical_law(bands, query.spec->id);
    return reference;
}

int reach(const Options& options) {
    int farthest = 0;
    for (const auto& [i, j] : options.pairs) {
        farthest = std::max(farthest, std::abs(i - j));
    }
    for (const int r : options.distance) {
        farthest = std::max(farthest, r);
    }
    return farthest;
}

std::string block_refusal(const std::vector<int>& block) {
    if (!fermion::is_one_piece(block)) {
        return "only blocks of one piece are covered by this route";
    }
    return static_cast<int>(block.size()) <= fermion::longest_block
               ? ""
               : fmt::format("blocks of more than {} sites are not covered",
                             fermion::longest_block);
}

/// A determinant of as many rows as there are bonds between, or for zz two contractions.
int farthest_covered(const Query& query, bool is_closed) {
    if (query.spec->id == QuantityId::string_order || query.options.axes != Axes::zz) {
        return fermion::farthest_determinant;
    }
    return is_closed ? fermion::farthest_closed : fermion::farthest_contraction;
}

std::string refusal(const Query& query, const InfiniteChain& chain, bool is_closed) {
    const std::string& instead = query.spec->on_infinite;
    if (query.spec->where == Where::finite) {
        return instead.empty()
                   ? "has no meaning on the infinite chain"
                   : fmt::format("has no meaning on the infinite chain; {} has", instead);
    }
    if (query.options.sector) {
        return "a sector of the user's has no meaning on the infinite chain";
    }
    switch (query.spec->id) {
        case QuantityId::entanglement_entropy:
            return block_refusal(query.options.block);
        case QuantityId::fermi_momentum:
            return chain.alternating ? "with two sites a cell k has no unique meaning" : "";
        case QuantityId::string_order:
        case QuantityId::spin_correlation: {
            const int most = farthest_covered(query, is_closed);
            return reach(query.options) <= most
                       ? ""
                       : fmt::format("distances above {} are not covered here", most);
        }
        default:
            return "";
    }
}

/// Determinants dominate.
double estimated_seconds(const Query& query, bool is_closed) {
    double seconds = 1e-3;
    const bool is_string = query.spec->id == QuantityId::string_order;
    if (is_string || query.spec->id == QuantityId::spin_correlation) {
        const double farthest = reach(query.options);
        seconds += is_closed ? 1e-7 * farthest : 1e-6 * farthest * farthest;
        if (is_string || query.options.axes != Axes::zz) {
            const auto count =
                static_cast<double>(query.options.distance.size() + query.options.pairs.size());
            seconds += 8e-9 * count * farthest * farthest * farthest;
        }
    }
    if (query.spec->id == QuantityId::entanglement_entropy) {
        const auto sites = static_cast<double>(query.options.block.size());
        seconds += 2e-6 * sites * sites + 1e-7 * sites * sites * sites;
    }
    return seconds;
}

Coverage plan_limit(const Batch& batch) {
    if (batch.problems.empty()) {
        return refuse_all(batch, "no problem was given");
    }
    const auto chain = fermion::recognise_infinite(batch.problems.front());
    if (!chain) {
        return refuse_all(batch, chain.error());
    }
    const bool is_closed = chain->is_uniform_xx() && !batch.problems.front().temperature;
    Coverage coverage;
    for (const Query& query : batch.queries) {
        coverage.refusal.push_back(refusal(query, *chain, is_closed));
        if (coverage.refusal.back().empty()) {
            coverage.seconds +=
                estimated_seconds(query, is_closed) * static_cast<double>(batch.problems.size());
        }
    }
    return coverage;
}

Answers evaluate_limit(const Batch& batch, const Context& context) {
    return answer_each(
        RouteId::limit, batch, plan_limit(batch), [&](std::size_t p, const Query& query) -> Answer {
            poll(context);
            const Problem& problem = batch.problems[p];
            const auto bands = fermion::make_bands(*fermion::recognise_infinite(problem));
            return answer(*bands, problem, query);
        });
}

}  // namespace

const Route& limit_route() {
    static const Route route{
        .id = RouteId::limit,
        .sentence =
            "infinite XX, XY, Ising and alternating XX chains in a field, by closed forms "
            "and integrals over momenta",
        .plan = plan_limit,
        .evaluate = evaluate_limit};
    return route;
}

}  // namespace chainmark
