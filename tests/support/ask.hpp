#pragma once

#include <memory>
#include <thread>
#include <variant>

#include <doctest/doctest.h>

#include "chainmark/reference/route.hpp"

/// Asking a route one question.
namespace chainmark::test {

inline Context context(int threads = 2) {
    Context result;
    result.threads = threads;
    result.memory = std::make_shared<MemoryBudget>(8.0 * 1024 * 1024 * 1024);
    return result;
}

inline Query query(QuantityId id, Options options = {}) {
    return {&spec_of(id), std::move(options), spec_of(id).name};
}

inline Answer answer(const Route& route, const Problem& problem, const Query& question) {
    return route.evaluate({{problem}, {question}}, context()).front().front();
}

/// The reference, where the route must have one.
inline Reference ask(const Route& route,
                     const Problem& problem,
                     QuantityId id,
                     Options options = {}) {
    Answer found = answer(route, problem, query(id, std::move(options)));
    if (const auto* refused = std::get_if<NotCovered>(&found)) {
        FAIL("not covered: " << refused->reason);
    }
    if (const auto* undecided = std::get_if<Undecided>(&found)) {
        FAIL("undecided: " << undecided->reason);
    }
    return std::get<Reference>(found);
}

}  // namespace chainmark::test
