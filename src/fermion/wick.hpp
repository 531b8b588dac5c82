#pragma once

#include "chainmark/fermion/covariance_window.hpp"
#include "chainmark/fermion/majorana.hpp"

namespace chainmark::fermion {

/// A complex average and a bound on its absolute error.
struct Average {
    std::complex<Real> value;
    Real error = 0.0L;
};

/// Averages of strings in a Gaussian state by Wick's theorem: with <g_a g_b> = -i Gamma_ab, a != b,
///   <g_{a1} ... g_{an}> = (-i)^(n/2) Pf(Gamma restricted to a1 < ... < an),  0 for odd n.
/// Where Gamma couples even Majoranas with odd ones alone, with m of each among the n (0 otherwise)
///   Pf = (-1)^(m(m-1)/2) sign det G,  G_ab = Gamma_ab, a even, b odd,
/// with the sign of the permutation that moves the even ones to the front.
///
/// Errors: for contractions M and M + E (their sub-Pfaffians are at most 1)
///   |Pf(M + E) - Pf(M)| <= (1/2) |E|_1 (1 + |E|)^(n-1) <= (1/2) sqrt(n) |E|_F (1 + |E|_F)^(n-1),
/// |E|_1 the trace norm: the derivative of Pf is half a sum over sub-Pfaffians times elements of E.
/// E holds the state's error, the rounding of Gamma, measured on some of its elements, and the
/// measured error of the factorization.
///
/// Operators that are not positive have a Gamma, too, which need not be a contraction: its modes
/// have |s_k| <= `largest` and its sub-Pfaffians are at most `cofactors`. Scalar =
/// std::complex<double>: Gamma = first + i second.
template <class Scalar>
class WickState {
public:
    /// The states must outlive it.
    explicit WickState(const GaussianState& state, Real largest = 1.0L, Real cofactors = 1.0L);
    WickState(const GaussianState& real,
              const GaussianState& imaginary,
              Real largest,
              Real cofactors);

    Average average(const MajoranaString& string);

    /// In a pure state of parity p the string or p times (the string times P), the shorter one.
    Average average(const PauliString& string);

    const GaussianState& state() const { return gamma_.state(); }

    /// Gamma of some sites, ascending, and the Frobenius norm of its error.
    Matrix<Scalar> covariance(const std::vector<int>& sites);
    Real covariance_error(std::size_t majoranas) const { return gamma_.error(majoranas); }

private:
    void prepare(const std::vector<int>& indices);
    Average short_pfaffian(const std::vector<int>& indices) const;
    Average pfaffian_of(const std::vector<int>& indices);
    Average bipartite_pfaffian(const std::vector<int>& indices);

    /// `frobenius`: of E.
    Average bounded(std::complex<Real> value, Real frobenius, std::size_t majoranas) const;

    CovarianceWindow<Scalar> gamma_;
    Real cofactors_;
};

extern template class WickState<double>;
extern template class WickState<std::complex<double>>;

}  // namespace chainmark::fermion
