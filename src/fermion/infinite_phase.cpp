#include "chainmark/fermion/infinite_phase.hpp"

#include <algorithm>
#include <cmath>

namespace chainmark::fermion {
namespace {

Phase partly_filled(const InfiniteChain& chain) {
    const Real field = std::abs(chain.field);
    const Real top = chain.band_top();
    const Real bottom = chain.band_bottom();
    if (coincide(field, top, top)) {
        return Phase::saturation_point;
    }
    if (field > top) {
        return chain.field > 0 ? Phase::saturated_up : Phase::saturated_down;
    }
    if (bottom > 0.0L && coincide(field, bottom, top)) {
        return Phase::gap_edge;
    }
    return field < bottom ? Phase::dimerized : Phase::critical;
}

Phase with_pairing(const InfiniteChain& chain) {
    const Real field = std::abs(chain.field);
    const Real border = std::abs(chain.hopping());
    if (coincide(field, border, std::max(std::abs(chain.jx), std::abs(chain.jy)))) {
        return Phase::critical;
    }
    if (field > border) {
        return Phase::disordered;
    }
    return std::abs(chain.jx) > std::abs(chain.jy) ? Phase::ordered_x : Phase::ordered_y;
}

Approach power(Real exponent, bool even_sizes_only) {
    return {.law = Approach::Law::power,
            .exponent = static_cast<double>(exponent),
            .even_sizes_only = even_sizes_only};
}

Approach envelope(Real exponent) {
    return {.law = Approach::Law::envelope, .exponent = static_cast<double>(exponent)};
}

/// A conformally invariant chain: central charge c, velocity v, lowest excitation of dimension x.
///   E0/L = e - pi c v/(6 L^2) on a ring, e + surface/L - pi c v/(24 L^2) with free ends,
///   gap = 2 pi v x/L on a ring.
struct Conformal {
    Real central_charge;
    Real velocity;
    Real dimension;
};

std::optional<Approach> approach_of(const Conformal& theory,
                                    bool ring,
                                    QuantityId id,
                                    bool even_sizes_only) {
    if (id == QuantityId::ground_energy_per_site) {
        Approach approach = power(ring ? 2 : 1, even_sizes_only);
        const Real factor = (ring ? -6 : -24) / (real_pi * theory.velocity);
        approach.amplitude = {.name = "central_charge",
                              .factor = static_cast<double>(factor),
                              .power = 2,
                              .surface = !ring,
                              .expected = static_cast<double>(theory.central_charge)};
        return approach;
    }
    if (ring && id == QuantityId::gap) {
        Approach approach = power(1, even_sizes_only);
        approach.amplitude = {.name = "velocity",
                              .factor = static_cast<double>(1 / (2 * real_pi * theory.dimension)),
                              .power = 1,
                              .expected = static_cast<double>(theory.velocity)};
        return approach;
    }
    // (c/3) ln[(L/pi) sin(pi l/L)] on a ring: the size enters as (l/L)^2.
    // Source: P. Calabrese, J. Cardy, J. Stat. Mech. P06002 (2004).
    return ring && id == QuantityId::entanglement_entropy ? std::optional(power(2, true))
                                                          : std::nullopt;
}

/// A partly filled band: c = 1. At h = 0 the filling of even chains is the same for all sizes; off
/// h = 0 it moves in steps of 1/L, and distances oscillate below an envelope.
std::optional<Approach> approach_of_band(const InfiniteChain& chain, bool ring, QuantityId id) {
    if (chain.field == 0.0L) {
        // The lowest excitation adds a fermion: x = 1/4.
        return chain.alternating
                   ? std::nullopt
                   : approach_of(Conformal{1.0L, chain.band_top(), 0.25L}, ring, id, false);
    }
    if (id == QuantityId::ground_energy_per_site) {
        return envelope(ring ? 2 : 1);
    }
    return id == QuantityId::magnetization ? std::optional(envelope(1)) : std::nullopt;
}

/// The border between ordered and disordered phases: c = 1/2, velocity |Y| of e = |Y| k; the lowest
/// excitation lies in the other parity class, x = 1/8.
std::optional<Approach> approach_of_border(const InfiniteChain& chain, bool ring, QuantityId id) {
    if (chain.hopping() == 0.0L) {
        return std::nullopt;  // two Fermi points
    }
    return approach_of(Conformal{0.5L, std::abs(chain.pairing()), 0.125L}, ring, id, true);
}

/// With a gap, sums over the momenta of a ring differ from the integral by exp(-L/length), the
/// length the inverse distance of e's zeros from the real axis; free ends add a surface energy.
/// Where the zeros' momenta are neither 0, pi nor pi/2 the difference oscillates besides.
std::optional<Approach> approach_of_gap(const Bands& bands, bool ring, QuantityId id) {
    if (!ring) {
        return id == QuantityId::ground_energy_per_site ? std::optional(power(1, true))
                                                        : std::nullopt;
    }
    const bool smooth = id == QuantityId::ground_energy_per_site ||
                        (id == QuantityId::magnetization && !bands.chain().conserves_sz());
    const InfiniteChain& chain = bands.chain();
    const bool oscillates = !chain.alternating && chain.field != 0.0L &&
                            chain.field * chain.field < chain.jx * chain.jy;
    const std::optional<Real> zero = bands.complex_zero();
    if (!smooth || !zero || oscillates) {
        return std::nullopt;
    }
    return Approach{.law = Approach::Law::exponential,
                    .decay_length = static_cast<double>(static_cast<Real>(bands.cell()) / *zero),
                    .even_sizes_only = true};
}

/// A border of phases on the axis of |h|.
struct Border {
    Real field;
    bool saturation;  ///< Sz is conserved: a band begins or ends to be filled
};

std::optional<Border> nearest_border(const InfiniteChain& chain) {
    if (!chain.conserves_sz()) {
        return Border{std::abs(chain.hopping()), false};
    }
    const Real bottom = chain.band_bottom();
    const Real top = chain.band_top();
    const Real field = std::abs(chain.field);
    const bool lower = bottom > 0.0L && std::abs(field - bottom) < std::abs(field - top);
    return top == bottom ? std::nullopt : std::optional(Border{lower ? bottom : top, true});
}

}  // namespace

Phase phase_of(const InfiniteChain& chain) {
    if (chain.is_decoupled() && chain.field == 0.0L) {
        return Phase::trivial;
    }
    return chain.conserves_sz() ? partly_filled(chain) : with_pairing(chain);
}

std::string to_string(Phase phase) {
    switch (phase) {
        case Phase::trivial:
            return "";
        case Phase::critical:
            return "critical";
        case Phase::saturation_point:
            return "saturation_point";
        case Phase::saturated_up:
            return "saturated_up";
        case Phase::saturated_down:
            return "saturated_down";
        case Phase::ordered_x:
            return "ordered_x";
        case Phase::ordered_y:
            return "ordered_y";
        case Phase::disordered:
            return "disordered";
        case Phase::dimerized:
            return "dimerized";
        case Phase::gap_edge:
            return "gap_edge";
    }
    return "";
}

Bounded gap_of(const Bands& bands) {
    constexpr Real few = 16 * real_epsilon;
    const Phase phase = phase_of(bands.chain());
    const Real smallest = bands.smallest_energy();
    switch (phase) {
        case Phase::trivial:
        case Phase::critical:
        case Phase::saturation_point:
        case Phase::gap_edge:
            return {0.0L, smallest};  // within rounding of the border
        case Phase::ordered_x:
        case Phase::ordered_y:
            return {2 * smallest, few * bands.chain().scale()};
        default:
            return {smallest, few * bands.chain().scale()};
    }
}

bool at_flat_band(const InfiniteChain& chain) {
    const Phase phase = phase_of(chain);
    return chain.alternating && chain.band_bottom() == chain.band_top() &&
           (phase == Phase::saturation_point || phase == Phase::gap_edge);
}

std::optional<Approach> approach_of(const Bands& bands, const Chain& chain, QuantityId id) {
    if (chain.is_ring() && chain.twist != 0.0) {
        return std::nullopt;
    }
    const bool ring = chain.is_ring();
    switch (phase_of(bands.chain())) {
        case Phase::critical:
            return bands.chain().conserves_sz() ? approach_of_band(bands.chain(), ring, id)
                                                : approach_of_border(bands.chain(), ring, id);
        case Phase::ordered_x:
        case Phase::ordered_y:
        case Phase::disordered:
        case Phase::dimerized:
            return approach_of_gap(bands, ring, id);
        default:
            return std::nullopt;
    }
}

std::optional<CriticalLaw> critical_law(const Bands& bands, QuantityId id) {
    const InfiniteChain& chain = bands.chain();
    const std::optional<Border> border = nearest_border(chain);
    const Real field = std::abs(chain.field);
    if (!border || border->field == 0.0L || coincide(field, border->field, border->field)) {
        return std::nullopt;
    }
    CriticalLaw law{.field = static_cast<double>(border->field),
                    .distance = static_cast<double>(std::abs(field - border->field)),
                    .below = field < border->field};
    const bool gapless = phase_of(chain) == Phase::critical;
    if (id == QuantityId::gap && !gapless) {
        law.exponent = 1.0;  // z nu = 1 with pairing; z = 2, nu = 1/2 at the edge of a band
        return law;
    }
    if (!border->saturation || !gapless) {
        return std::nullopt;
    }
    // The filled part of a band counts the square root of the distance from its quadratic edge.
    if (id == QuantityId::magnetization) {
        const bool upper = border->field == chain.band_top();
        law.at_point = upper ? std::copysign(0.5, static_cast<double>(chain.field)) : 0.0;
        law.exponent = 0.5;
        return law;
    }
    if (id == QuantityId::susceptibility) {
        law.exponent = -0.5;
        return law;
    }
    return std::nullopt;
}

}  // namespace chainmark::fermion
