#include "chainmark/reference/problem.hpp"

#include <algorithm>
#include <cmath>

namespace chainmark {

TermList full_terms(const Problem& problem) {
    return with_field(*problem.terms, problem.field, problem.chain.length());
}

bool conserves_sz(const TermList& list) {
    return std::all_of(list.terms.begin(), list.terms.end(), [](const Term& term) {
        return raises_by(term.string) == 0;
    });
}

double ground_window(const Problem& problem) {
    constexpr double relative = 1e-10;
    return relative * std::max(largest_coupling(*problem.terms), std::abs(problem.field));
}

}  // namespace chainmark
