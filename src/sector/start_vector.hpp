#pragma once

#include <vector>

#include "chainmark/sector/ground_proofs.hpp"
#include "chainmark/sector/hamiltonian.hpp"

namespace chainmark::sector {

/// A good guess of the positive state of a ring of spins 1/2 with one coupling per distance, to
/// start a search from: it halves the number of steps. With the up spins at sites x_i
///   psi(s) = (-1)^(sum_j a_j n_j) prod_{i<k} sin(pi (x_i - x_k)/L)^lambda,
/// the exact ground state for lambda = 1 at Delta = 0 and, on the inverse-square ring, for
/// lambda = 2 (F. D. M. Haldane, Phys. Rev. Lett. 60, 635 (1988); B. S. Shastry, ibid. 639; quoted
/// from memory). In between lambda is the exponent that the XXZ chain's correlations decay with.
class StartVector {
public:
    /// Whether the guess has a meaning for this Hamiltonian.
    static bool applies(const SectorHamiltonian& hamiltonian);

    StartVector(const SectorHamiltonian& hamiltonian, const SignRotation& rotation);

    double amplitude(Word word) const;

private:
    Packing packing_;
    Word rotated_ = 0;
    std::vector<double> weights_;  ///< lambda log sin(pi d/L) by the distance d = 1 ... L/2
};

}  // namespace chainmark::sector
