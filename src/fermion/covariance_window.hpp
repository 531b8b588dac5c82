#pragma once

#include <complex>
#include <vector>

#include "chainmark/fermion/gaussian_state.hpp"
#include "chainmark/fermion/pfaffian.hpp"

namespace chainmark::fermion {

/// Gamma of a state, or first + i second of two (Scalar = std::complex<double>): single elements in
/// extended precision, or a window of consecutive sites as a matrix, which is kept.
template <class Scalar>
class CovarianceWindow {
public:
    using Element = std::complex<Real>;

    /// One or two states, which must outlive it, of modes with |s_k| <= largest.
    CovarianceWindow(std::vector<const GaussianState*> parts, Real largest)
        : parts_(std::move(parts)), largest_(largest) {}

    const GaussianState& state() const { return *parts_.front(); }
    bool single() const { return parts_.size() == 1; }
    bool filled() const { return count_ > 0; }
    Real largest() const { return largest_; }

    Element element(int a, int b) const;

    /// Makes the window hold these sites. Where translation changes nothing it starts at the first
    /// of them whichever it is; otherwise it holds all sites, or of long chains what is asked for.
    void reach(int first_site, int end_site);

    /// Gamma_ab for these Majoranas: of the window, which must hold them, or, before there is one,
    /// of single elements.
    Matrix<Scalar> submatrix(const std::vector<int>& rows, const std::vector<int>& columns) const;

    /// Bound on the Frobenius norm of the error of n x n elements, that of the states alone ...
    Real state_error(std::size_t majoranas) const;

    /// ... and with the rounding of `submatrix`. That of the window is measured on some of its
    /// elements, computed in extended precision: distances 0, 1, 2-3, 4-7, ... one by one, with a
    /// factor for their spread.
    Real error(std::size_t majoranas) const;

private:
    Matrix<Scalar> window(int first, int count) const;
    Scalar stored(int a, int b) const;
    void fill(int first, int count);
    std::vector<Real> measured_errors() const;
    Real window_error(Real majoranas) const;

    std::vector<const GaussianState*> parts_;
    Real largest_;
    int first_ = 0;  ///< first site of window_
    int count_ = 0;
    Matrix<Scalar> window_;
    std::vector<Real> errors_;  ///< mean squares of the errors of elements by distance
};

extern template class CovarianceWindow<double>;
extern template class CovarianceWindow<std::complex<double>>;

}  // namespace chainmark::fermion
