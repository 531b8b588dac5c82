#include "chainmark/fermion/modes.hpp"

#include <algorithm>
#include <cmath>
#include <numeric>

#include "chainmark/base/numerics.hpp"

namespace chainmark::fermion {
namespace {

using Complex = std::complex<Real>;

/// Rounding of amplitude * cos(angle) + onsite, where the angle was put together from parts of the
/// given size.
Real closed_form_rounding(Real amplitude, Real angle, Real onsite) {
    return real_epsilon * (8 * std::abs(amplitude) * (1 + std::abs(angle)) + std::abs(onsite));
}

ModeSet uniform_ring(const ChainForm& form, UpCount up_count) {
    const int sites = form.length();
    const Complex hop = Complex(form.uniform_hop());
    const Real onsite = form.onsite.front();
    // A twist of exactly pi is half a step of the grid, which keeps k and -k equal to the last bit.
    const bool half_turn = form.chain.twist == pi;
    const std::int64_t half_steps = (up_count == UpCount::even ? 1 : 0) + (half_turn ? 1 : 0);
    const Real shift = half_turn ? 0.0L : static_cast<Real>(form.chain.twist) / sites;
    const Complex turned = 2.0L * hop * Complex(std::cos(shift), std::sin(shift));
    ModeSet modes;
    for (int m = 0; m < sites; ++m) {
        const std::int64_t p = 2 * static_cast<std::int64_t>(m) + half_steps;
        // 2|t| cos(k + arg t) = Re(2 t exp(ik)).
        modes.energy.push_back(turned.real() * cos_pi(p, sites) - turned.imag() * sin_pi(p, sites) +
                               onsite);
    }
    modes.orbitals = plane_waves(sites);
    modes.rounding = closed_form_rounding(2 * std::abs(hop), shift, onsite);
    modes.distance = form.wrap_deviation();
    modes.mode_error = modes.rounding + modes.distance;
    return modes;
}

ModeSet uniform_open(const ChainForm& form) {
    const int sites = form.length();
    const Real amplitude = 2 * std::abs(Complex(form.uniform_hop()));
    const Real onsite = form.onsite.front();
    ModeSet modes;
    for (int m = 1; m <= sites; ++m) {
        modes.energy.push_back(amplitude * cos_pi(m, sites + 1) + onsite);
    }
    modes.orbitals = standing_waves(sites);
    modes.rounding = closed_form_rounding(amplitude, 0.0L, onsite);
    modes.mode_error = modes.rounding;
    return modes;
}

}  // namespace

Real ModeSet::sum_error(Real field) const {
    // The sum of the lowest modes is compensated; a level adds or drops at most a few dozen more.
    constexpr Real additions = 64;
    const Real size = weight + std::abs(field) * static_cast<Real>(length());
    return static_cast<Real>(length()) * rounding + distance + additions * real_epsilon * size;
}

void finish(ModeSet& modes) {
    const std::vector<Real> unsorted = std::move(modes.energy);
    modes.label.resize(unsorted.size());
    std::iota(modes.label.begin(), modes.label.end(), 0);
    const auto energy_of = [&](int label) { return unsorted[static_cast<std::size_t>(label)]; };
    std::stable_sort(modes.label.begin(), modes.label.end(), [&](int a, int b) {
        return energy_of(a) < energy_of(b);
    });
    modes.energy.clear();
    modes.lowest = {0.0L};
    modes.label_sum = {0};
    CompensatedSum sum;
    for (const int label : modes.label) {
        const Real energy = energy_of(label);
        modes.energy.push_back(energy);
        modes.weight += std::abs(energy);
        sum.add(energy);
        modes.lowest.push_back(sum.value());
        modes.label_sum.push_back(modes.label_sum.back() + label);
    }
}

ModeSet solve_modes(const ChainForm& form, UpCount up_count, const Context& context) {
    poll(context);
    ModeSet modes = form.kind == FormKind::uniform_ring ? uniform_ring(form, up_count)
                    : form.kind == FormKind::uniform_open
                        ? uniform_open(form)
                        : solve_matrix_modes(form, up_count, context);
    finish(modes);
    return modes;
}

}  // namespace chainmark::fermion
