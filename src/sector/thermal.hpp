#pragma once

#include <vector>

#include "chainmark/reference/problem.hpp"
#include "chainmark/sector/thermal_spectrum.hpp"

namespace chainmark::sector {

struct Estimate {
    double value = 0.0;
    double bound = 0.0;
};

/// Averages over all levels with the weights p_n = exp(-E_n/T)/Z.
///
/// How errors of levels move them. Let |E'_n - E_n| <= b_n. Then |F' - F| <= b_F with
///   b_F = exp(2 max b / T) sum p_n b_n
/// (F is concave in the levels: sum p'_n (E'_n - E_n) <= F' - F <= sum p_n (E'_n - E_n)), and
///   |p'_n - p_n| <= x_n p_n,   x_n = exp((b_n + b_F)/T) - 1,
/// so that |<X>' - <X>| <= sum p_n |X_n - <X>| x_n for every X that the levels label. These hold
/// for errors of any size; where they are large the bounds are.
///
/// Averages of operators that do not commute with H have the eigenvectors' errors too. The computed
/// eigenpairs are exact for H + dH with ||dH|| <= r, and d<A> = -beta (dH; A) in the Kubo-Mori
/// product (X; Y) = int_0^1 <rho^s X rho^-s Y>_c ds. It obeys (X; Y)^2 <= (X; X)(Y; Y) and
/// (X; X) <= ||X||^2; splitting off a single lowest level of weight 1 - q with a gap g gives
/// beta (X; X) <= ||X||^2 (4 beta q + 2/g), which stays finite as T -> 0. First order in dH.
class Thermal {
public:
    Thermal(const ThermalSpectrum& spectrum, const Problem& problem);

    Estimate free_energy() const;    ///< -T ln Z
    Estimate energy() const;         ///< sum p_n E_n
    Estimate entropy() const;        ///< (E - F)/T
    Estimate specific_heat() const;  ///< sum p_n (E_n - E)^2 / T^2

    /// <M> and <M^2> - <M>^2 of M = sum_j Sz_j from the labels. Needs Sz conserved.
    Estimate magnetization() const;
    Estimate magnetization_variance() const;

    /// <A> of observables the spectrum was made for.
    Average average(const Observable& observable) const;

    /// int_0^beta <M(-i tau) M> dtau - beta <M>^2
    ///   = sum_nm |<n|M|m>|^2 (p_n - p_m)/(E_m - E_n) - beta <M>^2,   p_n beta where E_m = E_n,
    /// from pairs of levels in the same block. Distant pairs are summed once for all temperatures,
    ///   2 sum_n p_n sum_m |<n|M|m>|^2/(E_m - E_n),
    /// near ones with (1 - exp(-x))/x, x = (E_m - E_n)/T.
    Estimate response() const;

private:
    struct Member {
        double energy;  ///< above the lowest level
        double weight;  ///< p_n of one copy, times copies
        double bound;
    };

    void weigh(const Problem& problem);
    void bound_errors();
    double excess(const Member& member) const;  ///< x_n
    template <class Value>
    Estimate labelled(Value&& value) const;  ///< average of value(family, member)

    const ThermalSpectrum& spectrum_;
    double temperature_;
    bool inversion_;                            ///< whether the state is invariant under it
    std::vector<std::vector<Member>> members_;  ///< by family
    double lowest_ = 0.0;                       ///< with everything
    double log_sum_ = 0.0;                      ///< ln sum exp(-(E - lowest)/T)
    double excitation_ = 0.0;                   ///< <E> - lowest
    double free_bound_ = 0.0;
    double weights_ = 0.0;   ///< bounds sum |p'_n - p_n|
    double rotation_ = 0.0;  ///< bounds |d<A>| / ||A|| from the eigenvectors
    double response_ = 0.0;  ///< bounds beta (X; X) / ||X||^2
    double residual_ = 0.0;
};

}  // namespace chainmark::sector
