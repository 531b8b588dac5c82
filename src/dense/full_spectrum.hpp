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

    /// All (2S+1)^L levels in the uniform field, ascending. Where the field does not commute,
    /// `field` must be that of the constructor.
    std::vector<Level> levels(double field) const;

    /// Lowest energy at field 0 and its bound for each total Sz = -LS ... LS. Needs
    /// field_commutes.
    std::vector<SzMinimum> lowest_by_sz() const;

    double sz(Eigen::Index vector) const { return sz_[vector]; }
    int length() const { return length_; }
    int two_s() const { return two_s_; }
    Eigen::Index dim() const { return energies_.size(); }
    double residual(Eigen::Index vector) const { return residuals_[vector]; }

    /// Bounds |<v|H|v> - energy| of every vector v: the rounding of H and of the energies.
    double noise() const { return noise_; }

    /// The part of every residual that bounds the rounding of H, in the operator norm.
    double noise_of_matrix() const { return noise_of_matrix_; }

    /// The operator sum_k products_k on this chain.
    FullOperator on_chain(const std::vector<Product>& products) const {
        return full_operator(products, length_, two_s_);
    }

    Eigen::VectorXcd state(Eigen::Index vector) const {
        return vectors_.col(vector).template cast<std::complex<double>>();
    }

    /// <a|A|b> for all pairs of the given eigenvectors.
    Eigen::MatrixXcd elements(const FullOperator& a, const std::vector<Eigen::Index>& of) const;

    /// <v|A|v> of every eigenvector v. O(dim nonzeros(A)).
    Eigen::VectorXcd diagonal(const FullOperator& a, const Context& context) const;

    /// <v|x> of every eigenvector v.
    Eigen::VectorXcd components(const Eigen::VectorXcd& x) const;

    /// sum_v c_v |v>
    Eigen::VectorXcd combination(const Eigen::VectorXcd& c) const;

    /// <a|M|b> for all eigenvectors, M = sum_j Sz_j. O(dim^3).
    Vectors magnetization_matrix() const {
        return vectors_.adjoint() * (total_sz_.asDiagonal() * vectors_);
    }

    /// Diagonal of M in the basis of digits.
    const Eigen::VectorXd& total_sz() const { return total_sz_; }

private:
    /// Diagonalizes hamiltonian + lift M; `noise` bounds the rounding of a residual.
    void solve(const FullMatrix<Scalar>& hamiltonian, double lift, double noise);

    int length_;
    int two_s_;
    bool commutes_ = false;
    double constant_rounding_ = 0.0;
    double noise_ = 0.0;
    double noise_of_matrix_ = 0.0;
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
