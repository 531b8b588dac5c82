#pragma once

#include "chainmark/reference/quantity.hpp"
#include "chainmark/reference/value.hpp"
#include "chainmark/sector/ground_averages.hpp"
#include "chainmark/sector/solution.hpp"

/// Quantities of the ground space beside its energy.
namespace chainmark::sector {

/// The mean of Sz/L over the ground space, from the labels where Sz is conserved.
Answer magnetization_answer(const GroundSpace& ground,
                            const Solution& solution,
                            const Chain& chain,
                            GroundAverages& averages);

Answer local_magnetization_answer(const GroundSpace& ground,
                                  const Chain& chain,
                                  Axis axis,
                                  GroundAverages& averages);

/// spin_correlation or structure_factor.
Answer correlation_answer(const GroundSpace& ground,
                          const Chain& chain,
                          const Query& query,
                          GroundAverages& averages);

Answer string_order_answer(const GroundSpace& ground,
                           const Chain& chain,
                           const Options& options,
                           GroundAverages& averages);

Answer susceptibility_answer(const Problem& problem,
                             const GroundSpace& ground,
                             Solution& solution,
                             const Context& context);

/// Of the ground state, or of the lowest state of the sectors of `options.sector`.
Answer entropy_answer(const Problem& problem,
                      Solution& solution,
                      const Options& options,
                      const Context& context);

}  // namespace chainmark::sector
