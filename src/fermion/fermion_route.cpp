#include <algorithm>
#include <cmath>
#include <limits>
#include <memory>
#include <optional>

#include <fmt/format.h>

#include "chainmark/fermion/enclosures.hpp"
#include "chainmark/fermion/finite_reach.hpp"
#include "chainmark/fermion/point.hpp"
#include "chainmark/fermion/routes.hpp"
#include "chainmark/fermion/sector_levels.hpp"
#include "chainmark/fermion/thermal_point.hpp"

namespace chainmark {
namespace {

using fermion::FormKind;
using fermion::QuadraticForm;

constexpr int largest_uniform = 1'000'000;
constexpr int largest_general = 2000;
constexpr int largest_complex = 1000;  ///< pairs with complex couplings: matrices of 2L x 2L
constexpr int largest_spectrum = 20;   ///< sites

std::string level_refusal(std::int64_t count, int length) {
    constexpr std::int64_t most = std::int64_t{1} << largest_spectrum;
    if (length <= largest_spectrum && count > (std::int64_t{1} << length)) {
        return fmt::format(
            "{} levels are asked for, the chain has only {}", count, std::int64_t{1} << length);
    }
    return count > most ? fmt::format("at most {} levels, not {}", most, count) : "";
}

std::string temperature_refusal(const Query& query, bool thermal) {
    if (thermal && query.spec->when == When::ground_state) {
        return "a quantity of the ground state, without a temperature";
    }
    return !thermal && query.spec->when == When::thermal ? "needs a temperature" : "";
}

std::string refusal(const Query& query, const QuadraticForm& form, bool thermal) {
    const int length = form.length();
    if (std::string reason = temperature_refusal(query, thermal); !reason.empty()) {
        return reason;
    }
    if (std::string reason = fermion::average_refusal(query, form); !reason.empty()) {
        return reason;
    }
    if (query.options.sector) {
        if (std::string reason = fermion::sector_refusal(*query.options.sector, form);
            !reason.empty()) {
            return reason;
        }
    }
    switch (query.spec->id) {
        case QuantityId::spectrum:
            return length <= largest_spectrum
                       ? ""
                       : fmt::format("the spectrum needs at most {} sites", largest_spectrum);
        case QuantityId::levels:
            return level_refusal(query.options.count, length);
        case QuantityId::fermi_momentum:
        case QuantityId::phase:
            return "has a meaning on the infinite chain alone";
        case QuantityId::jump_fields:
            return form.conserves_number() ? "" : "needs a Hamiltonian that conserves Sz";
        default:
            return "";
    }
}

bool has_complex_pairs(const QuadraticForm& form) {
    const auto is_complex = [](const fermion::Bond& bond) {
        return bond.hop.imag() != 0.0 || bond.pair.imag() != 0.0;
    };
    return form.kind == FormKind::general && !form.conserves_number() &&
           std::any_of(form.bonds.begin(), form.bonds.end(), is_complex);
}

std::string size_refusal(const QuadraticForm& form) {
    const bool general = form.kind == FormKind::general;
    const bool complex = has_complex_pairs(form);
    const int most = complex ? largest_complex : general ? largest_general : largest_uniform;
    if (form.length() <= most) {
        return "";
    }
    return fmt::format("at most {} sites {}",
                       most,
                       complex   ? "where Sz is not conserved and couplings are complex"
                       : general ? "where couplings depend on the site"
                                 : "of a uniform chain");
}

double levels_asked(const Query& query, int length) {
    switch (query.spec->id) {
        case QuantityId::spectrum:
            return length <= largest_spectrum ? std::exp2(length) : 0.0;
        case QuantityId::levels:
            return query.options.count;
        default:
            return 0.0;
    }
}

/// Rough: measured on one core, for scheduling alone.
void estimate(const Batch& batch, const QuadraticForm& form, Coverage& coverage) {
    constexpr double seconds_per_uniform_mode = 5e-7;
    constexpr double seconds_per_cubed_site = 8e-9;
    constexpr double seconds_per_level = 2e-6;
    constexpr double seconds_per_site_and_query = 1e-6;
    constexpr double bytes_per_uniform_mode = 400;
    constexpr double bytes_per_squared_site = 140;
    constexpr double bytes_per_level = 300;
    const double sites = form.length();
    const bool general = form.kind == FormKind::general;
    double levels = 0.0;
    double most_levels = 0.0;
    for (const Query& query : batch.queries) {
        const double asked = levels_asked(query, form.length());
        levels += asked;
        most_levels = std::max(most_levels, asked);
    }
    const double factor = has_complex_pairs(form) ? 8 : 1;
    const double modes = general ? factor * seconds_per_cubed_site * sites * sites * sites
                                 : seconds_per_uniform_mode * sites;
    const double solves =
        form.conserves_number() ? 2.0 : 2.0 * static_cast<double>(batch.problems.size());
    const double each = levels * seconds_per_level + static_cast<double>(batch.queries.size()) *
                                                         sites * seconds_per_site_and_query;
    fermion::AverageCost averages;
    for (const Query& query : batch.queries) {
        const auto own =
            fermion::average_cost(query, form, batch.problems.front().temperature.has_value());
        averages.seconds += own.seconds * static_cast<double>(batch.problems.size());
        averages.bytes = std::max(averages.bytes, own.bytes);
    }
    coverage.seconds =
        averages.seconds + solves * modes + each * static_cast<double>(batch.problems.size());
    coverage.bytes = (general ? factor * bytes_per_squared_site * sites * sites
                              : bytes_per_uniform_mode * sites) +
                     most_levels * bytes_per_level + averages.bytes;
}

using Recognised = tl::expected<QuadraticForm, std::string>;

/// The form of a batch, or why it has none that this route solves.
Recognised recognise_batch(const Batch& batch) {
    if (batch.problems.empty()) {
        return tl::unexpected(std::string("no problem was given"));
    }
    const Problem& problem = batch.problems.front();
    if (problem.chain.is_infinite()) {
        return tl::unexpected(std::string("needs a finite chain"));
    }
    if (problem.chain.length() < 1) {
        return tl::unexpected(std::string("needs at least one site"));
    }
    Recognised form = fermion::recognise(problem.chain, *problem.terms);
    if (form) {
        if (std::string too_long = size_refusal(*form); !too_long.empty()) {
            return tl::unexpected(std::move(too_long));
        }
    }
    return form;
}

Coverage coverage_of(const Batch& batch, const Recognised& form) {
    if (!form) {
        return refuse_all(batch, form.error());
    }
    Coverage coverage;
    for (const Query& query : batch.queries) {
        coverage.refusal.push_back(
            refusal(query, *form, batch.problems.front().temperature.has_value()));
    }
    estimate(batch, *form, coverage);
    return coverage;
}

/// The answer with certified digits in the place of its value, where more than a double's are
/// wanted and there are some; what is known of the ground space stays.
Answer with_enclosure(Answer answer,
                      const Problem& problem,
                      const Query& query,
                      const Context& context) {
    constexpr int digits_of_a_double = 15;
    if (context.digits <= digits_of_a_double) {
        return answer;
    }
    std::optional<Reference> certified = fermion::enclose(problem, query, context);
    if (!certified) {
        return answer;
    }
    if (const auto* found = std::get_if<Reference>(&answer)) {
        certified->complete = found->complete;
        certified->degeneracy = found->degeneracy;
        certified->range = found->range;
    }
    return *certified;
}

Coverage plan_fermion(const Batch& batch) {
    return coverage_of(batch, recognise_batch(batch));
}

/// The solution and what was made of it, kept from point to point as long as it serves.
class Evaluation {
public:
    Evaluation(const Batch& batch, const QuadraticForm& form, const Context& context)
        : batch_(batch), form_(form), context_(context) {}

    Answer operator()(std::size_t p, const Query& query) {
        poll(context_);
        if (at_ != p) {
            go_to(p);
        }
        const Problem& problem = batch_.problems[p];
        Answer answer = problem.temperature ? thermal(p).answer(query) : ground(p).answer(query);
        return with_enclosure(std::move(answer), problem, query, context_);
    }

private:
    void go_to(std::size_t p) {
        ground_.reset();
        thermal_.reset();
        const Problem& problem = batch_.problems[p];
        const bool same_field = solution_ && problem.field == batch_.problems[at_].field;
        if (!same_field) {
            modes_.reset();
        }
        if (!solution_ || !(solution_->conserving || same_field)) {
            QuadraticForm form = form_;
            if (!form.conserves_number()) {
                form.add_field(problem.field);
            }
            solution_ = fermion::solve(std::move(form), context_);
        }
        at_ = p;
    }

    /// The ground window, looking at the terms once: it is the larger one of theirs and the
    /// field's.
    double window(const Problem& problem) {
        if (!window_of_terms_) {
            window_of_terms_ = ground_window({problem.chain, problem.terms, 0.0});
        }
        static const auto no_terms = std::make_shared<const TermList>();
        return std::max(*window_of_terms_, ground_window({problem.chain, no_terms, problem.field}));
    }

    fermion::Point& ground(std::size_t p) {
        if (!ground_) {
            const Problem& problem = batch_.problems[p];
            ground_.emplace(*solution_, problem, window(problem), context_);
        }
        return *ground_;
    }

    fermion::ThermalPoint& thermal(std::size_t p) {
        if (!modes_) {
            const bool with_sz =
                std::any_of(batch_.queries.begin(), batch_.queries.end(), [](const Query& query) {
                    return fermion::needs_sz(query.spec->id);
                });
            modes_ = fermion::thermal_modes(*solution_, batch_.problems[p].field, with_sz);
        }
        if (!thermal_) {
            thermal_.emplace(*solution_, *modes_, batch_.problems[p], context_);
        }
        return *thermal_;
    }

    const Batch& batch_;
    const QuadraticForm& form_;  ///< without the field
    const Context& context_;
    std::size_t at_ = std::numeric_limits<std::size_t>::max();
    std::optional<double> window_of_terms_;
    std::optional<fermion::Solution> solution_;
    std::optional<fermion::ThermalModes> modes_;
    std::optional<fermion::Point> ground_;
    std::optional<fermion::ThermalPoint> thermal_;
};

Answers evaluate_fermion(const Batch& batch, const Context& context) {
    const Recognised form = recognise_batch(batch);
    const Coverage coverage = coverage_of(batch, form);
    if (!form) {
        return answer_each(
            RouteId::fermion, batch, coverage, [](std::size_t, const Query&) -> Answer {
                return NotCovered{};
            });
    }
    return answer_each(RouteId::fermion, batch, coverage, Evaluation(batch, *form, context));
}

}  // namespace

const Route& fermion_route() {
    static const Route route{
        .id = RouteId::fermion,
        .sentence =
            "free fermions after the Jordan-Wigner transformation, parity by parity: finite "
            "chains whose terms are quadratic in them",
        .plan = plan_fermion,
        .evaluate = evaluate_fermion,
        .lacks = fermion::can_enclose() ? "" : "certified digits (built without Arb)",
        .encloses = fermion::can_enclose()};
    return route;
}

}  // namespace chainmark
