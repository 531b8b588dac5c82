#include "chainmark/sector/route.hpp"

#include <algorithm>
#include <set>
#include <stdexcept>

#include <fmt/format.h>

#include "chainmark/sector/evaluator.hpp"
#include "chainmark/sector/workload.hpp"

namespace chainmark {
namespace {

using namespace sector;

std::string no_complete_solution(const Workload& work) {
    return work.can_be_complete ? ""
                                : fmt::format(
                                      "all levels at once need sectors of at most {} states; the "
                                      "largest here has {:.0f}",
                                      Block::complete_limit,
                                      work.largest);
}

/// The Hamiltonian as the batch's first problem has it, and what solving it takes.
struct Assessment {
    bool sz = false;
    std::string why_no_sz;
    Workload work;
    Workload for_response;  ///< without inversion, for thermal susceptibilities without Sz
};

/// `field`: one of the batch's, not 0 where one is not; it leaves more sectors to be looked at.
Assessment assess(const Problem& problem, double field) {
    const Symmetries bare = find_symmetries(problem.chain, *problem.terms);
    Assessment result;
    result.sz = bare.conserved == Conserved::up_count;
    result.why_no_sz = bare.why_no_sz;
    const TermList terms = result.sz ? *problem.terms : full_terms(problem);
    Symmetries symmetries = result.sz ? bare : find_symmetries(problem.chain, terms);
    result.work = workload_of(SectorHamiltonian(problem.chain, symmetries, terms.terms), field);
    result.for_response = result.work;
    if (!result.sz && symmetries.inversion) {
        symmetries.inversion = false;
        result.for_response =
            workload_of(SectorHamiltonian(problem.chain, symmetries, terms.terms), field);
    }
    return result;
}

std::string refusal(const Query& query, const Assessment& found, const Problem& problem) {
    const bool thermal = problem.temperature.has_value();
    if (std::string why = without_meaning(query, problem); !why.empty()) {
        return why;
    }
    switch (query.spec->id) {
        case QuantityId::jump_fields:
            return found.sz ? "" : "needs a Hamiltonian that conserves Sz; " + found.why_no_sz;
        case QuantityId::spectrum:
            return no_complete_solution(found.work);
        case QuantityId::susceptibility:
            return thermal ? no_complete_solution(found.for_response) : "";
        default:
            return thermal ? no_complete_solution(found.work) : "";
    }
}

/// What of a solution a query needs.
const BlockCost& cost_of(const Query& query, const Problem& problem, const Assessment& found) {
    switch (query.spec->id) {
        case QuantityId::spectrum:
            return found.work.complete;
        case QuantityId::ground_energy:
        case QuantityId::ground_energy_per_site:
            return found.work.energy;
        case QuantityId::susceptibility:
            return problem.temperature ? found.for_response.complete : found.work.lowest;
        default:
            return problem.temperature ? found.work.complete : found.work.lowest;
    }
}

/// Averages in all eigenstates: a product of a sparse matrix with every vector.
double average_seconds(const Query& query, const Problem& problem, const Workload& work) {
    if (query.spec->id != QuantityId::spin_correlation || !problem.temperature) {
        return 0.0;
    }
    const auto elements =
        static_cast<double>(std::max(query.options.distance.size(), query.options.pairs.size()));
    return elements * work.all_levels * work.largest * problem.chain.length() * 1e-9;
}

Coverage plan(const Batch& batch) {
    const Problem& first = batch.problems.front();
    const Chain& chain = first.chain;
    if (chain.is_infinite()) {
        return refuse_all(batch, "needs a finite chain");
    }
    const int most = Packing::most_sites(chain.two_s);
    if (chain.length() > most) {
        return refuse_all(batch, fmt::format("takes at most {} sites of this spin", most));
    }
    std::set<double> fields;
    for (const Problem& problem : batch.problems) {
        fields.insert(problem.field);
    }
    Assessment found;
    try {
        found = assess(first, *fields.begin() != 0.0 ? *fields.begin() : *fields.rbegin());
    } catch (const std::runtime_error& too_long) {
        return refuse_all(batch, too_long.what());
    }
    const double solves = found.sz ? 1.0 : static_cast<double>(fields.size());
    Coverage coverage;
    // Queries share what they need: each kind of work counts once.
    std::set<const BlockCost*> needed;
    for (const Query& query : batch.queries) {
        coverage.refusal.push_back(refusal(query, found, first));
        if (coverage.refusal.back().empty()) {
            needed.insert(&cost_of(query, first, found));
            coverage.seconds += solves * average_seconds(query, first, found.work);
        }
    }
    for (const BlockCost* cost : needed) {
        coverage.seconds += solves * cost->seconds;
        coverage.bytes = std::max(coverage.bytes, cost->bytes);
    }
    if (first.temperature) {
        // Weighing a level at one temperature and field.
        coverage.seconds +=
            static_cast<double>(batch.problems.size()) * found.work.all_levels * 1e-7;
    }
    return coverage;
}

Answers evaluate(const Batch& batch, const Context& context) {
    const Coverage coverage = plan(batch);
    // Not those that are refused: a temperature sweep takes all averages from one solution.
    Batch asked{batch.problems, {}};
    for (std::size_t q = 0; q < batch.queries.size(); ++q) {
        if (coverage.refusal[q].empty()) {
            asked.queries.push_back(batch.queries[q]);
        }
    }
    Evaluator evaluator(asked, context);
    return answer_each(
        RouteId::sector, batch, coverage, [&](std::size_t p, const Query& query) -> Answer {
            try {
                return evaluator(p, query);
            } catch (const std::runtime_error& failure) {
                return Undecided{failure.what()};
            }
        });
}

}  // namespace

const Route& sector_route() {
    static const Route route{
        RouteId::sector, "the Hamiltonian in the sectors of its symmetries", plan, evaluate};
    return route;
}

}  // namespace chainmark
