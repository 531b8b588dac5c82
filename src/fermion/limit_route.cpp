#include <cmath>
#include <optional>

#include <fmt/format.h>

#include "chainmark/fermion/answers.hpp"
#include "chainmark/fermion/reach.hpp"
#include "chainmark/fermion/routes.hpp"

namespace chainmark {
namespace {

using fermion::Bounded;
using fermion::Real;
using fermion::real_epsilon;
using fermion::real_pi;

/// The infinite chain sum_j J (Sx_j Sx_j+1 + Sy_j Sy_j+1) - h Sz_j + constant.
struct XxChain {
    Real coupling = 0.0L;  ///< J
    Real field = 0.0L;     ///< h
    Real constant = 0.0L;  ///< per site

    Real size() const { return std::abs(coupling); }
    bool is_critical() const { return std::abs(field) < size(); }
    bool is_saturated() const { return std::abs(field) > size(); }
    bool is_decoupled() const { return coupling == 0.0L; }

    /// J = h = 0: every state is a ground state.
    bool is_trivial() const { return is_decoupled() && field == 0.0L; }

    /// sqrt(J^2 - h^2) inside the critical phase, small near saturation without loss of digits.
    Real root() const { return std::sqrt((size() - field) * (size() + field)); }

    /// arcsin(h/|J|), well conditioned up to |h| = |J|.
    Real angle() const { return std::atan2(field, root()); }

    Real magnetization() const {
        if (is_saturated() || is_trivial()) {
            return field == 0.0L ? 0.0L : std::copysign(0.5L, field);
        }
        return angle() / real_pi;
    }
};

struct Recognised {
    std::optional<XxChain> chain;
    std::string refusal;
};

Recognised recognise(const Problem& problem) {
    if (!problem.chain.is_infinite()) {
        return {std::nullopt, "needs the infinite chain"};
    }
    if (problem.chain.two_s != 1) {
        return {std::nullopt, "needs spin 1/2"};
    }
    if (problem.terms->cell != 1) {
        return {std::nullopt,
                fmt::format("only the uniform XX chain is covered; these couplings repeat after {} "
                            "sites",
                            problem.terms->cell)};
    }
    const SplitField split = split_uniform_field(*problem.terms, problem.chain);
    const OperatorString hop = {{0, SiteOperator::plus}, {1, SiteOperator::minus}};
    XxChain chain{.coupling = 0.0L,
                  .field = static_cast<Real>(problem.field) + split.field,
                  .constant = split.rest.constant};
    for (const Term& term : split.rest.terms) {
        const bool is_hop = term.string == hop || term.string == conjugate(hop);
        if (!is_hop || term.coefficient.imag() != 0.0) {
            return {std::nullopt,
                    fmt::format("only the uniform XX chain is covered; the string {} {}",
                                to_string(term.string),
                                is_hop ? "has a complex coefficient" : "does not belong to it")};
        }
        chain.coupling = 2 * static_cast<Real>(term.coefficient.real());
    }
    return {chain, ""};
}

Reference number(Real value, Real error) {
    return fermion::number_reference({value, error}, Basis::rounding);
}

/// Relative rounding of a handful of operations.
constexpr Real few = 16 * real_epsilon;

/// e = -(1/pi) [sqrt(J^2 - h^2) + h arcsin(h/|J|)] for |h| < |J|, -|h|/2 outside.
Reference energy_per_site(const XxChain& chain) {
    const Real size = chain.size() + std::abs(chain.field);
    const Real energy = chain.is_critical()
                            ? -(chain.root() + chain.field * chain.angle()) / real_pi
                            : -std::abs(chain.field) / 2;
    return number(energy + chain.constant, few * (size + std::abs(chain.constant)));
}

/// m = arcsin(h/|J|)/pi for |h| < |J|, sign(h)/2 outside.
Reference magnetization(const XxChain& chain) {
    const Real value = chain.magnetization();
    Reference reference = number(value, few * std::abs(value));
    if (chain.is_trivial()) {
        reference.range = Range{{-0.5, 0.5}};
    }
    return reference;
}

/// chi = 1/(pi sqrt(J^2 - h^2)) for |h| < |J|, 0 outside.
Reference susceptibility(const XxChain& chain) {
    if (chain.is_trivial()) {
        return fermion::status_reference(Special::jump);
    }
    if (chain.is_saturated()) {
        return fermion::number_reference({0.0L, 0.0L}, Basis::exact);
    }
    if (!chain.is_critical()) {
        return fermion::status_reference(Special::infinite);
    }
    const Real value = 1 / (real_pi * chain.root());
    return number(value, few * value);
}

Reference gap(const XxChain& chain) {
    if (!chain.is_saturated()) {
        return fermion::number_reference({0.0L, 0.0L}, Basis::exact);
    }
    const Real value = std::abs(chain.field) - chain.size();
    return number(value, real_epsilon * std::abs(chain.field));
}

/// J cos k = h has the solution k = arccos(h/J) in [0, pi] for |h| <= |J|.
Reference fermi_momentum(const XxChain& chain) {
    if (chain.is_decoupled() || chain.is_saturated()) {
        return fermion::status_reference(Special::undefined);
    }
    const Real h_over_sign = chain.coupling > 0 ? chain.field : -chain.field;
    return number(std::atan2(chain.root(), h_over_sign), few * real_pi);
}

Reference phase(const XxChain& chain) {
    if (chain.is_trivial()) {
        return fermion::status_reference(Special::undefined);
    }
    if (chain.is_saturated()) {
        return fermion::text_reference(chain.field > 0 ? "saturated_up" : "saturated_down");
    }
    return fermion::text_reference(chain.is_critical() ? "critical" : "saturation_point");
}

/// sin(pi x) for x >= 0, exactly 0 for whole x.
Real sine_of_turns(Real x) {
    const Real rest = std::fmod(x, 2.0L);
    const Real part = rest - std::round(rest);
    return std::fmod(std::round(rest), 2.0L) == 0.0L ? std::sin(real_pi * part)
                                                     : -std::sin(real_pi * part);
}

/// <Sz_0 Sz_r> = m^2 - [sin(pi n r)/(pi r)]^2 for r > 0 with n = m + 1/2 up spins per site.
Bounded szsz(const XxChain& chain, int r, bool connected) {
    const Real m = chain.magnetization();
    if (r == 0) {
        return {0.25L - (connected ? m * m : 0.0L), few};
    }
    if (chain.is_trivial()) {
        return {0.0L, 0.0L};  // the average over all states
    }
    const Real distance = static_cast<Real>(r);
    const Real kernel = sine_of_turns((m + 0.5L) * distance) / (real_pi * distance);
    return {(connected ? 0.0L : m * m) - kernel * kernel, few};
}

Reference spin_correlation(const XxChain& chain, const Options& options) {
    std::vector<Bounded> numbers;
    for (const auto& [i, j] : options.pairs) {
        numbers.push_back(szsz(chain, std::abs(i - j), options.connected));
    }
    for (const int r : options.distance) {
        numbers.push_back(szsz(chain, std::abs(r), options.connected));
    }
    return fermion::array_reference(numbers, Basis::rounding);
}

/// How a finite chain with this boundary comes near, inside the critical phase. The corrections of
/// the energy are those of a conformally invariant chain, L^-2 per site on a ring and a surface
/// energy with free ends; off h = 0 the filling of a finite chain moves in steps of 1/L, so that
/// the distances oscillate below an envelope. Source: H. W. J. Bloete, J. L. Cardy, M. P.
/// Nightingale, Phys. Rev. Lett. 56, 742 (1986).
std::optional<Approach> approach(const XxChain& xx, const Chain& chain, QuantityId id) {
    if (!xx.is_critical() || (chain.is_ring() && chain.twist != 0.0)) {
        return std::nullopt;
    }
    const bool ring = chain.is_ring();
    const bool energy = id == QuantityId::ground_energy_per_site;
    if (xx.field == 0.0L) {
        if (energy) {
            return Approach{Approach::Law::power, ring ? 2.0 : 1.0};
        }
        return ring && id == QuantityId::gap ? std::optional(Approach{Approach::Law::power, 1.0})
                                             : std::nullopt;
    }
    if (energy) {
        return Approach{Approach::Law::envelope, ring ? 2.0 : 1.0};
    }
    return id == QuantityId::magnetization ? std::optional(Approach{Approach::Law::envelope, 1.0})
                                           : std::nullopt;
}

Reference answer(const XxChain& chain, const Query& query) {
    switch (query.spec->id) {
        case QuantityId::ground_energy_per_site:
            return energy_per_site(chain);
        case QuantityId::magnetization:
            return magnetization(chain);
        case QuantityId::susceptibility:
            return susceptibility(chain);
        case QuantityId::gap:
            return gap(chain);
        case QuantityId::fermi_momentum:
            return fermi_momentum(chain);
        case QuantityId::phase:
            return phase(chain);
        default:
            return spin_correlation(chain, query.options);
    }
}

std::string refusal(const Query& query) {
    const std::string& instead = query.spec->on_infinite;
    if (query.spec->where != Where::finite) {
        return fermion::beyond_free_fermions(query);
    }
    return instead.empty() ? "has no meaning on the infinite chain"
                           : fmt::format("has no meaning on the infinite chain; {} has", instead);
}

Coverage plan_limit(const Batch& batch) {
    if (batch.problems.empty()) {
        return refuse_all(batch, "no problem was given");
    }
    const Recognised recognised = recognise(batch.problems.front());
    if (!recognised.chain) {
        return refuse_all(batch, recognised.refusal);
    }
    if (batch.problems.front().temperature) {
        return refuse_all(batch, "temperatures are not covered by this route");
    }
    constexpr double seconds_per_answer = 2e-6;
    Coverage coverage;
    for (const Query& query : batch.queries) {
        coverage.refusal.push_back(refusal(query));
    }
    coverage.seconds =
        seconds_per_answer * static_cast<double>(batch.problems.size() * batch.queries.size());
    return coverage;
}

Answers evaluate_limit(const Batch& batch, const Context& context) {
    return answer_each(
        RouteId::limit, batch, plan_limit(batch), [&](std::size_t p, const Query& query) -> Answer {
            poll(context);
            const Problem& problem = batch.problems[p];
            const XxChain chain = *recognise(problem).chain;
            Reference reference = answer(chain, query);
            reference.approach = approach(chain, problem.chain, query.spec->id);
            return reference;
        });
}

}  // namespace

const Route& limit_route() {
    static const Route route{.id = RouteId::limit,
                             .sentence = "closed forms of the infinite XX chain in a field",
                             .plan = plan_limit,
                             .evaluate = evaluate_limit};
    return route;
}

}  // namespace chainmark
