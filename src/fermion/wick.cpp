#include "chainmark/fermion/wick.hpp"

#include <cmath>
#include <type_traits>

#include "chainmark/base/error.hpp"

namespace chainmark::fermion {
namespace {

/// Strings up to this length ask for single elements of Gamma, longer ones for a window of it.
constexpr std::size_t shortest_windowed = 12;

Real wick_sign(std::size_t n) {
    return n % 2 == 0 ? 1.0L : -1.0L;
}

/// (-i)^n
std::complex<Real> minus_i_to(std::size_t n) {
    MajoranaString string;
    string.quarter_turns = static_cast<int>(3 * n % 4);
    return std::complex<Real>(string.phase());
}

bool is_even(int index) {
    return index % 2 == 0;
}

}  // namespace

template <class Scalar>
WickState<Scalar>::WickState(const GaussianState& state, Real largest, Real cofactors)
    : gamma_({&state}, largest), cofactors_(cofactors) {}

template <class Scalar>
WickState<Scalar>::WickState(const GaussianState& real,
                             const GaussianState& imaginary,
                             Real largest,
                             Real cofactors)
    : gamma_({&real, &imaginary}, largest), cofactors_(cofactors) {
    CHAINMARK_EXPECTS((std::is_same_v<Scalar, std::complex<double>>));
}

template <class Scalar>
Average WickState<Scalar>::average(const PauliString& string) {
    const MajoranaString direct = majorana_string(string);
    const std::size_t degree = direct.indices.size();
    const auto all = 2 * static_cast<std::size_t>(state().sites());
    if (!gamma_.single() || !state().parity() || degree <= all - degree) {
        return average(direct);
    }
    Average result = average(majorana_string_times_parity(string, state().sites()));
    result.value *= static_cast<Real>(*state().parity());
    return result;
}

template <class Scalar>
Average WickState<Scalar>::average(const MajoranaString& string) {
    const std::size_t n = string.indices.size();
    if (n % 2 == 1) {
        return {0.0L, 0.0L};
    }
    Average result = n <= 4                ? short_pfaffian(string.indices)
                     : state().bipartite() ? bipartite_pfaffian(string.indices)
                                           : pfaffian_of(string.indices);
    result.value *= std::complex<Real>(string.phase()) * minus_i_to(n / 2);
    return result;
}

/// `frobenius`: of E.
template <class Scalar>
Average WickState<Scalar>::bounded(std::complex<Real> value,
                                   Real frobenius,
                                   std::size_t majoranas) const {
    const Real n = static_cast<Real>(majoranas);
    const Real growth = std::exp((n - 1) * std::log1p(frobenius));
    const Real error =
        cofactors_ * std::sqrt(n) / 2 * frobenius * growth + 2 * n * real_epsilon * std::abs(value);
    const Real largest = std::abs(value) + cofactors_;  // whatever happened to Gamma
    return {value, error < largest ? error : largest};
}

/// Degree 0, 2 and 4 in extended precision.
template <class Scalar>
Average WickState<Scalar>::short_pfaffian(const std::vector<int>& a) const {
    if (a.empty()) {
        return {1.0L, 0.0L};
    }
    const Real rounding = 8 * real_epsilon * gamma_.largest();
    const Real error = gamma_.state_error(a.size()) + rounding;
    if (a.size() == 2) {
        return bounded(gamma_.element(a[0], a[1]), error, 2);
    }
    const auto element = [&](int i, int j) { return gamma_.element(i, j); };
    const std::complex<Real> value = element(a[0], a[1]) * element(a[2], a[3]) -
                                     element(a[0], a[2]) * element(a[1], a[3]) +
                                     element(a[0], a[3]) * element(a[1], a[2]);
    return bounded(value, error, 4);
}

template <class Scalar>
Matrix<Scalar> WickState<Scalar>::covariance(const std::vector<int>& sites) {
    gamma_.reach(sites.front(), sites.back() + 1);
    std::vector<int> majoranas;
    for (const int site : sites) {
        majoranas.push_back(2 * site);
        majoranas.push_back(2 * site + 1);
    }
    return gamma_.submatrix(majoranas, majoranas);
}

template <class Scalar>
void WickState<Scalar>::prepare(const std::vector<int>& a) {
    if (a.size() > shortest_windowed || gamma_.filled()) {
        gamma_.reach(a.front() / 2, a.back() / 2 + 1);
    }
}

template <class Scalar>
Average WickState<Scalar>::pfaffian_of(const std::vector<int>& a) {
    prepare(a);
    Matrix<Scalar> gamma = gamma_.submatrix(a, a);
    gamma = (gamma - gamma.transpose().eval()) / 2.0;  // to the last bit
    const Factored<Scalar> pf = pfaffian(gamma);
    return bounded(pf.value, gamma_.error(a.size()) + pf.distance, a.size());
}

template <class Scalar>
Average WickState<Scalar>::bipartite_pfaffian(const std::vector<int>& a) {
    std::vector<int> even;
    std::vector<int> odd;
    std::size_t exchanges = 0;
    for (const int index : a) {
        (is_even(index) ? even : odd).push_back(index);
        exchanges += is_even(index) ? odd.size() : 0;
    }
    if (even.size() != odd.size()) {
        return {0.0L, 0.0L};
    }
    prepare(a);
    const Factored<Scalar> det = determinant(gamma_.submatrix(even, odd));
    const std::size_t m = even.size();
    const Real sign = wick_sign(exchanges + m * (m - 1) / 2);
    // the error of G stands in that of Gamma twice
    return bounded(
        sign * det.value, gamma_.error(a.size()) + std::sqrt(2.0L) * det.distance, a.size());
}

template class WickState<double>;
template class WickState<std::complex<double>>;

}  // namespace chainmark::fermion
