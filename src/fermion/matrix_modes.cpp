#include <algorithm>
#include <cmath>
#include <limits>

#include "chainmark/base/hermitian_eigen.hpp"
#include "chainmark/base/real_decompositions.hpp"
#include "chainmark/fermion/matrix_frame.hpp"
#include "chainmark/fermion/modes.hpp"

namespace chainmark::fermion {
namespace {

struct Solved {
    Eigen::VectorXd energies;
    ModeVectors vectors;
};

bool has_real_hops(const QuadraticForm& form) {
    return std::all_of(form.bonds.begin(), form.bonds.end(), [](const Bond& bond) {
        return bond.hop.imag() == 0.0;
    });
}

Eigen::MatrixXcd hopping_matrix(const QuadraticForm& form, UpCount up_count) {
    const Eigen::Index sites = form.length();
    Eigen::MatrixXcd matrix = Eigen::MatrixXcd::Zero(sites, sites);
    for (int j = 0; j < sites; ++j) {
        matrix(j, j) = static_cast<double>(form.field_at(j, up_count));
    }
    for (const Bond& bond : form.bonds) {
        const Eigen::Index i = bond.first;
        const Eigen::Index j = (bond.first + bond.range) % sites;
        const double sign = form.wraps(bond) ? -parity_of(up_count) : 1.0;
        matrix(i, j) += sign * bond.hop;
        matrix(j, i) += sign * std::conj(bond.hop);
    }
    return matrix;
}

/// b_k = sum_j conj(V_jk) c_j: u_k is (Re V, -Im V) and v_k (Im V, Re V) on (even, odd) Majoranas.
Solved solve_hopping(const QuadraticForm& form, UpCount up_count) {
    const Eigen::MatrixXcd matrix = hopping_matrix(form, up_count);
    if (has_real_hops(form)) {
        const HermitianEigen<double> solved = hermitian_eigen(Eigen::MatrixXd(matrix.real()));
        const RealMatrix rows = solved.vectors.transpose();
        return {solved.values, {.u = rows, .v = rows, .bipartite = true}};
    }
    const HermitianEigen<std::complex<double>> solved = hermitian_eigen(matrix);
    const Eigen::Index sites = form.length();
    ModeVectors vectors{RealMatrix(sites, 2 * sites), RealMatrix(sites, 2 * sites)};
    const auto even = Eigen::seqN(0, sites, 2);
    const auto odd = Eigen::seqN(1, sites, 2);
    vectors.u(Eigen::all, even) = solved.vectors.real().transpose();
    vectors.u(Eigen::all, odd) = -solved.vectors.imag().transpose();
    vectors.v(Eigen::all, even) = solved.vectors.imag().transpose();
    vectors.v(Eigen::all, odd) = solved.vectors.real().transpose();
    return {solved.values, std::move(vectors)};
}

Solved solve_bipartite(const ClassMatrix& matrix) {
    const SingularValues solved = singular_values(matrix.even_odd_block());
    return {solved.values,
            {.u = solved.u.transpose(), .v = solved.v.transpose(), .bipartite = true}};
}

/// C = Q T Q^T with T tridiagonal; T couples even with odd indices alone, by the block B with
/// B_ii = T_{2i,2i+1} = -T_{2i+1,2i} and B_{i,i-1} = T_{2i,2i-1}.
Solved solve_general(const ClassMatrix& matrix) {
    const Hessenberg form = hessenberg(matrix.dense());
    const Eigen::Index sites = matrix.size() / 2;
    RealMatrix block = RealMatrix::Zero(sites, sites);
    for (Eigen::Index i = 0; i < sites; ++i) {
        block(i, i) = -form.below[2 * i];
        if (i > 0) {
            block(i, i - 1) = form.below[2 * i - 1];
        }
    }
    const SingularValues solved = singular_values(std::move(block));
    const auto even = Eigen::seqN(0, sites, 2);
    const auto odd = Eigen::seqN(1, sites, 2);
    return {solved.values,
            {.u = times_transpose(solved.u.transpose(), form.q(Eigen::all, even)),
             .v = times_transpose(solved.v.transpose(), form.q(Eigen::all, odd)),
             .bipartite = false}};
}

}  // namespace

ModeSet matrix_modes(const QuadraticForm& form, UpCount up_count, const Context& context) {
    const ClassMatrix matrix(form, up_count);
    const bool conserving = form.conserves_number();
    const Solved solved = conserving              ? solve_hopping(form, up_count)
                          : matrix.is_bipartite() ? solve_bipartite(matrix)
                                                  : solve_general(matrix);
    poll(context);
    const Real length = static_cast<Real>(form.length());
    const Real size = matrix.row_sum_norm();
    const Real defect = orthonormality_defect(solved.vectors, context);
    // Every element of the residual is a sum of `operations` products of size at most |C| |v|.
    const Real operations = static_cast<Real>(4 + matrix.longest_row());
    const Real residual = residual_norm(matrix, solved.vectors, solved.energies, context) +
                          operations * 2 * real_epsilon * size * std::sqrt(2 * length);
    // A defect near 1 or above would mean that the solver failed; nothing is then known.
    const Real mismatch = defect < 0.5L ? (residual + 2 * (size + residual) * defect) / (1 - defect)
                                        : std::numeric_limits<Real>::infinity();
    ModeSet modes;
    modes.energy.assign(solved.energies.data(), solved.energies.data() + solved.energies.size());
    modes.vacuum = conserving ? 1 : vacuum_parity(solved.vectors);
    modes.frame = matrix_frame(solved.vectors, defect, modes.vacuum);
    modes.measured = true;
    modes.mode_error = mismatch;
    modes.distance = std::sqrt(2 * length) / 4 * mismatch;
    return modes;
}

}  // namespace chainmark::fermion
