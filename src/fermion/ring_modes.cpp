#include <algorithm>
#include <cmath>

#include "chainmark/base/numerics.hpp"
#include "chainmark/fermion/closed_frames.hpp"
#include "chainmark/fermion/modes.hpp"

namespace chainmark::fermion {
namespace {

using Complex = std::complex<Real>;

MomentumGrid grid_of(const QuadraticForm& form, UpCount up_count) {
    // A twist of exactly pi is half a step of the grid, which keeps k and -k equal to the last bit.
    const bool half_turn = form.chain.twist == pi;
    return {.sites = form.length(),
            .half_steps = (up_count == UpCount::even ? 1 : 0) + (half_turn ? 1 : 0),
            .shift = half_turn
                         ? 0.0L
                         : static_cast<Real>(form.chain.twist) / static_cast<Real>(form.length())};
}

/// The bonds of one site with the phases of the grid's shift.
struct Range {
    std::int64_t range;
    Complex twice_hop;  ///< 2 hop exp(i shift range)
    Complex twice_pair;
};

std::vector<Range> ranges_of(const QuadraticForm& form, Real shift) {
    std::vector<Range> ranges;
    for (const Bond& bond : form.bonds_of_first_site()) {
        const Real angle = shift * static_cast<Real>(bond.range);
        ranges.push_back({bond.range,
                          2.0L * Complex(bond.hop) * Complex(std::cos(angle), std::sin(angle)),
                          2.0L * Complex(bond.pair)});
    }
    return ranges;
}

/// The even and odd part of e_k and delta_k.
struct Dispersion {
    Real even;
    Real odd = 0.0L;
    Complex pair = {};
};

Dispersion dispersion(const std::vector<Range>& ranges, Real onsite, std::int64_t p, int sites) {
    Dispersion at_k{.even = 0.0L};
    for (const Range& own : ranges) {
        // 2 Re(hop exp(ikr)) = 2 Re hop cos kr - 2 Im hop sin kr.
        at_k.even += own.twice_hop.real() * cos_pi(p * own.range, sites);
        if (own.twice_hop.imag() != 0.0L || own.twice_pair != 0.0L) {
            const Real sine = sin_pi(p * own.range, sites);
            at_k.odd -= own.twice_hop.imag() * sine;
            at_k.pair += Complex(0.0L, sine) * own.twice_pair;
        }
    }
    at_k.even += onsite;
    return at_k;
}

/// Bound on the rounding of every part of `Dispersion`.
Real dispersion_rounding(const std::vector<Range>& ranges, Real onsite, Real shift) {
    Real size = std::abs(onsite) / 8;
    for (const Range& own : ranges) {
        const Real angle = std::abs(shift) * static_cast<Real>(own.range);
        size += std::abs(own.twice_hop) * (1 + angle) + std::abs(own.twice_pair);
    }
    return 8 * real_epsilon * size * static_cast<Real>(std::max<std::size_t>(ranges.size(), 1));
}

ModeSet paired_modes(const MomentumGrid& grid, const std::vector<Range>& ranges, Real onsite) {
    ModeSet modes;
    std::vector<PairAngle> angles;
    const Real rounding = dispersion_rounding(ranges, onsite, 0.0L);
    CompensatedSum angle_errors;
    for (int m = 0; m < grid.sites; ++m) {
        const Dispersion at_k = dispersion(ranges, onsite, grid.numerator(m), grid.sites);
        if (grid.partner(m) == m) {
            modes.energy.push_back(at_k.even);
            modes.unpaired.push_back(m);
            angles.push_back({});
            continue;
        }
        const Real size = std::hypot(at_k.even, std::abs(at_k.pair));
        modes.energy.push_back(at_k.odd + size);
        angles.push_back(size == 0.0L
                             ? PairAngle{}
                             : PairAngle{.cosine = at_k.even / size, .sine = at_k.pair / size});
        angle_errors.add(rounding < size ? std::min(2.0L, 4 * rounding / size) : 2.0L);
    }
    const bool real_pairs = std::all_of(ranges.begin(), ranges.end(), [](const Range& own) {
        return own.twice_pair.imag() == 0.0L;
    });
    modes.frame = paired_waves(
        grid, std::move(angles), angle_errors.value() / static_cast<Real>(grid.sites), real_pairs);
    modes.rounding = 4 * rounding;
    return modes;
}

}  // namespace

ModeSet ring_modes(const QuadraticForm& form, UpCount up_count) {
    const MomentumGrid grid = grid_of(form, up_count);
    const std::vector<Range> ranges = ranges_of(form, grid.shift);
    const Real onsite = form.onsite.front();
    ModeSet modes;
    if (form.conserves_number()) {
        for (int m = 0; m < grid.sites; ++m) {
            const Dispersion at_k = dispersion(ranges, onsite, grid.numerator(m), grid.sites);
            modes.energy.push_back(at_k.even + at_k.odd);
        }
        modes.frame = plane_waves(grid);
        modes.rounding = dispersion_rounding(ranges, onsite, grid.shift);
    } else {
        modes = paired_modes(grid, ranges, onsite);
    }
    modes.distance = form.wrap_deviation;
    modes.mode_error = modes.rounding + modes.distance;
    return modes;
}

}  // namespace chainmark::fermion
