#include <algorithm>
#include <cmath>
#include <optional>

#include <fmt/format.h>

#include "chainmark/fermion/point.hpp"
#include "chainmark/fermion/reach.hpp"
#include "chainmark/fermion/routes.hpp"

namespace chainmark {
namespace {

using fermion::ChainForm;
using fermion::FormKind;

constexpr int largest_uniform = 1'000'000;
constexpr int largest_general = 2000;
constexpr int largest_spectrum = 20;  ///< sites

std::string level_refusal(std::int64_t count, int length) {
    constexpr std::int64_t most = std::int64_t{1} << largest_spectrum;
    if (length <= largest_spectrum && count > (std::int64_t{1} << length)) {
        return fmt::format(
            "{} levels are asked for, the chain has only {}", count, std::int64_t{1} << length);
    }
    return count > most ? fmt::format("at most {} levels, not {}", most, count) : "";
}

std::string pair_refusal(const Options& options, int length) {
    const auto outside = [&](int site) { return site < 0 || site >= length; };
    for (const int r : options.distance) {
        if (outside(r)) {
            return fmt::format("distance {} does not fit: 0 ... {} do", r, length - 1);
        }
    }
    for (const auto& [i, j] : options.pairs) {
        if (outside(i) || outside(j)) {
            return fmt::format("pair [{}, {}] does not fit: sites are 0 ... {}", i, j, length - 1);
        }
    }
    return "";
}

std::string refusal(const Query& query, int length) {
    if (std::string reason = fermion::beyond_free_fermions(query); !reason.empty()) {
        return reason;
    }
    switch (query.spec->id) {
        case QuantityId::spectrum:
            return length <= largest_spectrum
                       ? ""
                       : fmt::format("the spectrum needs at most {} sites", largest_spectrum);
        case QuantityId::levels:
            return level_refusal(query.options.count, length);
        case QuantityId::spin_correlation:
            return pair_refusal(query.options, length);
        case QuantityId::fermi_momentum:
        case QuantityId::phase:
            return "has a meaning on the infinite chain alone";
        default:
            return "";
    }
}

std::string size_refusal(const ChainForm& form) {
    const bool general = form.kind == FormKind::general;
    const int most = general ? largest_general : largest_uniform;
    if (form.length() <= most) {
        return "";
    }
    return fmt::format("at most {} sites {}",
                       most,
                       general ? "where couplings depend on the site" : "of a uniform chain");
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
void estimate(const Batch& batch, const ChainForm& form, Coverage& coverage) {
    constexpr double seconds_per_uniform_mode = 5e-7;
    constexpr double seconds_per_cubed_site = 8e-9;
    constexpr double seconds_per_level = 2e-6;
    constexpr double seconds_per_site_and_query = 1e-6;
    constexpr double bytes_per_uniform_mode = 160;
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
    const double modes =
        general ? seconds_per_cubed_site * sites * sites * sites : seconds_per_uniform_mode * sites;
    const double each = levels * seconds_per_level + static_cast<double>(batch.queries.size()) *
                                                         sites * seconds_per_site_and_query;
    coverage.seconds = 2 * modes + each * static_cast<double>(batch.problems.size());
    coverage.bytes =
        (general ? bytes_per_squared_site * sites * sites : bytes_per_uniform_mode * sites) +
        most_levels * bytes_per_level;
}

Coverage plan_fermion(const Batch& batch) {
    if (batch.problems.empty()) {
        return refuse_all(batch, "no problem was given");
    }
    const Problem& problem = batch.problems.front();
    if (problem.chain.is_infinite()) {
        return refuse_all(batch, "needs a finite chain");
    }
    if (problem.chain.length() < 1) {
        return refuse_all(batch, "needs at least one site");
    }
    if (problem.temperature) {
        return refuse_all(batch, "temperatures are not covered by this route");
    }
    const auto form = fermion::recognise(problem.chain, *problem.terms);
    if (!form) {
        return refuse_all(batch, form.error());
    }
    const std::string too_long = size_refusal(*form);
    if (!too_long.empty()) {
        return refuse_all(batch, too_long);
    }
    Coverage coverage;
    for (const Query& query : batch.queries) {
        coverage.refusal.push_back(refusal(query, form->length()));
    }
    estimate(batch, *form, coverage);
    return coverage;
}

Answers evaluate_fermion(const Batch& batch, const Context& context) {
    std::optional<fermion::Solution> solution;
    std::optional<fermion::Point> point;
    std::size_t of_problem = batch.problems.size();
    const auto answer = [&](std::size_t p, const Query& query) {
        poll(context);
        if (!solution) {
            const Problem& first = batch.problems.front();
            solution = fermion::solve(*fermion::recognise(first.chain, *first.terms), context);
        }
        if (of_problem != p) {
            point.emplace(*solution, batch.problems[p], context);
            of_problem = p;
        }
        return point->answer(query);
    };
    return answer_each(RouteId::fermion, batch, plan_fermion(batch), answer);
}

}  // namespace

const Route& fermion_route() {
    static const Route route{
        .id = RouteId::fermion,
        .sentence =
            "free fermions after the Jordan-Wigner transformation, parity by parity: finite "
            "chains of hops between neighbours and single Sz",
        .plan = plan_fermion,
        .evaluate = evaluate_fermion};
    return route;
}

}  // namespace chainmark
