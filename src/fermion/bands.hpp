#pragma once

#include <memory>
#include <optional>

#include "chainmark/fermion/infinite_chain.hpp"
#include "chainmark/fermion/quadrature.hpp"

/// Single-particle energies of infinite chains.
///
/// With the Majorana operators a_j = c+_j + c_j and b_j = c+_j - c_j every chain here is
///   H = (1/2) sum_ij b_i M_ij a_j + constant,   M real, invariant under translation by a cell.
/// The energies are the singular values of its symbol M(k) (with a sign where Sz is conserved), and
///   <b_i a_j> = -[M (M^T M)^{-1/2} tanh((M^T M)^{1/2}/2T)]_ij,  <a_i a_j> = -<b_i b_j> = delta_ij.
/// Source: E. Lieb, T. Schultz, D. Mattis, Ann. Phys. (NY) 16, 407 (1961).
namespace chainmark::fermion {

/// Energy e of a fermion with momentum k, with its first and second derivative in the field h.
struct Mode {
    Real energy = 0.0L;
    Real slope = 0.0L;
    Real curvature = 0.0L;
};

/// <b_i a_j> = -(1/pi) int_0^pi [even cos(nk) + odd sin(nk)] dk, n the cells between i and j.
struct Symbol {
    Real even = 0.0L;
    Real odd = 0.0L;
};

class Bands {
public:
    Bands() = default;
    Bands(const Bands&) = delete;
    Bands& operator=(const Bands&) = delete;
    virtual ~Bands() = default;

    /// Sites of a cell, and bands; k belongs to the translation by one cell.
    virtual int cell() const = 0;
    virtual Mode mode(int band, const Node& node) const = 0;

    /// From place `from` of a cell to place `to` of another; nothing: the ground state.
    virtual Symbol symbol(int from,
                          int to,
                          const Node& node,
                          const std::optional<Real>& temperature) const = 0;

    /// Smallest |e|.
    virtual Real smallest_energy() const = 0;

    /// Distance of the nearest complex k with e = 0 from the real axis, real ones left out.
    virtual std::optional<Real> complex_zero() const = 0;

    /// Momenta where e vanishes, and those next to which it may be small.
    virtual std::vector<Real> fermi_points() const = 0;

    /// How many roundings of e's scale a rounding of the couplings costs relative to e.
    virtual Real condition() const = 0;

    virtual const InfiniteChain& chain() const = 0;

    Features features(const std::optional<Real>& temperature) const;
};

std::unique_ptr<Bands> make_bands(const InfiniteChain& chain);

/// sign(e), 0 at e = 0, in the ground state; tanh(e/2T) with a temperature.
Real polarization(Real energy, const std::optional<Real>& temperature);

}  // namespace chainmark::fermion
