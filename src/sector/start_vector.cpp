#include "chainmark/sector/start_vector.hpp"

#include <algorithm>
#include <bit>
#include <cmath>

#include "chainmark/base/numerics.hpp"

namespace chainmark::sector {
namespace {

/// Delta of the nearest-neighbour coupling, as far as |Delta| <= 1; 1 beyond.
double anisotropy(const SectorHamiltonian& hamiltonian) {
    double exchange = 0.0;
    double ising = 0.0;
    for (const Term& term : hamiltonian.terms) {
        if (term.string.size() == 2 && term.string[0].site == 0 && term.string[1].site == 1) {
            (term.string[0].op.is_diagonal() ? ising : exchange) = term.coefficient.real();
        }
    }
    return exchange == 0.0 ? 1.0 : std::clamp(ising / std::abs(2 * exchange), -1.0, 1.0);
}

}  // namespace

bool StartVector::applies(const SectorHamiltonian& hamiltonian) {
    return hamiltonian.chain.two_s == 1 && hamiltonian.symmetries.step == 1 &&
           hamiltonian.chain.twist == 0.0;
}

StartVector::StartVector(const SectorHamiltonian& hamiltonian, const SignRotation& rotation)
    : packing_(hamiltonian.chain) {
    for (int site = 0; site < packing_.length; ++site) {
        rotated_ |= packing_.place(rotation.rotated[static_cast<std::size_t>(site)], site);
    }
    const double lambda = 2 * (1 - std::acos(anisotropy(hamiltonian)) / pi);
    for (int d = 1; d <= packing_.length / 2; ++d) {
        // At half the ring every pair is counted twice.
        const double pairs = 2 * d == packing_.length ? 0.5 : 1.0;
        weights_.push_back(pairs * lambda * std::log(std::sin(pi * d / packing_.length)));
    }
}

double StartVector::amplitude(Word word) const {
    double sum = 0.0;
    for (std::size_t d = 1; d <= weights_.size(); ++d) {
        const Word shifted = packing_.rotated(word, static_cast<int>(d));
        sum += weights_[d - 1] * std::popcount(word & shifted);
    }
    const double size = std::exp(sum);
    return std::popcount(word & rotated_) % 2 == 0 ? size : -size;
}

}  // namespace chainmark::sector
