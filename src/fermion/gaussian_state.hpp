#pragma once

#include <array>
#include <complex>
#include <memory>
#include <optional>
#include <vector>

#include <Eigen/Dense>

#include "chainmark/fermion/angles.hpp"

/// States fixed by their covariance, in which every expectation value follows by Wick's theorem.
///
/// Majorana operators g_{2j} = c_j + c+_j, g_{2j+1} = i (c_j - c+_j), covariance
///   Gamma_ab = (i/2) <[g_a, g_b]>,  real antisymmetric, |Gamma| <= 1,
/// so that i g_{2j} g_{2j+1} = 1 - 2 n_j has the average Gamma_{2j,2j+1}.
namespace chainmark::fermion {

using RealMatrix = Eigen::MatrixXd;

/// Gamma_ab for a = 2i, 2i+1 (first index) and b = 2j, 2j+1.
using MajoranaBlock = std::array<std::array<Real, 2>, 2>;

/// A Gaussian state of definite or no parity on sites 0 ... L-1, in the Majoranas of one class.
class GaussianState {
public:
    GaussianState() = default;
    GaussianState(const GaussianState&) = delete;
    GaussianState& operator=(const GaussianState&) = delete;
    virtual ~GaussianState() = default;

    virtual int sites() const = 0;

    virtual MajoranaBlock block(int i, int j) const = 0;

    /// Gamma of the sites first ... first + count - 1: 2 count x 2 count. As a rule one matrix
    /// product; the default asks for block after block, for those of one row where homogeneous.
    virtual RealMatrix covariance(int first, int count) const;

    /// Bound on the Frobenius norm of the error of every principal submatrix of Gamma with this
    /// many Majoranas, with respect to the covariance of the exact state of the solved operator.
    /// It holds for `block` and for `covariance`, the last rounding of an element to a double
    /// apart.
    virtual Real error(int majoranas) const = 0;

    /// True where the spin state does not change under translation; then block(i, j) depends on
    /// j - i alone for 0 <= i, j < L.
    virtual bool homogeneous() const { return false; }

    /// True where Gamma couples even Majoranas with odd ones alone (exact zeros elsewhere).
    virtual bool bipartite() const { return false; }

    /// The value of P = (-1)^N in a pure state of definite parity; nothing in a mixed one.
    virtual std::optional<int> parity() const { return std::nullopt; }
};

/// M = sum_j Sz_j between the modes k < l of a class:
///   M = sum_k diagonal_k (n_k - 1/2) + sum_{k<l} (hop_kl b+_k b_l + pair_kl b+_k b+_l + h.c.).
struct FieldElement {
    int k = 0;
    int l = 0;
    std::complex<double> hop;
    std::complex<double> pair;
};

struct FieldForm {
    std::vector<Real> diagonal;
    std::vector<FieldElement> mixed;  ///< those that are not exactly zero
    Real error = 0.0L;                ///< bound on the norm of the error over all states
};

/// The modes b_k of one class as an orthonormal frame: u_k, v_k (rows 2k and 2k+1 of O) are the
/// real vectors of the mode's own Majoranas b_k + b+_k and i (b_k - b+_k).
class ModeFrame {
public:
    ModeFrame() = default;
    ModeFrame(const ModeFrame&) = delete;
    ModeFrame& operator=(const ModeFrame&) = delete;
    virtual ~ModeFrame() = default;

    virtual int sites() const = 0;

    /// The state in which 1 - 2 n_k has the average s_k, modes uncorrelated:
    ///   Gamma = sum_k s_k (u_k v_k^T - v_k u_k^T).
    /// +-1 in eigenstates, tanh(e_k/2T) at a temperature; also beyond 1, where the state's errors
    /// are to be multiplied by max |s|. The frame must outlive it.
    virtual std::unique_ptr<GaussianState> filled(std::vector<Real> s) const = 0;

    /// sum_j Sz_j in these modes.
    virtual FieldForm field_form() const = 0;
};

}  // namespace chainmark::fermion
