#include "chainmark/sector/thermal.hpp"

#include <algorithm>
#include <cmath>
#include <limits>

#include "chainmark/base/numerics.hpp"

namespace chainmark::sector {
namespace {

using Wide = long double;

/// What underflows to zero is off by less than this.
constexpr double smallest = std::numeric_limits<double>::min();

Estimate rounded(Wide value, Wide bound) {
    const auto number = static_cast<double>(value);
    return {number, static_cast<double>(bound) + 4 * epsilon * std::abs(number) + smallest};
}

}  // namespace

Thermal::Thermal(const ThermalSpectrum& spectrum, const Problem& problem)
    : spectrum_(spectrum),
      temperature_(*problem.temperature),
      inversion_(!spectrum.solution().field_outside() || problem.field == 0.0) {
    weigh(problem);
    bound_errors();
}

void Thermal::weigh(const Problem& problem) {
    const double field = spectrum_.solution().field_outside() ? problem.field : 0.0;
    lowest_ = std::numeric_limits<double>::infinity();
    for (const LevelFamily& family : spectrum_.families()) {
        lowest_ = std::min(lowest_, spectrum_.block(family).energies[0] - field * family.sz);
    }
    Wide sum = 0;
    const double constant = std::abs(spectrum_.solution().constant());
    for (const LevelFamily& family : spectrum_.families()) {
        const auto& block = spectrum_.block(family);
        const double zeeman = -field * family.sz;
        std::vector<Member>& members = members_.emplace_back();
        members.reserve(static_cast<std::size_t>(block.energies.size()));
        for (Eigen::Index n = 0; n < block.energies.size(); ++n) {
            const double energy = block.energies[n] + zeeman;
            const double bound =
                block.bounds[n] +
                2 * epsilon *
                    (std::abs(block.energies[n]) + std::abs(zeeman) + std::abs(lowest_) + constant);
            const double weight = family.copies * std::exp((lowest_ - energy) / temperature_);
            members.push_back({energy - lowest_, weight, bound});
            sum += weight;
        }
    }
    log_sum_ = static_cast<double>(std::log(sum));
    Wide excitation = 0;
    for (std::vector<Member>& members : members_) {
        for (Member& member : members) {
            member.weight = static_cast<double>(member.weight / sum);
            excitation += static_cast<Wide>(member.weight) * member.energy;
        }
    }
    excitation_ = static_cast<double>(excitation);
    lowest_ += spectrum_.solution().constant();
}

void Thermal::bound_errors() {
    Wide mean = 0;
    double largest = 0.0;
    for (const std::vector<Member>& members : members_) {
        for (const Member& member : members) {
            mean += static_cast<Wide>(member.weight) * member.bound;
            largest = std::max(largest, member.bound);
        }
    }
    const double growth = std::exp(2 * largest / temperature_);
    // No level is off by more than `largest`, nor is F.
    free_bound_ = std::min(largest, static_cast<double>(growth * mean)) + smallest;

    for (const auto& [twin, block] : spectrum_.blocks()) {
        residual_ = std::max(residual_, block.residual);
    }
    double ground_copies = 0.0;
    double ground_weight = 0.0;
    double gap = std::numeric_limits<double>::infinity();
    for (std::size_t f = 0; f < members_.size(); ++f) {
        const double copies = spectrum_.families()[f].copies;
        for (const Member& member : members_[f]) {
            if (member.energy == 0.0) {
                ground_copies += copies;
                ground_weight += member.weight;
            } else {
                gap = std::min(gap, member.energy);
            }
        }
    }
    response_ = 1 / temperature_;
    gap -= 2 * largest;
    if (ground_copies == 1.0 && gap > 0) {
        response_ =
            std::min(response_, 4 * std::max(0.0, 1 - ground_weight) / temperature_ + 2 / gap);
    }
    rotation_ = std::min(2.0, 2 * residual_ * response_);
    Wide moved = 0;
    for (const std::vector<Member>& members : members_) {
        for (const Member& member : members) {
            if (member.weight > 0) {
                moved += static_cast<Wide>(member.weight) * excess(member);
            }
        }
    }
    weights_ = std::min(2.0, static_cast<double>(moved));
}

double Thermal::excess(const Member& member) const {
    return std::expm1((member.bound + free_bound_) / temperature_);
}

template <class Value>
Estimate Thermal::labelled(Value&& value) const {
    Wide mean = 0;
    Wide sizes = 0;
    for (std::size_t f = 0; f < members_.size(); ++f) {
        for (const Member& member : members_[f]) {
            const double x = value(spectrum_.families()[f], member);
            mean += static_cast<Wide>(member.weight) * x;
            sizes += static_cast<Wide>(member.weight) * std::abs(x);
        }
    }
    Wide error = 0;
    for (std::size_t f = 0; f < members_.size(); ++f) {
        for (const Member& member : members_[f]) {
            if (member.weight > 0) {
                const double x = value(spectrum_.families()[f], member);
                error += static_cast<Wide>(member.weight) *
                         std::abs(x - static_cast<double>(mean)) * excess(member);
            }
        }
    }
    // Each weight has a relative rounding of its own, of the exponent E/T.
    return rounded(mean, error + 2 * epsilon * sizes);
}

Estimate Thermal::free_energy() const {
    const Wide above = static_cast<Wide>(temperature_) * log_sum_;
    return rounded(lowest_ - above,
                   free_bound_ + 4 * epsilon * (std::abs(lowest_) + std::abs(above)));
}

Estimate Thermal::energy() const {
    const Estimate above = labelled([](const LevelFamily&, const Member& m) { return m.energy; });
    Wide own = 0;
    for (const std::vector<Member>& members : members_) {
        for (const Member& member : members) {
            own += static_cast<Wide>(member.weight) * member.bound *
                   (member.weight > 0 ? 1 + excess(member) : 1.0);
        }
    }
    return rounded(static_cast<Wide>(lowest_) + above.value,
                   above.bound + own + 2 * epsilon * std::abs(lowest_));
}

Estimate Thermal::entropy() const {
    // S' - S = sum (p'_n - p_n)(E_n - E)/T - sum p'_n ln(p'_n/p_n), and the last sum lies between 0
    // and sum (p' - p)^2 / p.
    const double beta = 1 / temperature_;
    const Estimate above = labelled([](const LevelFamily&, const Member& m) { return m.energy; });
    Wide second = 0;
    for (const std::vector<Member>& members : members_) {
        for (const Member& member : members) {
            if (member.weight > 0) {
                const Wide x = excess(member);
                second += static_cast<Wide>(member.weight) * x * x;
            }
        }
    }
    const Wide value = static_cast<Wide>(log_sum_) + static_cast<Wide>(excitation_) * beta;
    return rounded(value, above.bound * beta + second + 4 * epsilon * std::abs(log_sum_));
}

Estimate Thermal::specific_heat() const {
    const double e = excitation_;
    const Estimate variance = labelled(
        [e](const LevelFamily&, const Member& m) { return (m.energy - e) * (m.energy - e); });
    Wide own = 0;
    for (const std::vector<Member>& members : members_) {
        for (const Member& member : members) {
            if (member.weight > 0) {
                own +=
                    static_cast<Wide>(member.weight) * (1 + excess(member)) *
                    (2 * std::abs(member.energy - e) * member.bound + member.bound * member.bound);
            }
        }
    }
    const double shift = energy().bound;
    const Wide square = static_cast<Wide>(temperature_) * temperature_;
    return rounded(variance.value / square, (variance.bound + own + shift * shift) / square);
}

Estimate Thermal::magnetization() const {
    return labelled([](const LevelFamily& family, const Member&) { return family.sz; });
}

Estimate Thermal::magnetization_variance() const {
    const Estimate mean = magnetization();
    const Estimate variance = labelled([&](const LevelFamily& family, const Member&) {
        return (family.sz - mean.value) * (family.sz - mean.value);
    });
    return rounded(variance.value, variance.bound + mean.bound * mean.bound);
}

Average Thermal::average(const Observable& observable) const {
    const StringSymmetry state(spectrum_.chain(), spectrum_.solution().symmetries(), inversion_);
    std::map<OperatorString, std::pair<std::complex<double>, std::complex<double>>> sums;
    Average average;
    for (const auto& [string, coefficient] : observable.strings) {
        if (string.empty()) {
            average.value += coefficient;
            continue;
        }
        if (state.classify(string).vanishes) {
            continue;
        }
        const StringSymmetry::Class of = spectrum_.symmetry().classify(string);
        auto& [plain, conjugated] = sums[of.representative];
        (of.conjugated ? conjugated : plain) += coefficient * of.factor;
    }
    average.bound = 2 * epsilon * std::abs(average.value);
    double norm = 0.0;
    for (const auto& [string, factors] : sums) {
        std::complex<Wide> mean = 0;
        for (std::size_t f = 0; f < members_.size(); ++f) {
            const StringValues& values = spectrum_.families()[f].averages.at(string);
            for (std::size_t n = 0; n < members_[f].size(); ++n) {
                const auto at = static_cast<Eigen::Index>(n);
                const double imaginary = values.imaginary.size() > 0 ? values.imaginary[at] : 0.0;
                mean += static_cast<Wide>(members_[f][n].weight) *
                        std::complex<Wide>(values.real[at], imaginary);
            }
        }
        const std::complex<double> value(mean);
        average.value += factors.first * value + factors.second * std::conj(value);
        norm += (std::abs(factors.first) + std::abs(factors.second)) *
                norm_of(string, spectrum_.chain().two_s);
    }
    average.bound += (weights_ + rotation_) * std::min(norm, observable.norm) + 64 * epsilon * norm;
    return average;
}

Estimate Thermal::response() const {
    const double beta = 1 / temperature_;
    Wide mean = 0;
    Wide square = 0;
    Wide sum = 0;
    Wide rounding = 0;
    for (std::size_t f = 0; f < members_.size(); ++f) {
        const BlockResponse& block = spectrum_.block(spectrum_.families()[f]).response;
        const std::vector<Member>& members = members_[f];
        for (std::size_t n = 0; n < members.size(); ++n) {
            const auto at = static_cast<Eigen::Index>(n);
            const Wide weight = members[n].weight;
            mean += weight * block.diagonal[at];
            square += weight * block.squares[at];
            sum += 2 * weight * block.far[at];
            rounding += 8 * epsilon * weight * block.far_sizes[at];
        }
        for (const BlockResponse::Pair& pair : block.near) {
            const Member& low = members[static_cast<std::size_t>(pair.n)];
            const double distance = members[static_cast<std::size_t>(pair.m)].energy - low.energy;
            const double x = distance * beta;
            const double share = x > 0 ? -std::expm1(-x) / distance : beta;
            sum += 2 * static_cast<Wide>(low.weight) * pair.strength * share;
        }
    }
    Wide diagonal = 0;
    for (std::size_t f = 0; f < members_.size(); ++f) {
        const BlockResponse& block = spectrum_.block(spectrum_.families()[f]).response;
        for (std::size_t n = 0; n < members_[f].size(); ++n) {
            const Wide own = block.diagonal[static_cast<Eigen::Index>(n)] - mean;
            diagonal += static_cast<Wide>(members_[f][n].weight) * own * own;
        }
    }
    const double norm = spectrum_.chain().length() * spectrum_.chain().spin();
    const double reach = norm + std::abs(static_cast<double>(mean));
    const double deviation =
        std::sqrt(std::max(0.0, static_cast<double>(square - mean * mean))) + 1e-8 * norm;
    // Three factors in imaginary time: |(dH; M; M)| <= ||dH|| ||M - <M>|| <(M - <M>)^2>^(1/2).
    const Wide error =
        (4 * residual_ * response_ + 64 * epsilon) * response_ * deviation * reach + rounding;
    return rounded(sum + diagonal * beta, error);
}

}  // namespace chainmark::sector
