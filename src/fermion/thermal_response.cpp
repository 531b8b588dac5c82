#include "chainmark/fermion/thermal_response.hpp"

#include <algorithm>
#include <cmath>

namespace chainmark::fermion {
namespace {

/// (1 - exp(-u))/u
Real slope(Real u) {
    return u > 0 ? -std::expm1(-u) / u : 1.0L;
}

/// Positions of the modes such that partners stand near each other.
std::vector<int> positions(const FieldForm& field) {
    std::vector<int> position(field.diagonal.size(), -1);
    int next = 0;
    const auto place = [&](int mode) {
        int& own = position[static_cast<std::size_t>(mode)];
        if (own < 0) {
            own = next++;
        }
    };
    for (const FieldElement& element : field.mixed) {
        place(element.k);
        place(element.l);
    }
    for (std::size_t mode = 0; mode < position.size(); ++mode) {
        place(static_cast<int>(mode));
    }
    return position;
}

/// An element between the modes at two positions.
struct Coupling {
    int left = 0;
    int right = 0;
    Real hop = 0.0L;   ///< |h|^2 of excitations
    Real pair = 0.0L;  ///< |p|^2
};

std::vector<Coupling> couplings(const ThermalClass& own, const std::vector<int>& position) {
    std::vector<Coupling> result;
    for (const FieldElement& element : own.field.mixed) {
        const auto k = static_cast<std::size_t>(element.k);
        const auto l = static_cast<std::size_t>(element.l);
        const bool turned = (own.energy[k] < 0) != (own.energy[l] < 0);
        const Real hop = std::norm(turned ? element.pair : element.hop);
        const Real pair = std::norm(turned ? element.hop : element.pair);
        const auto ends = std::minmax(position[k], position[l]);
        result.push_back({ends.first, ends.second, hop, pair});
    }
    std::sort(result.begin(), result.end(), [](const Coupling& a, const Coupling& b) {
        return std::pair(a.left, a.right) < std::pair(b.left, b.right);
    });
    return result;
}

class Response {
public:
    Response(const ThermalClass& own, const OccupiedModes& occupied, Real temperature)
        : odd_(own.odd()), occupied_(occupied), temperature_(temperature) {
        const std::vector<int> position = positions(own.field);
        couplings_ = couplings(own, position);
        cost_.resize(position.size());
        for (std::size_t mode = 0; mode < position.size(); ++mode) {
            cost_[static_cast<std::size_t>(position[mode])] = std::abs(own.energy[mode]);
        }
        before_.push_back({});
        for (std::size_t k = 0; k < cost_.size(); ++k) {
            before_.push_back(joined(before_.back(), single(k), occupied.square()));
        }
        after_.resize(cost_.size() + 1);
        for (std::size_t k = cost_.size(); k > 0; --k) {
            after_[k - 1] = joined(after_[k], single(k - 1), occupied.square());
        }
    }

    MixedResponse sum() const {
        MixedResponse total;
        ParitySums between;
        int left = -1;
        std::size_t next = 0;  // `between` holds what lies left of it but for `left`
        for (const Coupling& coupling : couplings_) {
            if (coupling.left != left) {
                left = coupling.left;
                next = static_cast<std::size_t>(left) + 1;
                between = before_[static_cast<std::size_t>(left)];
            }
            for (; next < static_cast<std::size_t>(coupling.right); ++next) {
                between = joined(between, single(next), occupied_.square());
            }
            const ParitySums others = joined(
                between, after_[static_cast<std::size_t>(coupling.right) + 1], occupied_.square());
            add(total, coupling, others);
        }
        return total;
    }

private:
    Real y(std::size_t k) const { return occupied_.weight_over_cheapest(cost_[k]); }
    ParitySums single(std::size_t k) const { return {0.0L, y(k)}; }

    /// Weight of the occupations of the other modes with given parity over that of all with theirs,
    /// the lowest state of each parity divided out.
    Real share(const ParitySums& others, bool odd) const {
        const Real even = std::exp(others.log_even - occupied_.sums().log_even);
        return even * (odd ? others.odd : 1.0L) / (odd_ ? occupied_.sums().odd : 1.0L);
    }

    void add(MixedResponse& total, const Coupling& coupling, const ParitySums& others) const {
        const auto k = static_cast<std::size_t>(coupling.left);
        const auto l = static_cast<std::size_t>(coupling.right);
        const Real beta = 1 / temperature_;
        if (coupling.hop > 0) {
            // x_k w over the weight of all: x_0^2 y w in the even class, y w in the odd one
            const Real w = share(others, !odd_) * (odd_ ? 1.0L : occupied_.square());
            const Real low = std::min(cost_[k], cost_[l]);
            const Real high = std::max(cost_[k], cost_[l]);
            const Real weight = occupied_.weight_over_cheapest(low) * w;
            const Real u = (high - low) * beta;
            total.response += 2 * coupling.hop * weight * beta * slope(u);
            total.square += coupling.hop * weight * (1 + std::exp(-u));
        }
        if (coupling.pair > 0) {
            const Real w = share(others, odd_);
            const Real u = (cost_[k] + cost_[l]) * beta;
            total.response += 2 * coupling.pair * w * beta * slope(u);
            total.square += coupling.pair * w * (1 + std::exp(-u));
        }
    }

    bool odd_;
    const OccupiedModes& occupied_;
    Real temperature_;
    std::vector<Coupling> couplings_;
    std::vector<Real> cost_;          ///< by position
    std::vector<ParitySums> before_;  ///< of the positions below
    std::vector<ParitySums> after_;   ///< of this position and those above
};

}  // namespace

MixedResponse mixed_response(const ThermalClass& own, const OccupiedModes& occupied) {
    return Response(own, occupied, occupied.temperature()).sum();
}

}  // namespace chainmark::fermion
