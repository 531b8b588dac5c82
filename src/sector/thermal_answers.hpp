#pragma once

#include <vector>

#include "chainmark/reference/quantity.hpp"
#include "chainmark/reference/value.hpp"
#include "chainmark/sector/thermal.hpp"

/// Quantities with a temperature.
namespace chainmark::sector {

/// Every observable that thermal_answer will average for these queries.
std::vector<Observable> thermal_observables(const Chain& chain,
                                            const std::vector<Query>& queries,
                                            bool sz_conserved);

Answer thermal_answer(const Problem& problem,
                      const Query& query,
                      const Thermal& thermal,
                      bool sz_conserved);

}  // namespace chainmark::sector
