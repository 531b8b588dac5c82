#pragma once

#include "chainmark/reference/quantity.hpp"
#include "chainmark/reference/value.hpp"
#include "chainmark/sector/solution.hpp"

/// Energies, gaps and lists of levels.
namespace chainmark::sector {

/// A number whose bound follows from residuals.
Reference plain_reference(Value value, double bound);

Answer ground_energy_answer(const Problem& problem, Solution& solution, double factor);
Answer levels_answer(const Problem& problem, Solution& solution, const Options& options);
Answer spectrum_answer(const Problem& problem, Solution& solution);
Answer gap_answer(const Problem& problem, Solution& solution, const Options& options);
Answer jump_fields_answer(const Problem& problem, Solution& solution);

}  // namespace chainmark::sector
