#include <cmath>

#include "chainmark/base/numerics.hpp"
#include "chainmark/base/real_decompositions.hpp"
#include "chainmark/fermion/matrix_frame.hpp"

namespace chainmark::fermion {
namespace {

/// The squared Frobenius norm of the part of A A^T - 1 on and, twice, below the diagonal, and a
/// bound on the rounding of what it was computed from.
struct Defect {
    Real square = 0.0L;
    Real rounding = 0.0L;
};

/// A matrix whose rows have norms of about 1 as coarse + fine: coarse on the grid 2^-26, |fine|
/// <= 2^-27.
struct Split {
    RealMatrix coarse;
    RealMatrix fine;

    explicit Split(const RealMatrix& rows)
        : coarse((rows.array() * 0x1p26).round().matrix() / 0x1p26), fine(rows - coarse) {}

    RealMatrix coarse_and_half() const { return coarse + fine / 2; }
};

/// Bound on the Frobenius norm of the rounding of (coarse + fine/2) fine^T: each element is a sum
/// of `columns` products that are at most 2 sqrt(columns) 2^-27 together.
Real cross_rounding(Eigen::Index rows, Eigen::Index columns) {
    const Real length = static_cast<Real>(columns);
    return static_cast<Real>(rows) * 4 * length * static_cast<Real>(epsilon) * 0x1p-27L *
           std::sqrt(length) * 2;
}

Defect defect_of(const RealMatrix& rows) {
    const Split split(rows);
    const Eigen::Index size = rows.rows();
    const RealMatrix exact = times_transpose(split.coarse, split.coarse);
    const RealMatrix cross = times_transpose(split.coarse_and_half(), split.fine);
    Defect defect{.square = 0.0L, .rounding = cross_rounding(size, rows.cols())};
    for (Eigen::Index b = 0; b < size; ++b) {
        for (Eigen::Index a = b; a < size; ++a) {
            const Real sum = static_cast<Real>(exact(a, b)) + static_cast<Real>(cross(a, b)) +
                             static_cast<Real>(cross(b, a)) - (a == b ? 1.0L : 0.0L);
            defect.square += (a == b ? 1 : 2) * sum * sum;
        }
    }
    return defect;
}

}  // namespace

AccurateProduct accurate_product(const RealMatrix& a, const RealMatrix& b) {
    const Split left(a);
    const Split right(b);
    RealMatrix product = times_transpose(left.coarse_and_half(), right.fine);
    product += times_transpose(left.fine, right.coarse_and_half());
    product += times_transpose(left.coarse, right.coarse);
    const Real size = static_cast<Real>(a.rows());
    return {std::move(product),
            2 * cross_rounding(a.rows(), a.cols()) + std::sqrt(size) * static_cast<Real>(epsilon)};
}

Real orthonormality_defect(const ModeVectors& vectors, const Context& context) {
    std::vector<Defect> parts;
    if (vectors.bipartite) {
        parts.push_back(defect_of(vectors.u));
        poll(context);
        parts.push_back(defect_of(vectors.v));
    } else {
        RealMatrix all(2 * vectors.u.rows(), vectors.u.cols());
        all << vectors.u, vectors.v;
        parts.push_back(defect_of(all));
    }
    poll(context);
    Real square = 0.0L;
    Real rounding = 0.0L;
    for (const Defect& part : parts) {
        square += part.square;
        rounding += part.rounding;
    }
    return std::sqrt(square) + rounding;
}

Real residual_norm(const ClassMatrix& matrix,
                   const ModeVectors& vectors,
                   const Eigen::VectorXd& energies,
                   const Context& context) {
    const int modes = vectors.modes();
    const auto column = [&](const RealMatrix& m, int a, int parity) -> const double* {
        if (!vectors.bipartite) {
            return m.col(a).data();
        }
        return a % 2 == parity ? m.col(a / 2).data() : nullptr;
    };
    std::vector<Real> of_v(static_cast<std::size_t>(modes));
    std::vector<Real> of_u(static_cast<std::size_t>(modes));
    Real square = 0.0L;
    // Row a of C V - U E and of C U + V E, for all modes at once.
    for (int a = 0; a < matrix.size(); ++a) {
        poll(context);
        const auto start = [&](std::vector<Real>& sum, const double* own, Real sign) {
            for (int k = 0; k < modes; ++k) {
                sum[static_cast<std::size_t>(k)] =
                    own == nullptr
                        ? 0.0L
                        : sign * static_cast<Real>(energies[k]) * static_cast<Real>(own[k]);
            }
        };
        const auto add = [&](std::vector<Real>& sum, const double* own, Real value) {
            for (int k = 0; own != nullptr && k < modes; ++k) {
                sum[static_cast<std::size_t>(k)] += value * static_cast<Real>(own[k]);
            }
        };
        start(of_v, column(vectors.u, a, 0), -1.0L);
        start(of_u, column(vectors.v, a, 1), 1.0L);
        for (const ClassMatrix::Element& element : matrix.row(a)) {
            add(of_v, column(vectors.v, element.column, 1), element.value);
            add(of_u, column(vectors.u, element.column, 0), element.value);
        }
        for (std::size_t k = 0; k < of_v.size(); ++k) {
            square += of_v[k] * of_v[k] + of_u[k] * of_u[k];
        }
    }
    return std::sqrt(square);
}

}  // namespace chainmark::fermion
