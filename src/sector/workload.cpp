#include "chainmark/sector/workload.hpp"

#include <algorithm>
#include <cmath>
#include <set>

#include "chainmark/sector/ground_proofs.hpp"
#include "chainmark/sector/symmetry.hpp"

namespace chainmark::sector {

Workload workload_of(const SectorHamiltonian& hamiltonian, double field) {
    Workload work;
    const std::vector<Sector> sectors = sectors_of(hamiltonian.chain, hamiltonian.symmetries);
    std::set<std::size_t> for_energy;  // twins that ground_energy may have to solve
    for (const Sector& sector : sectors) {
        const bool can_hold =
            !hamiltonian.sign_rotation ||
            holds_positive_state(*hamiltonian.sign_rotation, sectors[sector.twin]);
        if (can_hold && excluded(hamiltonian, sector.label.value, field) == Excluded::no) {
            for_energy.insert(sector.twin);
        }
    }
    for (std::size_t i = 0; i < sectors.size(); ++i) {
        if (sectors[i].twin != i) {
            continue;
        }
        const double dim = count_states(sectors[i].group,
                                        sectors[i].label.irrep,
                                        sectors[i].label.conserved,
                                        sectors[i].label.value);
        const BlockCost cost = cost_of_lowest(dim, hamiltonian, sectors[i].group.is_trivial());
        work.largest = std::max(work.largest, dim);
        work.lowest.seconds += cost.seconds;
        work.lowest.bytes = std::max(work.lowest.bytes, cost.bytes);
        if (for_energy.count(i) != 0) {
            work.energy.seconds += cost.seconds;
            work.energy.bytes = std::max(work.energy.bytes, cost.bytes);
        }
        work.complete.seconds += dim * dim * dim * 1e-9;  // with vectors, two cores
        work.all_levels += dim;
    }
    work.can_be_complete = work.largest <= Block::complete_limit;
    work.complete.bytes = work.largest * work.largest * 16 * 6 +
                          std::pow(hamiltonian.chain.site_dim(), hamiltonian.chain.length()) * 96;
    return work;
}

}  // namespace chainmark::sector
