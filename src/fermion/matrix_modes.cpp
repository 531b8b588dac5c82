#include <algorithm>
#include <cmath>
#include <type_traits>

#include <Eigen/Dense>

#include "chainmark/fermion/modes.hpp"

namespace chainmark::fermion {
namespace {

template <class Scalar>
using Matrix = Eigen::Matrix<Scalar, Eigen::Dynamic, Eigen::Dynamic>;

template <class Scalar>
constexpr bool is_complex = !std::is_same_v<Scalar, double>;

template <class Scalar>
using Wide = std::conditional_t<is_complex<Scalar>, std::complex<Real>, Real>;

template <class Scalar>
Scalar narrow(std::complex<double> value) {
    if constexpr (is_complex<Scalar>) {
        return value;
    } else {
        return value.real();
    }
}

template <class Scalar>
Scalar conjugated(Scalar value) {
    if constexpr (is_complex<Scalar>) {
        return std::conj(value);
    } else {
        return value;
    }
}

std::complex<double> wrap_hop(const ChainForm& form, UpCount up_count) {
    return up_count == UpCount::odd ? form.wrap : -form.wrap;
}

template <class Scalar>
Matrix<Scalar> hopping_matrix(const ChainForm& form, UpCount up_count) {
    const Eigen::Index sites = form.length();
    Matrix<Scalar> matrix = Matrix<Scalar>::Zero(sites, sites);
    const auto add_hop = [&](Eigen::Index to, Eigen::Index from, std::complex<double> hop) {
        matrix(to, from) += narrow<Scalar>(hop);
        matrix(from, to) += narrow<Scalar>(std::conj(hop));
    };
    for (Eigen::Index j = 0; j < sites; ++j) {
        matrix(j, j) = form.onsite[static_cast<std::size_t>(j)];
        if (j + 1 < sites) {
            add_hop(j, j + 1, form.hop[static_cast<std::size_t>(j)]);
        }
    }
    if (form.wrap != 0.0) {
        add_hop(sites - 1, 0, wrap_hop(form, up_count));
    }
    return matrix;
}

/// <a|b> in extended precision, with an error of at most length * real_epsilon for unit vectors.
template <class Scalar>
Wide<Scalar> overlap(const Scalar* a, const Scalar* b, Eigen::Index length) {
    Wide<Scalar> sum = 0.0L;
    for (Eigen::Index i = 0; i < length; ++i) {
        sum += Wide<Scalar>(conjugated(a[i])) * Wide<Scalar>(b[i]);
    }
    return sum;
}

/// ||V+ V - 1||_F.
template <class Scalar>
Real orthonormality_defect(const Matrix<Scalar>& vectors, const Context& context) {
    const Eigen::Index sites = vectors.rows();
    Real square = 0.0L;
    for (Eigen::Index a = 0; a < sites; ++a) {
        poll(context);
        const Wide<Scalar> own = overlap(vectors.col(a).data(), vectors.col(a).data(), sites);
        square += std::norm(own - Wide<Scalar>(1.0L));
        for (Eigen::Index b = 0; b < a; ++b) {
            square += 2 * std::norm(overlap(vectors.col(a).data(), vectors.col(b).data(), sites));
        }
    }
    const Real length = static_cast<Real>(sites);
    return std::sqrt(square) + length * length * real_epsilon;
}

/// ||A V - V Lambda||_F. A row of A holds the diagonal and two hops.
template <class Scalar>
Real residual_norm(const Matrix<Scalar>& matrix,
                   const Matrix<Scalar>& vectors,
                   const Eigen::VectorXd& energies) {
    const Eigen::Index sites = matrix.rows();
    Real square = 0.0L;
    for (Eigen::Index column = 0; column < sites; ++column) {
        for (Eigen::Index row = 0; row < sites; ++row) {
            const auto product = [&](Eigen::Index at) {
                return Wide<Scalar>(matrix(row, at)) * Wide<Scalar>(vectors(at, column));
            };
            Wide<Scalar> sum = (Wide<Scalar>(matrix(row, row)) - Wide<Scalar>(energies(column))) *
                               Wide<Scalar>(vectors(row, column));
            const Eigen::Index right = (row + 1) % sites;
            const Eigen::Index left = (row + sites - 1) % sites;
            if (right != row) {
                sum += product(right);
            }
            if (left != right) {
                sum += product(left);
            }
            square += std::norm(sum);
        }
    }
    return std::sqrt(square);
}

/// Bound on ||A||: the largest row sum of absolute values.
template <class Scalar>
Real row_sum_norm(const Matrix<Scalar>& matrix) {
    return matrix.cwiseAbs().rowwise().sum().maxCoeff();
}

template <class Scalar>
class Columns : public Orbitals {
public:
    Columns(Matrix<Scalar> vectors, Real defect) : rows_(vectors.transpose()), defect_(defect) {}

    Real density(const Occupation& occupied, int site) const override {
        return std::abs(green(occupied, site, site));
    }

    Real coherence_squared(const Occupation& occupied, int i, int j) const override {
        return std::norm(green(occupied, i, j));
    }

    /// With V = Q (1 + E), ||E|| <= g, the sum over columns of V is off by at most 2 g + g^2.
    Real error(const Occupation&) const override {
        return 3 * defect_ + static_cast<Real>(rows_.cols()) * real_epsilon;
    }

private:
    Wide<Scalar> green(const Occupation& occupied, int i, int j) const {
        Wide<Scalar> sum = 0.0L;
        occupied.each_run([&](int a, int b) {
            sum += overlap(rows_.col(i).data() + a, rows_.col(j).data() + a, b - a);
        });
        return sum;
    }

    Matrix<Scalar> rows_;  ///< column j holds site j of all modes: the sums run along memory
    Real defect_;
};

template <class Scalar>
ModeSet solve(const ChainForm& form, UpCount up_count, const Context& context) {
    const Matrix<Scalar> matrix = hopping_matrix<Scalar>(form, up_count);
    const Eigen::SelfAdjointEigenSolver<Matrix<Scalar>> solver(matrix);
    const Matrix<Scalar>& vectors = solver.eigenvectors();
    const Eigen::VectorXd& energies = solver.eigenvalues();
    const Real length = static_cast<Real>(form.length());
    const Real size = row_sum_norm(matrix);
    const Real defect = orthonormality_defect(vectors, context);
    const Real residual =
        residual_norm(matrix, vectors, energies) + 16 * real_epsilon * size * std::sqrt(length);
    ModeSet modes;
    modes.energy.assign(energies.data(), energies.data() + energies.size());
    modes.orbitals = std::make_shared<Columns<Scalar>>(vectors, defect);
    modes.measured = true;
    // A defect near 1 or above would mean that the solver failed; nothing is then known.
    const Real mismatch = defect < 0.5L ? (residual + 2 * (size + residual) * defect) / (1 - defect)
                                        : std::numeric_limits<Real>::infinity();
    modes.mode_error = mismatch;
    modes.distance = std::sqrt(length) * mismatch;
    return modes;
}

}  // namespace

ModeSet solve_matrix_modes(const ChainForm& form, UpCount up_count, const Context& context) {
    const auto real = [](std::complex<double> value) { return value.imag() == 0.0; };
    const bool all_real = real(form.wrap) && std::all_of(form.hop.begin(), form.hop.end(), real);
    return all_real ? solve<double>(form, up_count, context)
                    : solve<std::complex<double>>(form, up_count, context);
}

}  // namespace chainmark::fermion
