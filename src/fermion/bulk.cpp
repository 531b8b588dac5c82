#include "chainmark/fermion/bulk.hpp"

#include <algorithm>
#include <cmath>

#include <boost/math/special_functions/ellint_2.hpp>

namespace chainmark::fermion {
namespace {

/// Relative rounding of a handful of operations.
constexpr Real few = 16 * real_epsilon;

Bounded scaled(const Bounded& x, Real factor) {
    return {x.value * factor,
            x.error * std::abs(factor) + real_epsilon * std::abs(x.value * factor)};
}

Bounded shifted(const Bounded& x, Real constant) {
    return {x.value + constant, x.error + real_epsilon * (std::abs(x.value) + std::abs(constant))};
}

/// (1/pi) int_0^pi f(mode) dk, the mean over bands.
template <class Function>
Bounded mean_over_modes(const Bands& bands,
                        const std::optional<Real>& temperature,
                        Function&& f,
                        Real condition) {
    const auto integrand = [&](const Node& node) {
        Real sum = 0.0L;
        for (int band = 0; band < bands.cell(); ++band) {
            sum += f(bands.mode(band, node));
        }
        return sum;
    };
    const Bounded integral = integrate(bands.features(temperature), integrand, condition);
    return scaled(integral, 1 / (real_pi * static_cast<Real>(bands.cell())));
}

/// Where e(k) = |p + q exp(i kappa)| with kappa running over whole turns.
struct TwoSteps {
    Real p;
    Real q;
};

/// M(k) = -h + (Jx exp(ik) + Jy exp(-ik))/2 where one of the three terms is absent; an alternating
/// chain between its bands, where both are shifted by h in opposite directions.
std::optional<TwoSteps> two_steps(const InfiniteChain& chain) {
    if (chain.alternating) {
        if (std::abs(chain.field) > chain.band_bottom()) {
            return std::nullopt;
        }
        return TwoSteps{std::abs(chain.jx) / 2, std::abs(chain.j_odd) / 2};
    }
    if (chain.jy == 0.0L) {
        return TwoSteps{std::abs(chain.field), std::abs(chain.jx) / 2};
    }
    if (chain.jx == 0.0L) {
        return TwoSteps{std::abs(chain.field), std::abs(chain.jy) / 2};
    }
    if (chain.field == 0.0L) {
        return TwoSteps{std::abs(chain.jx) / 2, std::abs(chain.jy) / 2};
    }
    return std::nullopt;
}

/// (1/2 pi) int_0^pi |p + q exp(i kappa)| d kappa = (p + q) E(k)/pi, k^2 = 4 p q/(p + q)^2, E the
/// complete elliptic integral of the second kind in the modulus k.
/// Source: P. Pfeuty, Ann. Phys. (NY) 57, 79 (1970).
Bounded half_mean(const TwoSteps& e) {
    const Real sum = e.p + e.q;
    if (sum == 0.0L) {
        return {};
    }
    const Real modulus = std::min(1.0L, 2 * std::sqrt(e.p / sum * (e.q / sum)));
    const Real value = sum * boost::math::ellint_2(modulus) / real_pi;
    // E as a function of k is steep next to k = 1: 1 - k^2 = ((p - q)/(p + q))^2 loses digits, and
    // dE/d(k^2) = (E - K)/(2 k^2) grows like ln(1 - k^2).
    const Real beyond = std::max(std::abs(e.p - e.q) / sum, 0x1p-31L);
    return {value, few * sum * (1 - std::log(beyond))};
}

/// Closed forms of the uniform XX chain with |h| <= |J| (and beyond).
/// Sources: Lieb, Schultz, Mattis (1961); S. Katsura, Phys. Rev. 127, 1508 (1962).
struct UniformXx {
    explicit UniformXx(const InfiniteChain& chain) : size(std::abs(chain.jx)), field(chain.field) {}

    bool is_critical() const { return std::abs(field) < size; }

    /// sqrt(J^2 - h^2), small near saturation without loss of digits.
    Real root() const { return std::sqrt((size - field) * (size + field)); }

    /// arcsin(h/|J|), well conditioned up to |h| = |J|.
    Real angle() const { return std::atan2(field, root()); }

    /// -(1/pi) [sqrt(J^2 - h^2) + h arcsin(h/|J|)] for |h| < |J|, -|h|/2 outside.
    Real energy() const {
        return is_critical() ? -(root() + field * angle()) / real_pi : -std::abs(field) / 2;
    }

    /// arcsin(h/|J|)/pi for |h| < |J|, sign(h)/2 outside.
    Real magnetization() const {
        if (is_critical()) {
            return angle() / real_pi;
        }
        return field == 0.0L ? 0.0L : std::copysign(0.5L, field);
    }

    /// 1/(pi sqrt(J^2 - h^2)) for |h| < |J|, 0 outside.
    Real susceptibility() const { return is_critical() ? 1 / (real_pi * root()) : 0.0L; }

    Real size;
    Real field;
};

/// States of an alternating band at h: |h|/(pi sqrt((top^2 - h^2)(h^2 - bottom^2))) a site.
Real alternating_susceptibility(const InfiniteChain& chain) {
    const Real field = std::abs(chain.field);
    const Real bottom = chain.band_bottom();
    const Real top = chain.band_top();
    if (field > top || (field <= bottom && bottom > 0.0L)) {
        return 0.0L;
    }
    const Real below = std::sqrt((top - field) * (top + field));
    const Real above = bottom == 0.0L ? field : std::sqrt((field - bottom) * (field + bottom));
    return (bottom == 0.0L ? 1.0L : field / above) / (real_pi * below);
}

}  // namespace

GroundValue ground_energy_per_site(const Bands& bands) {
    const InfiniteChain& chain = bands.chain();
    if (chain.is_uniform_xx()) {
        const Real size = chain.scale() + std::abs(chain.constant);
        return {{UniformXx(chain).energy() + chain.constant, few * size}, true};
    }
    if (const std::optional<TwoSteps> steps = two_steps(chain)) {
        return {shifted(scaled(half_mean(*steps), -1.0L), chain.constant), true};
    }
    const Bounded mean = mean_over_modes(
        bands, std::nullopt, [](const Mode& mode) { return std::abs(mode.energy); }, 1.0L);
    return {shifted(scaled(mean, -0.5L), chain.constant), false};
}

GroundValue ground_magnetization(const Bands& bands) {
    if (bands.chain().is_uniform_xx()) {
        const Real value = UniformXx(bands.chain()).magnetization();
        return {{value, few * std::abs(value)}, true};
    }
    if (bands.chain().conserves_sz() && bands.chain().field == 0.0L) {
        return {{0.0L, 0.0L}, true};
    }
    const Bounded mean = mean_over_modes(
        bands,
        std::nullopt,
        [](const Mode& mode) { return polarization(mode.energy, std::nullopt) * mode.slope; },
        bands.condition());
    return {scaled(mean, 0.5L), false};
}

GroundValue ground_susceptibility(const Bands& bands) {
    const InfiniteChain& chain = bands.chain();
    if (chain.conserves_sz()) {
        const Real value = chain.alternating ? alternating_susceptibility(chain)
                                             : UniformXx(chain).susceptibility();
        return {{value, few * value}, true};
    }
    const Bounded mean = mean_over_modes(
        bands,
        std::nullopt,
        [](const Mode& mode) { return mode.curvature; },
        3 * bands.condition());
    return {scaled(mean, 0.5L), false};
}

template <class Function>
Bounded BulkThermal::mean(Function&& f, Real condition) const {
    return mean_over_modes(
        bands_,
        temperature_,
        [&](const Mode& mode) { return f(mode, std::abs(mode.energy) / (2 * temperature_)); },
        condition);
}

namespace {

/// ln(2 cosh x) - x for x >= 0.
Real beyond_linear(Real x) {
    return std::log1p(std::exp(-2 * x));
}

/// 1/cosh^2 x without overflow.
Real inverse_cosh_squared(Real x) {
    const Real decay = std::exp(-2 * std::abs(x));
    return 4 * decay / ((1 + decay) * (1 + decay));
}

}  // namespace

Bounded BulkThermal::free_energy() const {
    const auto f = [&](const Mode& mode, Real x) {
        return std::abs(mode.energy) / 2 + temperature_ * beyond_linear(x);
    };
    return shifted(scaled(mean(f, 1.0L), -1.0L), bands_.chain().constant);
}

Bounded BulkThermal::energy() const {
    const auto f = [](const Mode& mode, Real x) { return std::abs(mode.energy) * std::tanh(x); };
    return shifted(scaled(mean(f, 2.0L), -0.5L), bands_.chain().constant);
}

Bounded BulkThermal::entropy() const {
    // ln(2 cosh x) - x tanh x = ln(1 + exp(-2x)) + x (1 - tanh x)
    const auto f = [](const Mode&, Real x) {
        const Real decay = std::exp(-2 * x);
        return std::log1p(decay) + 2 * x * decay / (1 + decay);
    };
    return mean(f, 1 + bands_.chain().scale() / temperature_);
}

Bounded BulkThermal::specific_heat() const {
    const auto f = [](const Mode&, Real x) { return x * x * inverse_cosh_squared(x); };
    return mean(f, 1 + bands_.chain().scale() / temperature_);
}

Bounded BulkThermal::magnetization() const {
    const auto f = [&](const Mode& mode, Real) {
        return polarization(mode.energy, temperature_) * mode.slope;
    };
    return scaled(mean(f, std::min(bands_.condition(), 1 + bands_.chain().scale() / temperature_)),
                  0.5L);
}

Bounded BulkThermal::susceptibility() const {
    const auto f = [&](const Mode& mode, Real x) {
        return polarization(mode.energy, temperature_) * mode.curvature +
               mode.slope * mode.slope * inverse_cosh_squared(x) / (2 * temperature_);
    };
    return scaled(mean(f, 3 + bands_.chain().scale() / temperature_), 0.5L);
}

}  // namespace chainmark::fermion
