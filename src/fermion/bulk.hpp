#pragma once

#include <memory>
#include <optional>

#include "chainmark/fermion/bands.hpp"

/// Averages of an infinite chain, per site, as integrals over its bands.
namespace chainmark::fermion {

/// In the ground state, e0 = constant - (1/2 pi) int_0^pi |e| dk (the mean over bands), and its
/// derivatives in the field. Closed forms where there are some: `closed` tells.
struct GroundValue {
    Bounded value;
    bool closed = false;
};

GroundValue ground_energy_per_site(const Bands& bands);

/// m = -de0/dh.
GroundValue ground_magnetization(const Bands& bands);

/// dm/dh away from critical points, where it diverges.
GroundValue ground_susceptibility(const Bands& bands);

/// At T > 0, with x = e/2T and the mean over bands:
///   f = constant - (T/pi) int_0^pi ln(2 cosh x) dk,  s = (1/pi) int [ln(2 cosh x) - x tanh x],
///   c = (1/pi) int x^2/cosh^2 x,  m = -df/dh,  chi = -d2f/dh2.
/// Source: S. Katsura, Phys. Rev. 127, 1508 (1962).
class BulkThermal {
public:
    BulkThermal(const Bands& bands, Real temperature) : bands_(bands), temperature_(temperature) {}

    Bounded free_energy() const;
    Bounded energy() const;
    Bounded entropy() const;
    Bounded specific_heat() const;
    Bounded magnetization() const;
    Bounded susceptibility() const;

private:
    template <class Function>
    Bounded mean(Function&& f, Real condition) const;

    const Bands& bands_;
    Real temperature_;
};

}  // namespace chainmark::fermion
