#include "chainmark/fermion/thermal.hpp"

#include <algorithm>
#include <cmath>

#include "chainmark/base/error.hpp"
#include "chainmark/fermion/thermal_response.hpp"

namespace chainmark::fermion {
namespace {

OccupiedModes occupied_modes(const ThermalClass& own, Real temperature) {
    std::vector<ModeWeight> weights;
    for (std::size_t k = 0; k < own.energy.size(); ++k) {
        const Real sz = own.field.diagonal[k];
        weights.push_back({std::abs(own.energy[k]), own.energy[k] < 0 ? -sz : sz});
    }
    return {weights, temperature};
}

/// sum_k diagonal_k (n_k - 1/2) in the vacuum.
Real vacuum_sz(const ThermalClass& own) {
    CompensatedSum sum;
    for (std::size_t k = 0; k < own.energy.size(); ++k) {
        sum.add((own.energy[k] < 0 ? 0.5L : -0.5L) * own.field.diagonal[k]);
    }
    return sum.value();
}

}  // namespace

Thermal::Thermal(const ThermalModes& modes, double temperature)
    : modes_(modes),
      temperature_(temperature),
      occupied_{occupied_modes(modes.classes[0], temperature_),
                occupied_modes(modes.classes[1], temperature_)} {
    lowest_ = std::min(lowest_of(0), lowest_of(1));
    std::array<Real, 2> log_weight{};
    std::array<Moments, 2> energy;
    std::array<Moments, 2> sz;
    for (std::size_t c = 0; c < 2; ++c) {
        const bool odd = modes.classes[c].odd();
        const Real above = lowest_of(c) - lowest_;
        log_weight[c] = occupied_[c].log_sum(odd) - above / temperature_;
        energy[c] = occupied_[c].energy(odd);
        energy[c].mean += above;
        sz[c] = occupied_[c].sz(odd);
        sz[c].mean += vacuum_sz(modes.classes[c]);
    }
    const Real most = std::max(log_weight[0], log_weight[1]);
    const Real ratio = std::exp(std::min(log_weight[0], log_weight[1]) - most);
    log_sum_ = most + std::log1p(ratio);
    for (std::size_t c = 0; c < 2; ++c) {
        weight_[c] = std::exp(log_weight[c] - most) / (1 + ratio);
    }
    energy_ = mixed(energy[0], weight_[0], energy[1], weight_[1]);
    sz_ = mixed(sz[0], weight_[0], sz[1], weight_[1]);
}

Real Thermal::lowest_of(std::size_t c) const {
    const ThermalClass& own = modes_.classes[c];
    return own.vacuum_energy + (own.odd() ? occupied_[c].cheapest() : 0.0L);
}

bool Thermal::resolved() const {
    constexpr Real weak = 1e-2L;
    return modes_.level_error < weak * temperature_;
}

Real Thermal::weight_error() const {
    return std::expm1(2 * modes_.level_error / temperature_);
}

Real Thermal::rounding() const {
    return real_epsilon * (16 * static_cast<Real>(modes_.sites) + 64);
}

Bounded Thermal::free_energy() const {
    return {lowest_ - temperature_ * log_sum_,
            modes_.level_error + rounding() * temperature_ * (1 + log_sum_) +
                4 * real_epsilon * std::abs(lowest_)};
}

Bounded Thermal::energy() const {
    const Real value = lowest_ + energy_.mean;
    return {value,
            modes_.level_error + weight_error() * std::sqrt(energy_.variance) +
                rounding() * energy_.mean + 4 * real_epsilon * std::abs(lowest_)};
}

Bounded Thermal::entropy() const {
    const Real value = log_sum_ + energy_.mean / temperature_;
    const Real scaled = modes_.level_error / temperature_;
    const Real spread = std::sqrt(energy_.variance) / temperature_ + scaled;
    return {value, scaled * std::exp(scaled) * spread + 2 * rounding() * (1 + value)};
}

Bounded Thermal::specific_heat() const {
    const Real value = energy_.variance / (temperature_ * temperature_);
    const Real scaled = modes_.level_error / temperature_;
    const Real q = weight_error();
    return {value,
            (q + q * q) * value + 2 * scaled * std::sqrt((1 + q) * value) + scaled * scaled +
                2 * rounding() * value};
}

Real Thermal::norm_of_sz() const {
    return static_cast<Real>(modes_.sites) / 2;
}

Real Thermal::softness() const {
    const Real beta = 1 / temperature_;
    const Real gap = modes_.gap - 4 * modes_.level_error;
    if (gap <= 0) {
        return beta;
    }
    const Real above = -std::expm1(-log_sum_) * (1 + weight_error());
    return std::min(beta, 4 * beta * above + 2 / gap);
}

Real Thermal::relative_error() const {
    return modes_.level_error * softness() * (1 + weight_error());
}

Bounded Thermal::magnetization() const {
    const Real own = rounding() * norm_of_sz();
    if (modes_.sz_conserved) {
        return {sz_.mean, weight_error() * std::sqrt(sz_.variance) + own};
    }
    const Real form = std::max(modes_.classes[0].field.error, modes_.classes[1].field.error);
    return {sz_.mean, relative_error() * norm_of_sz() + form + own};
}

Bounded Thermal::conserved_response() const {
    const Real value = sz_.variance / temperature_;
    const Real q = weight_error();
    return {value, (q + q * q + 2 * rounding()) * value};
}

Bounded Thermal::response() const {
    if (modes_.sz_conserved) {
        return conserved_response();
    }
    Real value = sz_.variance / temperature_;
    Real square = sz_.variance;  // <(M - <M>)^2>
    Real form = 0.0L;
    Real log_even = 0.0L;  // rounded in every step
    for (std::size_t c = 0; c < 2; ++c) {
        const MixedResponse mixed_part = mixed_response(modes_.classes[c], occupied_[c]);
        value += weight(c) * mixed_part.response;
        square += weight(c) * mixed_part.square;
        form = std::max(form, modes_.classes[c].field.error);
        log_even = std::max(log_even, occupied_[c].sums().log_even);
    }
    // The third derivative of -T ln Z, with d = dH: |(d; M; M)| <= |d| <(M - <M>)^2>, or with the
    // lowest level split off |d| |M - <M>| <(M - <M>)^2>^(1/2) per two factors of softness.
    const Real deviation = std::sqrt(square);
    const Real reach = 2 * norm_of_sz();
    const Real soft = softness();
    const Real hot = square / (temperature_ * temperature_);
    const Real cold = deviation * reach * soft * soft;
    return {value,
            4 * modes_.level_error * std::min(hot, cold) + 2 * form * soft * deviation +
                4 * rounding() * (1 + log_even) * value};
}

}  // namespace chainmark::fermion
