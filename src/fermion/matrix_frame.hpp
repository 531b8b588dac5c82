#pragma once

#include <memory>

#include "chainmark/base/context.hpp"
#include "chainmark/fermion/class_matrix.hpp"

namespace chainmark::fermion {

/// The modes of a class as real vectors: row k of `u` and `v` are u_k and v_k, over all 2L
/// Majoranas, or, where the class is bipartite, u over the even and v over the odd ones (L each).
/// The label of a mode is its row.
struct ModeVectors {
    RealMatrix u;
    RealMatrix v;
    bool bipartite = false;

    int modes() const { return static_cast<int>(u.rows()); }
};

/// The frame of these modes. `defect`: ||O O^T - 1||_F for the O of all u_k and v_k; `vacuum`: P of
/// the state without filled modes.
std::unique_ptr<ModeFrame> matrix_frame(ModeVectors vectors, Real defect, int vacuum);

/// det O, that is P of the state without filled modes, for the O with rows u_0, v_0, u_1, v_1, ...
/// The sign of a determinant of modulus 1 by LU with pivots: the matrix is as well conditioned as
/// can be, so rounding cannot reach it.
int vacuum_parity(const ModeVectors& vectors);

/// A B^T of square matrices whose rows have norms of at most about 1, and a bound on the Frobenius
/// norm of its error, little more than that of rounding once.
///
/// Each matrix is split into a part on the grid 2^-26, of which double arithmetic adds up products
/// without any rounding (sums of squares stay below 2), and a rest of at most 2^-27: with
/// A = H + R, B = K + S, A B^T = H K^T + (H + R/2) S^T + R (K + S/2)^T, of which only small numbers
/// are rounded. Source of the method: K. Ozaki, T. Ogita, S. Oishi, S. M. Rump, Numer. Algorithms
/// 59, 95 (2012).
struct AccurateProduct {
    RealMatrix value;
    Real error = 0.0L;
};
AccurateProduct accurate_product(const RealMatrix& a, const RealMatrix& b);

/// ||O O^T - 1||_F, by products of the same kind.
Real orthonormality_defect(const ModeVectors& vectors, const Context& context);

/// (sum_k |C v_k - e_k u_k|^2 + |C u_k + e_k v_k|^2)^(1/2), in extended precision.
Real residual_norm(const ClassMatrix& matrix,
                   const ModeVectors& vectors,
                   const Eigen::VectorXd& energies,
                   const Context& context);

}  // namespace chainmark::fermion
