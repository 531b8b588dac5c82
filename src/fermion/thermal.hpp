#pragma once

#include <array>
#include <memory>

#include "chainmark/fermion/answers.hpp"
#include "chainmark/fermion/gaussian_state.hpp"
#include "chainmark/fermion/parity_sums.hpp"

/// Chains of free fermions at a temperature, exact at finite L.
///
/// The states of parity P = p are those of the class p with that parity of N, so
///   Z = sum_{p = +-1} sum over states of the class p with (-1)^N = p of exp(-E/T):
/// written with projectors (1 + p P)/2 these are four traces on a ring, two classes with and
/// without P. On an open chain both classes have the same modes, and the projectors add up to 1.
/// Using one class without projector counts 2^L states of which half do not exist.
///
/// Modes of a class have signed energies eps_k; its vacuum is the state of lowest energy, all
/// negative ones occupied, and excitations cost |eps_k|. Where the vacuum's parity is not p the
/// number of excitations is odd, otherwise even; both sums are taken without a subtraction
/// (parity_sums.hpp).
namespace chainmark::fermion {

/// One parity class.
struct ThermalClass {
    int parity = 1;             ///< p
    int vacuum_parity = 1;      ///< of the state of lowest energy of all occupations
    Real vacuum_energy = 0.0L;  ///< its energy, with everything
    std::vector<Real> energy;   ///< signed, by mode of the frame
    FieldForm field;            ///< sum_j Sz_j in these modes
    std::shared_ptr<const ModeFrame> frame;

    bool odd() const { return parity != vacuum_parity; }
};

struct ThermalModes {
    int sites = 0;
    std::array<ThermalClass, 2> classes;
    bool shared = false;        ///< both classes have the same modes
    bool sz_conserved = false;  ///< field.mixed is then empty
    Real level_error = 0.0L;    ///< on the energy of every state
    Real gap = 0.0L;            ///< second level minus lowest, 0 where not known
};

/// All levels in one sum. Errors: the levels, the modes being exact for H' with |H - H'| <= d, are
/// off by at most d each. With b = 1/T weights then change by factors between exp(-2 b d) and
/// exp(2 b d), at most by q = exp(2 b d) - 1 relatively, for any observable X_n of the levels
///   |<X>' - <X>| <= q sd(X),   |Var' X - Var X| <= (q + q^2) Var X,
/// and where X = E moves itself by d: |E' - E| <= d + q sd, |F' - F| <= d, and
///   |S' - S| <= b^2 d e^(b d) (sd + d),   since dS = -b^2 Cov(E, dE).
class Thermal {
public:
    /// T > 0. The modes must outlive it.
    Thermal(const ThermalModes& modes, double temperature);

    /// False where T is not far above the error of the levels: then only F is known.
    bool resolved() const;

    Bounded free_energy() const;    ///< -T ln Z
    Bounded energy() const;         ///< E
    Bounded entropy() const;        ///< (E - F)/T, in nats
    Bounded specific_heat() const;  ///< (<H^2> - E^2)/T^2

    /// <M>, M = sum_j Sz_j.
    Bounded magnetization() const;

    /// int_0^b <M(-i tau) M> dtau - b <M>^2, the isothermal response of M; b (<M^2> - <M>^2) where
    /// M commutes with H.
    Bounded response() const;

    /// Bound on |d<A>| / |A| of any observable from the error of H: with the Kubo-Mori product
    /// d<A> = -b (dH; A), b (X; X) <= |X|^2 min(b, 4 b q_0 + 2/g), q_0 the weight of the states
    /// above a single lowest level and g their distance.
    Real relative_error() const;

    Real temperature() const { return temperature_; }
    const ThermalModes& modes() const { return modes_; }
    const OccupiedModes& occupied(std::size_t c) const { return occupied_[c]; }
    Real weight(std::size_t c) const { return weight_[c]; }  ///< of a class

private:
    Real lowest_of(std::size_t c) const;
    Real weight_error() const;  ///< q
    Real rounding() const;      ///< relative, of sums over modes
    Real softness() const;      ///< bounds b (X; X) / |X|^2
    Real norm_of_sz() const;
    Bounded conserved_response() const;

    const ThermalModes& modes_;
    Real temperature_;
    std::array<OccupiedModes, 2> occupied_;
    Real lowest_ = 0.0L;            ///< lowest level
    Real log_sum_ = 0.0L;           ///< ln sum exp(-(E - lowest)/T)
    std::array<Real, 2> weight_{};  ///< of the classes
    Moments energy_;                ///< above `lowest`
    Moments sz_;
};

}  // namespace chainmark::fermion
