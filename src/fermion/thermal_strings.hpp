#pragma once

#include <memory>
#include <vector>

#include "chainmark/fermion/thermal.hpp"
#include "chainmark/fermion/wick.hpp"

namespace chainmark::fermion {

/// Averages of Pauli strings A over the states of one parity class at a temperature, weights adding
/// up to 1 in the class.
///
/// Let F(t) = sum over the sets S of excitations of t^|S| prod_S x_k <A>_S: the trace of A with
/// weights t x_k, x_k = exp(-c_k/T), a Gaussian "state" with (1 - t x_k)/(1 + t x_k) for the
/// average of 1 - 2 n_k. Sets of even or odd size are F(1) +- F(-1) over two.
///
/// F(-1) = +-Tr(A P exp(-H/T)) is Z(-1) times a Pfaffian with 1/tanh(c_k/2T) in place of the tanh,
/// Z(-1)/Z(1) = prod tanh(c_k/2T) = tau: sub-Pfaffians are products of 1/tanh at most, tau times
/// them at most 1. Near modes without energy, where 1/tanh loses digits, it is taken from the
/// complementary string A P in the ordinary state. In any case it is bounded by the product of all
/// but the d/2 smallest tanh, d the degree of A: where that is below rounding it is left out.
///
/// Where the number of excitations is odd and their weight small, F(1) - F(-1) cancels. Then
/// F(t) = sum_n f_n t^n, |f_n| <= e_n(x) <= (sum x)^n/n!, is sampled on the circle
/// |t| = R = 1/(2 sum x), where f_1 R is no longer small beside f_0:
///   f_n R^n = (1/N) sum_j F(R w^j) w^(-jn) + (terms n + N, n + 2N, ...),  w = exp(2 pi i/N),
/// N = 16, and the wanted sum is that of f_1, f_3, ... On the circle sub-Pfaffians of Gamma(t) are
/// bounded by Z(R)/|Z(t)|, Z(t) = prod (1 + t x_k).
class ClassStrings {
public:
    /// `project` false: all states of the modes, both parities. The class and its modes must
    /// outlive it.
    ClassStrings(const ThermalClass& own, const OccupiedModes& occupied, bool project);

    Average average(const PauliString& string);

    bool homogeneous() const { return state_->homogeneous(); }

private:
    struct Node {
        std::complex<Real> weight;  ///< Z(t)
        std::unique_ptr<GaussianState> real;
        std::unique_ptr<GaussianState> imaginary;
        std::unique_ptr<WickState<std::complex<double>>> wick;
    };

    std::vector<Real> polarization(bool imaginary, std::complex<Real> scale) const;
    void sample_circle();
    Average on_circle(const PauliString& string);
    Average at_minus_one(const PauliString& string, const MajoranaString& direct);
    void invert(const std::vector<Real>& s);

    const ThermalClass& own_;
    const OccupiedModes& occupied_;
    bool project_;
    bool circle_ = false;
    std::vector<Real> relative_;  ///< x_k / sum x
    Real cheapest_total_ = 0.0L;  ///< sum x / x_0
    std::vector<Real> log_tanh_;  ///< ln of the product of all but the n smallest tanh
    std::unique_ptr<GaussianState> state_;
    std::unique_ptr<WickState<double>> wick_;
    std::unique_ptr<GaussianState> inverse_state_;  ///< 1/tanh; null near modes without energy
    std::unique_ptr<WickState<double>> inverse_wick_;
    std::vector<Node> nodes_;
};

}  // namespace chainmark::fermion
