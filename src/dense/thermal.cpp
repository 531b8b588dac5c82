#include "chainmark/dense/thermal.hpp"

#include <algorithm>
#include <cmath>
#include <limits>

#include "chainmark/base/numerics.hpp"

namespace chainmark::dense {
namespace {

constexpr double weak = 1e-3;     ///< largest error/T at which errors count to first order
constexpr double frozen = 800.0;  ///< a level so many T above the lowest weighs nothing

/// What underflows to zero is off by less than this.
constexpr double smallest = std::numeric_limits<double>::min();

}  // namespace

template <class Scalar>
Thermal<Scalar>::Thermal(std::vector<Level> levels,
                         const FullSpectrum<Scalar>& spectrum,
                         double temperature)
    : levels_(std::move(levels)), spectrum_(spectrum), temperature_(temperature) {
    const long double lowest = levels_.front().energy;
    const long double t = temperature;
    long double others = 0.0L;  // beside the lowest level's weight, 1
    for (const Level& level : levels_) {
        weights_.push_back(std::exp((lowest - level.energy) / t));
        others += weights_.size() > 1 ? weights_.back() : 0.0L;
    }
    const long double sum = 1.0L + others;
    log_sum_ = std::log1p(others);
    long double squares = 0.0L;
    double all_squares = 0.0;
    for (std::size_t n = 0; n < levels_.size(); ++n) {
        weights_[n] /= sum;
        excitation_ += weights_[n] * (levels_[n].energy - lowest);
        const double residual = spectrum.residual(levels_[n].vector);
        squares += weights_[n] * residual * residual;
        all_squares += std::pow(residual - spectrum.noise_of_matrix(), 2);
    }
    for (std::size_t n = 0; n < levels_.size(); ++n) {
        const long double deviation = (levels_[n].energy - lowest) - excitation_;
        variance_ += weights_[n] * deviation * deviation;
    }
    // >= ||dH||: the rounding of H, and what was measured, in the Frobenius norm
    largest_residual_ = spectrum.noise_of_matrix() + std::sqrt(all_squares);
    const bool small = largest_residual_ <= weak * temperature;
    // <dH^2> of the exact state differs from the computed one's by a factor near 1 if ||dH|| << T.
    residual_ = small ? 1.5 * std::sqrt(static_cast<double>(squares)) : largest_residual_;
    bound_errors(small);
}

template <class Scalar>
void Thermal<Scalar>::bound_errors(bool small) {
    const double lowest = levels_.front().energy;
    double others = 0.0;      // weight outside the lowest level, wherever the levels really lie
    double excitation = 0.0;  // their energy above it
    std::size_t occupied = 0;
    for (std::size_t n = 0; n < levels_.size(); ++n) {
        const double above = levels_[n].energy - lowest;
        occupied += above <= 2 * largest_residual_ + frozen * temperature_ ? 1 : 0;
        if (n > 0) {
            const double nearer = std::max(0.0, above - 2 * largest_residual_);
            const double share = std::exp(-nearer / temperature_);
            others += share;
            excitation += share * (above + 2 * largest_residual_);
        }
    }
    resolved_ = small || occupied == 1;
    unresolved_energy_ = largest_residual_ + std::max(static_cast<double>(excitation_), excitation);
    const double gap =
        levels_.size() > 1 ? levels_[1].energy - lowest - 2 * largest_residual_ : 0.0;
    response_ = 1 / temperature_;
    if (gap > 0) {
        response_ = std::min(response_, 4 * others / temperature_ + 2 / gap);
    }
    const double scale = std::max(std::abs(lowest), std::abs(levels_.back().energy));
    rounding_ = 2 * spectrum_.noise() + 4 * epsilon * scale;
    for (const Level& level : levels_) {  // a large field that cancels against M
        rounding_ = std::max(rounding_, level.bound - spectrum_.residual(level.vector));
    }
    noise_ = rounding_ + (resolved_ ? 4 * residual_ * residual_ * response_ : largest_residual_);
}

template <class Scalar>
Estimate Thermal<Scalar>::estimate(long double value, long double error) const {
    const auto rounded = static_cast<double>(value);
    return {rounded, static_cast<double>(error) + 2 * epsilon * std::abs(rounded) + smallest};
}

template <class Scalar>
long double Thermal<Scalar>::spread_over_temperature() const {
    return std::sqrt(variance_) / temperature_;
}

template <class Scalar>
Estimate Thermal<Scalar>::free_energy() const {
    return estimate(levels_.front().energy - temperature_ * log_sum_, noise_);
}

template <class Scalar>
Estimate Thermal<Scalar>::energy() const {
    const long double value = levels_.front().energy + excitation_;
    // dE = <dH> - cov(H, dH)/T
    return estimate(value,
                    resolved_ ? noise_ * (1 + spread_over_temperature())
                              : static_cast<long double>(rounding_ + unresolved_energy_));
}

template <class Scalar>
Estimate Thermal<Scalar>::entropy() const {
    // dS = -cov(H, dH)/T^2
    return estimate(log_sum_ + excitation_ / temperature_,
                    noise_ * spread_over_temperature() / temperature_);
}

template <class Scalar>
Estimate Thermal<Scalar>::specific_heat() const {
    // d var = 2 cov(H, dH) - cov((H-E)^2, dH)/T, and <|x - <x>|> <= 2 <x> for x >= 0
    const long double spread = spread_over_temperature();
    return estimate(spread * spread, 2 * noise_ / temperature_ * (spread + spread * spread));
}

template <class Scalar>
Estimate Thermal<Scalar>::magnetization() const {
    const long double variance = magnetization_variance().value;
    long double mean = 0.0L;
    long double sizes = 0.0L;
    for (std::size_t n = 0; n < levels_.size(); ++n) {
        const double sz = spectrum_.sz(levels_[n].vector);
        mean += weights_[n] * sz;
        sizes += weights_[n] * std::abs(sz);
    }
    // d<M> = -cov(M, dH)/T; at high temperatures contributions of both signs cancel
    const long double rounding = 32 * std::numeric_limits<long double>::epsilon() * sizes;
    return estimate(mean, noise_ / temperature_ * std::sqrt(variance) + rounding);
}

template <class Scalar>
Estimate Thermal<Scalar>::magnetization_variance() const {
    long double mean = 0.0L;
    for (std::size_t n = 0; n < levels_.size(); ++n) {
        mean += weights_[n] * spectrum_.sz(levels_[n].vector);
    }
    long double variance = 0.0L;
    for (std::size_t n = 0; n < levels_.size(); ++n) {
        const long double deviation = spectrum_.sz(levels_[n].vector) - mean;
        variance += weights_[n] * deviation * deviation;
    }
    return estimate(variance, 2 * noise_ / temperature_ * variance);
}

template <class Scalar>
Average Thermal<Scalar>::average(const Eigen::VectorXcd& diagonal, double norm) const {
    long double real = 0.0L;
    long double imaginary = 0.0L;
    for (std::size_t n = 0; n < levels_.size(); ++n) {
        real += weights_[n] * diagonal[levels_[n].vector].real();
        imaginary += weights_[n] * diagonal[levels_[n].vector].imag();
    }
    Average average;
    average.value = {static_cast<double>(real), static_cast<double>(imaginary)};
    const double vectors = (32 + 4 * std::sqrt(static_cast<double>(levels_.size()))) * epsilon;
    average.bound = norm * (std::min(2.0, residual_ * response_) + vectors);
    return average;
}

template <class Scalar>
Estimate Thermal<Scalar>::kubo_response(const typename FullSpectrum<Scalar>::Vectors& elements,
                                        double norm) const {
    const std::size_t size = levels_.size();
    long double mean = 0.0L;
    for (std::size_t n = 0; n < size; ++n) {
        mean += weights_[n] * std::real(elements(levels_[n].vector, levels_[n].vector));
    }
    long double sum = 0.0L;
    long double square = 0.0L;  // <(M - <M>)^2>
    for (std::size_t n = 0; n < size && weights_[n] > 0; ++n) {
        const Eigen::Index column = levels_[n].vector;
        const long double own = std::real(elements(column, column)) - mean;
        long double from_n = own * own / temperature_;
        long double squares = own * own;
        for (std::size_t m = n + 1; m < size; ++m) {
            // both orders of the pair: p_n - p_m = p_n (1 - exp(-x))
            const double strength = std::norm(elements(levels_[m].vector, column));
            const double distance = levels_[m].energy - levels_[n].energy;
            const double x = distance / temperature_;
            const double share = -std::expm1(-x);
            from_n += 2 * strength * (x > 0.0 ? share / distance : 1 / temperature_);
            squares += strength * (2 - share);
        }
        sum += weights_[n] * from_n;
        square += weights_[n] * squares;
    }
    const double deviation = std::sqrt(static_cast<double>(square));
    const double reach = norm + std::abs(static_cast<double>(mean));
    // Three factors in imaginary time, |(dH; M; M)| <= ||dH|| <(M - <M>)^2>; or, with the lowest
    // level split off, ||dH|| ||M - <M>|| <(M - <M>)^2>^(1/2).
    const double hot = deviation * deviation / (temperature_ * temperature_);
    const double cold = deviation * reach * response_ * response_;
    const double rounding = 64 * epsilon * response_ * deviation * reach;
    return estimate(sum, 4 * largest_residual_ * std::min(hot, cold) + rounding);
}

template class Thermal<double>;
template class Thermal<std::complex<double>>;

}  // namespace chainmark::dense
