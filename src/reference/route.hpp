#pragma once

#include <chrono>
#include <string>
#include <string_view>
#include <vector>

#include "chainmark/base/context.hpp"
#include "chainmark/reference/problem.hpp"
#include "chainmark/reference/quantity.hpp"
#include "chainmark/reference/value.hpp"

namespace chainmark {

/// Work that shares one solution: problems on the same chain with the same terms, differing in the
/// uniform field and the temperature alone, all asked the same queries. Either every problem has a
/// temperature or none has, and a plan puts different fields together only where the field commutes
/// with the terms: one complete spectrum serves them all.
struct Batch {
    std::vector<Problem> problems;
    std::vector<Query> queries;
};

/// What a route says of a batch before any work is done.
struct Coverage {
    std::vector<std::string> refusal;  ///< one per query: why not covered; empty where covered
    double seconds = 0.0;              ///< rough estimate of the work, for scheduling
    double bytes = 0.0;                ///< peak of what it would allocate

    bool covers_any() const;
};

/// answers[problem][query]
using Answers = std::vector<std::vector<Answer>>;

/// An independent way to a number. Routes share operators and reference, nothing else.
///
/// `evaluate` answers every query at every problem (NotCovered where `plan` refuses) and fills in
/// the route's id; it throws Interrupted when the context's stop is requested.
struct Route {
    RouteId id;
    std::string_view sentence;
    Coverage (*plan)(const Batch& batch);
    Answers (*evaluate)(const Batch& batch, const Context& context);
    std::string_view lacks = {};  ///< what this build leaves out, in words; empty: nothing
    bool encloses = false;        ///< gives enclosures where Context::digits is above 15
};

/// A coverage that refuses every query of `batch` for the same reason.
Coverage refuse_all(const Batch& batch, const std::string& reason);

/// Why a query has no meaning for a finite chain whatever its Hamiltonian and the route; empty
/// where it has one.
std::string without_meaning(const Query& query, const Problem& problem);

/// The routine part of `evaluate`: for every query that `coverage` accepts, answer(problem index,
/// query) with the route's id and the time it took; NotCovered for the others.
template <class AnswerFunction>
Answers answer_each(RouteId route,
                    const Batch& batch,
                    const Coverage& coverage,
                    AnswerFunction&& answer) {
    using Clock = std::chrono::steady_clock;
    Answers answers(batch.problems.size());
    for (std::size_t p = 0; p < batch.problems.size(); ++p) {
        for (std::size_t q = 0; q < batch.queries.size(); ++q) {
            if (!coverage.refusal[q].empty()) {
                answers[p].push_back(NotCovered{coverage.refusal[q]});
                continue;
            }
            const auto start = Clock::now();
            answers[p].push_back(answer(p, batch.queries[q]));
            if (auto* reference = std::get_if<Reference>(&answers[p].back())) {
                reference->route = route;
                reference->seconds = std::chrono::duration<double>(Clock::now() - start).count();
            }
        }
    }
    return answers;
}

}  // namespace chainmark
