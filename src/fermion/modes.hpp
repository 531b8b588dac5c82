#pragma once

#include <cstdint>
#include <memory>
#include <vector>

#include "chainmark/base/context.hpp"
#include "chainmark/fermion/form.hpp"
#include "chainmark/fermion/gaussian_state.hpp"

namespace chainmark::fermion {

/// The free modes that hold for states of one class,
///   H = constant of the class + sum_k energy_k (n_k - 1/2),
/// with what is known of their errors. Energies may have either sign. States of the class are those
/// where (-1)^(number of filled modes) times `vacuum` is the P of the class.
///
/// Where N is conserved, N is the number of filled modes and a uniform field h, left out here,
/// lowers every energy by h.
///
/// The modes are the exact ones of an operator H' close to H: what differs from H is bounded in
/// norm, the rest is rounding.
struct ModeSet {
    std::vector<Real> energy;  ///< ascending
    std::vector<int> label;    ///< in `frame` of the mode that goes with each energy
    std::shared_ptr<const ModeFrame> frame;
    int vacuum = 1;                  ///< P of the state without filled modes
    std::vector<int> unpaired = {};  ///< rings with pairs: the labels of k = 0 and pi
    Real trace = 0.0L;               ///< sum of all energies

    std::vector<Real> lowest;             ///< [n]: sum of the n lowest energies, n = 0 ... L
    std::vector<std::int64_t> label_sum;  ///< [n]: sum of their labels
    Real weight = 0.0L;                   ///< sum of |energy|

    bool measured = false;   ///< by residuals of an eigensolver; otherwise closed forms
    Real mode_error = 0.0L;  ///< on each energy
    Real rounding = 0.0L;    ///< on each energy, with respect to H'
    Real distance = 0.0L;    ///< ||H - H'|| over all states of the class

    int length() const { return static_cast<int>(energy.size()); }

    /// Bound on the error of any sum of +-energy/2 over all modes, each less `field`.
    Real sum_error(Real field) const;
};

/// Sorts the modes by energy and fills in the sums.
void finish(ModeSet& modes);

/// The modes of one class: `ring_modes`, `open_modes` or `matrix_modes` by the kind of the form.
ModeSet solve_modes(const QuadraticForm& form, UpCount up_count, const Context& context);

/// Uniform ring, k = (2 pi m + pi [N even] + twist)/L, e_k = sum_r 2 Re(hop_r exp(ikr)) + onsite:
/// modes e_k; with pairs, s_k and a_k the even and odd part of e_k and
///   delta_k = 2i sum_r pair_r sin(kr):   a_k + (s_k^2 + |delta_k|^2)^(1/2),
/// but e_k at k = 0 and pi, which have no partner. The state without filled modes is that of the
/// lowest even state of every pair (k, -k): P = 1. O(L (ranges + log L)) operations, 100 L bytes.
/// Sources: E. Lieb, T. Schultz, D. Mattis, Ann. Phys. (NY) 16, 407 (1961); S. Katsura, Phys. Rev.
/// 127, 1508 (1962).
ModeSet ring_modes(const QuadraticForm& form, UpCount up_count);

/// Uniform hop t, free ends: 2|t| cos(pi m/(L+1)) + onsite, m = 1 ... L.
ModeSet open_modes(const QuadraticForm& form);

/// Any form. Where N is conserved, eigenvalues of the Hermitian L x L matrix of the hops. Otherwise
/// singular values of the block between even and odd Majoranas, L x L, where nothing else couples,
/// or, in general, of the block that C has in the basis of its tridiagonal form. Then all energies
/// are >= 0.
///
/// With W the 2L vectors u_k, v_k found, R = C W - W Omega and g = ||W^T W - 1||, both measured,
/// C = Q (Omega + D) Q^T with orthogonal Q and
///   ||D||_F <= (||R||_F + 2 ||Omega|| g)/(1 - g),
/// so each energy is within ||D||_F and each many-body level within a quarter of the trace norm,
/// sqrt(2L)/4 ||D||_F. O(L^3) operations, 100 L^2 bytes (400 L^2 in the general case).
ModeSet matrix_modes(const QuadraticForm& form, UpCount up_count, const Context& context);

}  // namespace chainmark::fermion
