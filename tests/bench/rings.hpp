#pragma once

#include <string>

#include "chainmark/base/context.hpp"
#include "chainmark/reference/problem.hpp"
#include "chainmark/sector/halves_basis.hpp"
#include "chainmark/sector/hamiltonian.hpp"
#include "chainmark/sector/symmetry.hpp"

/// The rings that are measured, and the sectors of theirs that every program works on.
namespace chainmark::bench {

/// H = sum_j (Sx Sx + Sy Sy + delta Sz Sz) on a periodic ring of an even number of spins 1/2.
struct Ring {
    std::string name;
    double delta = 0.0;
    int sites = 0;

    /// "XX/24"
    std::string label() const { return name + "/" + std::to_string(sites); }
};

Ring xx(int sites);
Ring heisenberg(int sites);
Ring xxz(int sites);  ///< delta = 1/2

/// The ring of a name and size as given on a command line. Throws std::invalid_argument.
Ring ring_of(const std::string& name, int sites);

Problem problem_of(const Ring& ring);

sector::SectorHamiltonian hamiltonian_of(const Ring& ring);

/// All configurations with Sz = 0.
sector::HalvesBasis full_sector(const Ring& ring);

/// The sector with all symmetries that holds the ground state, known from Marshall's sign.
sector::Sector ground_sector(const sector::SectorHamiltonian& hamiltonian);

/// All cores, and the given memory; what the system has free where none is given.
Context all_cores(double bytes = available_memory());

}  // namespace chainmark::bench
