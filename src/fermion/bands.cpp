#include "chainmark/fermion/bands.hpp"

#include <algorithm>
#include <cmath>
#include <complex>

namespace chainmark::fermion {
namespace {

/// A zero nearer to the real axis than this lies on it, but for rounding.
constexpr Real real_zero = 0x1p-52L;

/// M(k) = X cos k - h + i Y sin k with X = (Jx + Jy)/2, Y = (Jx - Jy)/2: e = |M(k)|, or X cos k - h
/// where Y = 0.
class UniformBands final : public Bands {
public:
    explicit UniformBands(const InfiniteChain& chain)
        : chain_(chain), x_(chain.hopping()), y_(chain.pairing()), h_(chain.field) {}

    int cell() const override { return 1; }

    Mode mode(int /*band*/, const Node& node) const override {
        const Real a = real_part(node);
        if (y_ == 0.0L) {
            return {a, -1.0L, 0.0L};
        }
        const Real b = y_ * node.sin();
        const Real e = std::hypot(a, b);
        return e == 0.0L ? Mode{} : Mode{e, -a / e, (b / e) * (b / e) / e};
    }

    Symbol symbol(int /*from*/,
                  int /*to*/,
                  const Node& node,
                  const std::optional<Real>& temperature) const override {
        const Real a = real_part(node);
        const Real b = y_ * node.sin();
        const Real e = std::hypot(a, b);
        if (e == 0.0L) {
            return {};
        }
        const Real p = polarization(e, temperature);
        return {a / e * p, b / e * p};
    }

    /// e^2 = (X cos k - h)^2 + Y^2 sin^2 k is quadratic in cos k: its minimum lies at cos k = +-1
    /// or at cos k0 = h X/(X^2 - Y^2).
    Real smallest_energy() const override {
        const Real edges = std::abs(std::abs(x_) - std::abs(h_));
        if (y_ == 0.0L) {
            return std::abs(h_) <= std::abs(x_) ? 0.0L : edges;
        }
        const std::optional<Real> minimum = inner_minimum();
        if (!minimum) {
            return edges;
        }
        const Real spread = (x_ - y_) * (x_ + y_);
        return std::abs(y_) * std::sqrt(std::max(0.0L, 1 - h_ / spread * h_));
    }

    /// Jx w^2/2 - h w + Jy/2 = 0 in w = exp(ik), or 1/w: |Im k| = |ln|w||.
    std::optional<Real> complex_zero() const override {
        using Complex = std::complex<Real>;
        const Complex root = std::sqrt(Complex(h_ * h_ - chain_.jx * chain_.jy));
        const Complex larger = h_ + (h_ >= 0 ? root : -root);  // Jx times the larger root
        std::optional<Real> nearest;
        for (const Real coupling : {chain_.jx, chain_.jy}) {
            if (coupling == 0.0L || larger == 0.0L) {
                continue;  // no root but 0 and infinity
            }
            const Real distance = std::abs(std::log(std::abs(larger / coupling)));
            if (distance > real_zero) {
                nearest = std::min(nearest.value_or(distance), distance);
            }
        }
        return nearest;
    }

    std::vector<Real> fermi_points() const override {
        std::vector<Real> points;
        if (std::abs(h_) < std::abs(x_)) {
            points.push_back(std::atan2(std::sqrt((x_ - h_) * (x_ + h_)), x_ > 0 ? h_ : -h_));
        }
        if (const std::optional<Real> minimum = inner_minimum()) {
            points.push_back(std::acos(*minimum));
        }
        return points;
    }

    Real condition() const override {
        const bool crosses = std::abs(h_) < std::abs(x_);
        return crosses && y_ != 0.0L ? 1 + std::abs(x_ / y_) : 1.0L;
    }

    const InfiniteChain& chain() const override { return chain_; }

private:
    /// X cos k - h without cancellation where it is small next to k = 0 or pi.
    Real real_part(const Node& node) const {
        return h_ * x_ >= 0 ? (x_ - h_) - 2 * x_ * node.sin_half * node.sin_half
                            : -(x_ + h_) + 2 * x_ * node.cos_half * node.cos_half;
    }

    std::optional<Real> inner_minimum() const {
        const Real spread = (x_ - y_) * (x_ + y_);
        if (y_ == 0.0L || spread <= 0.0L || std::abs(h_ * x_) >= spread) {
            return std::nullopt;
        }
        return h_ * x_ / spread;
    }

    InfiniteChain chain_;
    Real x_;
    Real y_;
    Real h_;
};

/// Two sites a cell: e = -h +- w(k) with w = |f|, f = t + t' exp(-ik) between places 0 and 1, where
/// t = J/2 belongs to the bond inside the cell and t' = J'/2 to the one between cells.
class AlternatingBands final : public Bands {
public:
    explicit AlternatingBands(const InfiniteChain& chain)
        : chain_(chain), inside_(chain.jx / 2), between_(chain.j_odd / 2), h_(chain.field) {}

    int cell() const override { return 2; }

    Mode mode(int band, const Node& node) const override {
        const Real w = width(node);
        return {(band == 0 ? -w : w) - h_, -1.0L, 0.0L};
    }

    Symbol symbol(int from,
                  int to,
                  const Node& node,
                  const std::optional<Real>& temperature) const override {
        const Real w = width(node);
        const Real upper = polarization(w - h_, temperature);
        const Real lower = polarization(-w - h_, temperature);
        if (from == to) {
            return {(upper + lower) / 2, 0.0L};
        }
        const Real half = (upper - lower) / 2 / w;
        const Real turn = between_ * node.sin() * half;
        return {(inside_ + between_ * node.cos()) * half, from == 0 ? -turn : turn};
    }

    Real smallest_energy() const override {
        const Real field = std::abs(h_);
        return std::max({0.0L, chain_.band_bottom() - field, field - chain_.band_top()});
    }

    std::optional<Real> complex_zero() const override {
        if (inside_ == 0.0L || between_ == 0.0L) {
            return std::nullopt;
        }
        const Real distance = std::abs(std::log(std::abs(inside_ / between_)));
        return distance > real_zero ? std::optional(distance) : std::nullopt;
    }

    /// w = |h|: with t t' > 0, 4 t t' cos^2(k/2) = h^2 - bottom^2, 4 t t' sin^2(k/2) = top^2 - h^2;
    /// exchanged for t t' < 0.
    std::vector<Real> fermi_points() const override {
        const Real field = std::abs(h_);
        const Real bottom = chain_.band_bottom();
        const Real top = chain_.band_top();
        if (field <= bottom || field >= top) {
            return {};
        }
        const Real above = std::sqrt((field - bottom) * (field + bottom));
        const Real below = std::sqrt((top - field) * (top + field));
        return {inside_ * between_ > 0 ? 2 * std::atan2(below, above)
                                       : 2 * std::atan2(above, below)};
    }

    Real condition() const override { return 1.0L; }

    const InfiniteChain& chain() const override { return chain_; }

private:
    Real width(const Node& node) const {
        const Real product = inside_ * between_;
        const Real half = product > 0 ? node.cos_half : node.sin_half;
        return std::hypot(chain_.band_bottom(), 2 * std::sqrt(std::abs(product)) * half);
    }

    InfiniteChain chain_;
    Real inside_;
    Real between_;
    Real h_;
};

}  // namespace

Features Bands::features(const std::optional<Real>& temperature) const {
    Features features{.points = fermi_points(),
                      .width = std::min(1.0L, complex_zero().value_or(1.0L))};
    if (temperature) {
        // tanh(e/2T) has poles at e = i pi T (2n + 1), and |de/dk| is at most the scale.
        features.width = std::min(features.width, *temperature / chain().scale());
    }
    return features;
}

std::unique_ptr<Bands> make_bands(const InfiniteChain& chain) {
    if (chain.alternating) {
        return std::make_unique<AlternatingBands>(chain);
    }
    return std::make_unique<UniformBands>(chain);
}

Real polarization(Real energy, const std::optional<Real>& temperature) {
    if (temperature) {
        return std::tanh(energy / (2 * *temperature));
    }
    return energy == 0.0L ? 0.0L : std::copysign(1.0L, energy);
}

}  // namespace chainmark::fermion
