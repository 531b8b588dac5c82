#include "chainmark/fermion/modes.hpp"

#include <algorithm>
#include <cmath>
#include <utility>

#include "chainmark/fermion/closed_frames.hpp"

namespace chainmark::fermion {

Real ModeSet::sum_error(Real field) const {
    // The sum of the lowest modes is compensated; a level adds or drops at most a few dozen more.
    constexpr Real additions = 64;
    const Real size = weight + std::abs(field) * static_cast<Real>(length());
    return static_cast<Real>(length()) * rounding + distance + additions * real_epsilon * size;
}

void finish(ModeSet& modes) {
    std::vector<std::pair<Real, int>> sorted;
    sorted.reserve(modes.energy.size());
    for (const Real energy : modes.energy) {
        sorted.emplace_back(energy, static_cast<int>(sorted.size()));
    }
    std::sort(sorted.begin(), sorted.end());
    modes.energy.clear();
    modes.lowest = {0.0L};
    modes.label_sum = {0};
    CompensatedSum sum;
    for (const auto& [energy, label] : sorted) {
        modes.energy.push_back(energy);
        modes.label.push_back(label);
        modes.weight += std::abs(energy);
        sum.add(energy);
        modes.lowest.push_back(sum.value());
        modes.label_sum.push_back(modes.label_sum.back() + label);
    }
    modes.trace = sum.value();
}

ModeSet open_modes(const QuadraticForm& form) {
    const int sites = form.length();
    const std::complex<double> hop = form.bonds.empty() ? 0.0 : form.bonds.front().hop;
    const Real amplitude = 2 * std::abs(std::complex<Real>(hop));
    const Real onsite = form.onsite.front();
    ModeSet modes;
    for (int m = 1; m <= sites; ++m) {
        modes.energy.push_back(amplitude * cos_pi(m, sites + 1) + onsite);
    }
    modes.frame = standing_waves(sites, hop);
    modes.rounding = real_epsilon * (8 * amplitude + std::abs(onsite));
    modes.mode_error = modes.rounding;
    return modes;
}

ModeSet solve_modes(const QuadraticForm& form, UpCount up_count, const Context& context) {
    poll(context);
    ModeSet modes = form.kind == FormKind::uniform_ring   ? ring_modes(form, up_count)
                    : form.kind == FormKind::uniform_open ? open_modes(form)
                                                          : matrix_modes(form, up_count, context);
    finish(modes);
    if (form.conserves_number()) {
        // Known better than by adding up the modes.
        CompensatedSum sum;
        for (int j = 0; j < form.length(); ++j) {
            sum.add(form.field_at(j, up_count));
        }
        modes.trace = sum.value();
    }
    return modes;
}

}  // namespace chainmark::fermion
