#pragma once

#include <optional>
#include <vector>

#include "chainmark/dense/full_spectrum.hpp"
#include "chainmark/dense/ground.hpp"

namespace chainmark::dense {

/// A number with its error bound.
struct Estimate {
    double value = 0.0;
    double bound = 0.0;
};

/// Averages over all levels with weights p_n = exp(-E_n/T)/Z, summed in extended precision.
///
/// How far an error dH of H (rounding and the residuals r_n = H v_n - E_n v_n of the computed
/// vectors: dH v_n = r_n) moves them follows from the Kubo-Mori product of the computed state,
///   (X; Y) = int_0^1 <rho^s X rho^(-s) Y>_c ds,   beta = 1/T:   d<A> = -beta (dH; A),
/// with |(X; Y)|^2 <= (X; X)(Y; Y) and (X; X) <= <X^2>. With q = 1 - p_0 and the gap g above a
/// single lowest level, (X; X) <= ||X||^2 (4 q + 2 T/g) too, from splitting off the lowest level,
/// which keeps the bound finite as T -> 0. <dH> is the rounding of Rayleigh quotients alone, so
/// that F and what follows from it by derivatives have errors of first order in that and of second
/// order in r.
template <class Scalar>
class Thermal {
public:
    /// `levels`: all, ascending.
    Thermal(std::vector<Level> levels, const FullSpectrum<Scalar>& spectrum, double temperature);

    /// False where the temperature is so low that the errors of the levels decide which of several
    /// lowest ones are occupied. free_energy and energy are known all the same.
    bool resolved() const { return resolved_; }

    Estimate free_energy() const;    ///< F = -T ln Z
    Estimate energy() const;         ///< E = sum p_n E_n
    Estimate entropy() const;        ///< S = ln Z + E/T, in nats; needs resolved()
    Estimate specific_heat() const;  ///< sum p_n (E_n - E)^2 / T^2; needs resolved()

    /// Average and variance of M = sum_j Sz_j where it commutes with H. Needs resolved().
    Estimate magnetization() const;
    Estimate magnetization_variance() const;

    /// <A> from <v|A|v> of every eigenvector v. Needs resolved().
    Average average(const Eigen::VectorXcd& diagonal, double norm) const;

    /// int_0^beta <M(-i tau) M> dtau - beta <M>^2 from <a|M|b>, ||M|| <= norm:
    ///   sum_nm |<n|M - <M>|m>|^2 (p_n - p_m)/(E_m - E_n),  p_n beta for E_m = E_n.
    /// O(dim^2). Needs resolved().
    Estimate kubo_response(const typename FullSpectrum<Scalar>::Vectors& elements,
                           double norm) const;

private:
    void bound_errors(bool small);
    Estimate estimate(long double value, long double error) const;
    long double spread_over_temperature() const;  ///< (<E^2> - <E>^2)^(1/2) / T

    std::vector<Level> levels_;
    const FullSpectrum<Scalar>& spectrum_;
    double temperature_;
    std::vector<long double> weights_;  ///< p_n
    long double log_sum_ = 0.0L;        ///< ln sum exp(-(E_n - E_0)/T)
    long double excitation_ = 0.0L;     ///< E - E_0
    long double variance_ = 0.0L;       ///< of E_n
    double largest_residual_ = 0.0;     ///< bounds ||dH||
    double residual_ = 0.0;             ///< bounds <dH^2>^(1/2)
    double response_ = 0.0;             ///< bounds beta (X; X) / ||X||^2
    double rounding_ = 0.0;             ///< bounds |<n|dH|n>|
    double noise_ = 0.0;                ///< the same with what is of second order in dH
    double unresolved_energy_ = 0.0;    ///< error of E where levels are not resolved
    bool resolved_ = true;
};

extern template class Thermal<double>;
extern template class Thermal<std::complex<double>>;

}  // namespace chainmark::dense
