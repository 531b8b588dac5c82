#pragma once

#include <cstdint>
#include <memory>
#include <vector>

#include "chainmark/base/context.hpp"
#include "chainmark/fermion/form.hpp"
#include "chainmark/fermion/orbitals.hpp"

namespace chainmark::fermion {

/// Parity of the number of up spins.
enum class UpCount { even = 0, odd = 1 };

/// The free modes that hold for states of one parity of N, without a uniform field (a field h
/// lowers every energy by h), with what is known of their errors.
///
/// The modes are the exact ones of an operator H' close to H: what differs from H is bounded in
/// norm, the rest is rounding.
struct ModeSet {
    std::vector<Real> energy;  ///< ascending
    std::vector<int> label;    ///< of the orbital that goes with each energy
    std::shared_ptr<const Orbitals> orbitals;

    std::vector<Real> lowest;             ///< [N]: sum of the N lowest energies, N = 0 ... L
    std::vector<std::int64_t> label_sum;  ///< [N]: sum of their labels
    Real weight = 0.0L;                   ///< sum of |energy|

    bool measured = false;   ///< by residuals of an eigensolver; otherwise closed forms
    Real mode_error = 0.0L;  ///< on each energy
    Real rounding = 0.0L;    ///< on each energy, with respect to H'
    Real distance = 0.0L;    ///< ||H - H'|| over all states of the class

    int length() const { return static_cast<int>(energy.size()); }

    /// Bound on the error of any sum over occupied energies minus `field` per particle, sorted.
    Real sum_error(Real field) const;
};

/// Sorts the modes by energy and fills in the sums.
void finish(ModeSet& modes);

/// The modes of one parity class:
///   uniform ring:  2|t| cos(k + arg t), k = (2 pi m + pi [N even] + twist)/L;
///   uniform open:  2|t| cos(pi m/(L+1)), m = 1 ... L;
///   otherwise the eigenvalues of the L x L matrix A.
/// O(L log L) operations and 48 L bytes for uniform chains, O(L^3) and 50 L^2 bytes otherwise.
ModeSet solve_modes(const ChainForm& form, UpCount up_count, const Context& context);

/// The last case, by Eigen's SelfAdjointEigenSolver. With R = A V - V Lambda and g = ||V+ V - 1||,
/// both measured in extended precision, A = Q (Lambda + D) Q+ with unitary Q and
///   ||D||_F <= (||R||_F + 2 ||Lambda|| g)/(1 - g),
/// so each energy is within ||D||_F and each many-body level within the trace norm, sqrt(L)
/// ||D||_F.
ModeSet solve_matrix_modes(const ChainForm& form, UpCount up_count, const Context& context);

}  // namespace chainmark::fermion
