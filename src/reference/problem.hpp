#pragma once

#include <memory>
#include <optional>

#include "chainmark/operators/chain.hpp"
#include "chainmark/operators/term_list.hpp"

namespace chainmark {

/// A chain and its Hamiltonian H = terms - field * sum_j Sz_j, numbers only.
///
/// The uniform field is kept apart: where it commutes with the terms, one solution of the terms
/// serves every field. Problems of one sweep share their list.
///
/// With a temperature T > 0 (k_B = 1, in the unit of the couplings) averages run over all
/// (2S+1)^L states with weights exp(-E/T); without one they run over the ground space.
struct Problem {
    Chain chain;
    std::shared_ptr<const TermList> terms;
    double field = 0.0;
    std::optional<double> temperature = {};  ///< nothing: the ground state
};

/// terms - field * sum_j Sz_j as one list. Finite chains.
TermList full_terms(const Problem& problem);

/// True where every string keeps the number of up spins.
bool conserves_sz(const TermList& list);

/// Levels closer than this to the lowest belong to the ground space: 1e-10 times the largest
/// |coupling| of H, the field among them. The same for every route.
double ground_window(const Problem& problem);

}  // namespace chainmark
