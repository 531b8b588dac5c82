#pragma once

#include <optional>
#include <string>
#include <vector>

#include "chainmark/base/context.hpp"
#include "chainmark/dense/full_matrix.hpp"
#include "chainmark/dense/jumps.hpp"
#include "chainmark/reference/problem.hpp"
#include "chainmark/reference/value.hpp"

namespace chainmark::dense {

/// One eigenvector's energy in a given uniform field.
struct Level {
    double energy = 0.0;
    double bound = 0.0;
    Eigen::Index vector = 0;  ///< column of FullSpectrum::vectors
};

/// Every eigenpair of H, from the full matrix.
///
/// Where H0 = terms commutes with M = sum_j Sz_j (found from the matrix: [H0, M] = 0 element by
/// element), the matrix diagonalized is H0 + c M with c > 2 ||H0||: the spectra of different M then
/// do not overlap, every eigenvector has one M, and the same vectors serve all uniform fields.
template <class Scalar>
class FullSpectrum {
public:
    using Vectors = Eigen::Matrix<Scalar, Eigen::Dynamic, Eigen::Dynamic>;

    /// Diagonalizes the problem's terms, and its field too where that does not commute.
    FullSpectrum(const Problem& problem, const Context& context);

    bool field_commutes() const { return commutes_; }

    /// All 2^L levels in the uniform field, ascending. Where the field does not commute, `field`
    /// must be that of the constructor.
    std::vector<Level> levels(double field) const;

    /// Lowest energy at field 0 and its bound for each total Sz = -L/2 ... L/2. Needs
    /// field_commutes.
    std::vector<SzMinimum> lowest_by_sz() const;

    double sz(Eigen::Index vector) const { return sz_[vector]; }
    int length() const { return length_; }
    double residual(Eigen::Index vector) const { return residuals_[vector]; }

    /// <a|A|b> for all pairs of the given eigenvectors.
    Eigen::MatrixXcd elements(const FullMatrix<Scalar>& a,
                              const std::vector<Eigen::Index>& of) const;

private:
    /// Diagonalizes hamiltonian + lift M; `noise` bounds the rounding of a residual.
    void solve(const FullMatrix<Scalar>& hamiltonian, double lift, double noise);

    int length_;
    bool commutes_ = false;
    double constant_rounding_ = 0.0;
    Eigen::VectorXd total_sz_;  ///< of the basis states
    Eigen::VectorXd energies_;
    Eigen::VectorXd bounds_;
    Eigen::VectorXd residuals_;
    Eigen::VectorXd sz_;
    Vectors vectors_;
};

extern template class FullSpectrum<double>;
extern template class FullSpectrum<std::complex<double>>;

}  // namespace chainmark::dense
