#include "chainmark/fermion/thermal_strings.hpp"

#include <algorithm>
#include <cmath>
#include <cstdint>

namespace chainmark::fermion {
namespace {

constexpr int circle_points = 16;
constexpr Real circle_sum = 0.5L;  ///< R sum x
constexpr Real largest_s = (1 + circle_sum) / (1 - circle_sum);
constexpr Real smallest_odd = 0.05L;  ///< odd over even weight from which F(1) - F(-1) is taken
constexpr Real negligible_log = -50.0L;
constexpr Real largest_log = 5000.0L;  ///< far from overflow
constexpr Real smallest_tanh = 1e-2L;  ///< below, modes count as without energy

/// Bound on |F(-1)/F(1)| of a string of degree d is the exponential of entry d/2.
std::vector<Real> tanh_products(const std::vector<Real>& polarization) {
    std::vector<Real> logs;
    for (const Real s : polarization) {
        logs.push_back(std::log(std::abs(s)));
    }
    std::sort(logs.begin(), logs.end());
    std::vector<Real> products(logs.size() + 1, 0.0L);
    for (std::size_t n = logs.size(); n > 0; --n) {
        products[n - 1] = products[n] + logs[n - 1];
    }
    return products;
}

}  // namespace

ClassStrings::ClassStrings(const ThermalClass& own, const OccupiedModes& occupied, bool project)
    : own_(own),
      occupied_(occupied),
      project_(project),
      circle_(project && own.odd() && occupied.odd_over_even() < smallest_odd) {
    std::vector<Real> s;
    for (const Real energy : own.energy) {
        const Real x = std::exp(-std::abs(energy) / occupied.temperature());
        const Real size = -std::expm1(-std::abs(energy) / occupied.temperature()) / (1 + x);
        s.push_back(energy < 0 ? -size : size);
        relative_.push_back(occupied.weight_over_cheapest(std::abs(energy)));
        cheapest_total_ += relative_.back();
    }
    for (Real& share : relative_) {
        share /= cheapest_total_;
    }
    log_tanh_ = tanh_products(s);
    if (project && !circle_) {
        invert(s);
    }
    state_ = own.frame->filled(std::move(s));
    wick_ = std::make_unique<WickState<double>>(*state_);
    if (circle_) {
        sample_circle();
    }
}

Average ClassStrings::average(const PauliString& string) {
    if (circle_) {
        return on_circle(string);
    }
    const MajoranaString direct = majorana_string(string);
    Average result = wick_->average(direct);
    if (!project_) {
        return result;
    }
    const Average minus = at_minus_one(string, direct);
    const Real sign = own_.odd() ? -1.0L : 1.0L;
    const Real ratio = occupied_.odd_over_even();
    const Real scale = own_.odd() ? (1 + ratio) / (2 * ratio) : (1 + ratio) / 2;
    result.value = scale * (result.value + sign * minus.value);
    result.error = scale * (result.error + minus.error);
    return result;
}

void ClassStrings::invert(const std::vector<Real>& s) {
    Real least = 1.0L;
    std::vector<Real> inverse;
    for (const Real own : s) {
        least = std::min(least, std::abs(own));
        inverse.push_back(1 / own);
    }
    if (least < smallest_tanh || log_tanh_.front() < -largest_log) {
        return;
    }
    inverse_state_ = own_.frame->filled(std::move(inverse));
    inverse_wick_ = std::make_unique<WickState<double>>(
        *inverse_state_, 1 / least, std::exp(-log_tanh_.front()));
}

/// F(-1)/F(1) of the identity times A.
Average ClassStrings::at_minus_one(const PauliString& string, const MajoranaString& direct) {
    const std::size_t pairs = direct.indices.size() / 2;
    const Real log_bound = log_tanh_[std::min(pairs, log_tanh_.size() - 1)];
    if (log_bound < negligible_log) {
        return {0.0L, std::exp(log_bound)};
    }
    const std::size_t others = 2 * log_tanh_.size() - 2 - direct.indices.size();
    if (inverse_wick_ && direct.indices.size() <= others) {
        Average result = inverse_wick_->average(direct);
        const Real tau = std::exp(log_tanh_.front());
        result.value *= tau;
        result.error *= tau;
        return result;
    }
    Average result = wick_->average(majorana_string_times_parity(string, state_->sites()));
    result.value *= static_cast<Real>(own_.vacuum_parity);
    return result;
}

/// Real or imaginary part of the averages of 1 - 2 n_k at weights scale * x_k / sum x.
std::vector<Real> ClassStrings::polarization(bool imaginary, std::complex<Real> scale) const {
    std::vector<Real> s;
    for (std::size_t k = 0; k < relative_.size(); ++k) {
        const std::complex<Real> x = scale * relative_[k];
        const std::complex<Real> value = (1.0L - x) / (1.0L + x);
        const Real part = imaginary ? value.imag() : value.real();
        s.push_back(own_.energy[k] < 0 ? -part : part);
    }
    return s;
}

/// The points of the upper half plane: F(t*) = F(t)* since strings are Hermitian.
void ClassStrings::sample_circle() {
    Real most = 1.0L;
    for (const Real share : relative_) {
        most *= 1 + circle_sum * share;
    }
    for (std::int64_t j = 0; 2 * j <= circle_points; ++j) {
        const std::complex<Real> t = circle_sum * std::complex<Real>(cos_pi(2 * j, circle_points),
                                                                     sin_pi(2 * j, circle_points));
        Node node{.weight = 1.0L,
                  .real = own_.frame->filled(polarization(false, t)),
                  .imaginary = own_.frame->filled(polarization(true, t)),
                  .wick = nullptr};
        for (const Real share : relative_) {
            node.weight *= 1.0L + t * share;
        }
        node.wick = std::make_unique<WickState<std::complex<double>>>(
            *node.real, *node.imaginary, largest_s, most / std::abs(node.weight));
        nodes_.push_back(std::move(node));
    }
}

Average ClassStrings::on_circle(const PauliString& string) {
    const MajoranaString direct = majorana_string(string);
    const Real cheapest = std::sqrt(occupied_.square());
    const Real inverse_square = std::pow(cheapest * cheapest_total_ / circle_sum, 2.0L);  // R^-2
    Average sum{0.0L, 1e-18L};
    for (std::int64_t j = 0; 2 * j <= circle_points; ++j) {
        Node& node = nodes_[static_cast<std::size_t>(j)];
        const Average at = node.wick->average(direct);
        const std::complex<Real> f = node.weight * at.value;
        const Real copies = 2 * j % circle_points == 0 ? 1.0L : 2.0L;
        Real power = 1.0L;
        Real phases = 0.0L;
        for (std::int64_t n = 1; n < circle_points / 2 + 2; n += 2) {
            const std::complex<Real> turned(cos_pi(2 * j * n, circle_points),
                                            -sin_pi(2 * j * n, circle_points));
            sum.value += copies * power * (f * turned).real() / Real(circle_points);
            phases += power;
            power *= inverse_square;
        }
        sum.error += copies * phases * std::abs(node.weight) * at.error / Real(circle_points);
    }
    // over Z_odd = e x_0 odd, with 1/R = x_0 cheapest_total/circle_sum
    const Real scale =
        cheapest_total_ / circle_sum / (occupied_.sums().odd * std::exp(occupied_.sums().log_even));
    sum.value *= scale;
    sum.error = scale * sum.error + 64 * real_epsilon;
    return sum;
}

}  // namespace chainmark::fermion
