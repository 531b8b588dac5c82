#pragma once

#include <optional>
#include <vector>

#include "chainmark/fermion/answers.hpp"
#include "chainmark/fermion/gaussian_state.hpp"

/// Entanglement entropies from the covariance of a pure Gaussian state of definite parity.
///
/// The reduced state of some modes is Gaussian with their part of Gamma, whose eigenvalues +-i nu_k
/// are those of independent modes with the probabilities p = (1 +- nu_k)/2:
///   order 1: S = sum_k h(nu_k), h = -sum p ln p;   order n: S = sum_k ln(sum p^n)/(1 - n).
/// (G. Vidal, J. I. Latorre, E. Rico, A. Kitaev, PRL 90, 227902 (2003).) The spins of a block have
/// this entropy where the operators of the block are, up to a common string, those of its fermions:
/// that is for consecutive sites. In a pure state a block and the other sites have equal entropies,
/// of spins and of fermions.
namespace chainmark::fermion {

/// The sites to take for a block (ascending, at least one, not all): the block or the others,
/// whichever are fewer; nothing where neither the block nor the others are consecutive sites.
std::optional<std::vector<int>> entropy_sites(const std::vector<int>& block, int length);

struct EntropyOptions {
    int order = 1;
    bool log2 = false;
};

/// Entropy of modes from their covariance, a 2l x 2l matrix. `gamma_error`: Frobenius norm of its
/// error; `tilt`: sine of the angle between the pure state and the exact one.
///
/// Errors: the nu_k move by sum_k |d nu_k| <= |dGamma|_1/2 (trace norm), and |h(p) - h(q)| <=
/// h(|p - q|), h concave; order n: |dS| <= n/(n-1) sum_k |d nu_k|. The tilt t changes S of order 1
/// by at most t l ln 2 + h(t) (K. M. R. Audenaert, J. Phys. A 40, 8127 (2007), quoted from memory)
/// and Gamma by at most 4 t/sqrt(1 - t^2) in the Frobenius norm, since the overlap of two pure
/// Gaussian states is a product of cosines of angles by which pairs of modes are rotated.
Bounded modes_entropy(const RealMatrix& gamma,
                      bool bipartite,
                      Real gamma_error,
                      Real tilt,
                      const EntropyOptions& options);

}  // namespace chainmark::fermion
