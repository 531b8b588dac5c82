#pragma once

#include "chainmark/sector/block.hpp"
#include "chainmark/sector/hamiltonian.hpp"

namespace chainmark::sector {

/// What questions of one kind cost, known from the sectors' dimensions.
struct Workload {
    double largest = 0.0;          ///< states of the largest sector
    double all_levels = 0.0;       ///< of the sectors that have to be solved for all
    bool can_be_complete = false;  ///< every sector is small enough for LAPACK
    BlockCost complete;            ///< all levels
    BlockCost energy;              ///< the ground energy: the sectors that can hold it
    BlockCost lowest;              ///< the lowest level of every sector
};
Workload workload_of(const SectorHamiltonian& hamiltonian, double field);

}  // namespace chainmark::sector
