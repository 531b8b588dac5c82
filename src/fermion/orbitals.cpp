#include "chainmark/fermion/orbitals.hpp"

#include <algorithm>
#include <complex>
#include <cstdint>

namespace chainmark::fermion {
namespace {

/// A run's geometric sum is a product of three sines or cosines and a quotient.
constexpr Real error_per_run = 64 * real_epsilon;

/// sum over m = a ... b-1 of exp(2 pi i m r/L)
///   = exp(i pi (a+b-1) r/L) sin(pi (b-a) r/L) / sin(pi r/L),  r not a multiple of L.
class PlaneWaves : public Orbitals {
public:
    explicit PlaneWaves(int sites) : sites_(sites) {}

    Real density(const Occupation& occupied, int) const override {
        return static_cast<Real>(occupied.particles()) / static_cast<Real>(sites_);
    }

    Real coherence_squared(const Occupation& occupied, int i, int j) const override {
        const std::int64_t r = j - i;
        std::complex<Real> sum;
        occupied.each_run([&](std::int64_t a, std::int64_t b) {
            const Real size = sin_pi((b - a) * r, sites_);
            const std::int64_t turn = (a + b - 1) * r;
            sum += size * std::complex<Real>(cos_pi(turn, sites_), sin_pi(turn, sites_));
        });
        return std::norm(sum / (static_cast<Real>(sites_) * sin_pi(r, sites_)));
    }

    Real error(const Occupation& occupied) const override {
        return error_per_run * static_cast<Real>(occupied.runs() + 1);
    }

    bool homogeneous() const override { return true; }

private:
    std::int64_t sites_;
};

/// With sin a sin b = [cos(a-b) - cos(a+b)]/2 every G_ij is a difference of two sums
///   sum over m = a ... b-1 of cos(m x) = sin((b-a) x/2) cos((a+b-1) x/2) / sin(x/2).
class StandingWaves : public Orbitals {
public:
    explicit StandingWaves(int sites) : period_(sites + 1) {}

    Real density(const Occupation& occupied, int site) const override {
        return green(occupied, site, site);
    }

    Real coherence_squared(const Occupation& occupied, int i, int j) const override {
        const Real value = green(occupied, i, j);
        return value * value;
    }

    Real error(const Occupation& occupied) const override {
        return 2 * error_per_run * static_cast<Real>(occupied.runs() + 1);
    }

private:
    /// q in x = pi q/(L+1); labels count from 0, wave numbers from 1.
    Real cosine_sum(const Occupation& occupied, std::int64_t q) const {
        if (q == 0) {
            return static_cast<Real>(occupied.particles());
        }
        Real sum = 0.0L;
        occupied.each_run([&](std::int64_t a, std::int64_t b) {
            sum += sin_pi((b - a) * q, 2 * period_) * cos_pi((a + b + 1) * q, 2 * period_);
        });
        return sum / sin_pi(q, 2 * period_);
    }

    Real green(const Occupation& occupied, int i, int j) const {
        const Real difference = cosine_sum(occupied, i - j) - cosine_sum(occupied, i + j + 2);
        return difference / static_cast<Real>(period_);
    }

    std::int64_t period_;
};

}  // namespace

Occupation::Occupation(const std::vector<bool>& occupied) {
    bool inside = false;
    for (std::size_t label = 0; label < occupied.size(); ++label) {
        if (occupied[label] != inside) {
            edges_.push_back(static_cast<int>(label));
            inside = !inside;
        }
    }
    if (inside) {
        edges_.push_back(static_cast<int>(occupied.size()));
    }
}

void Occupation::toggle_edge(int label) {
    const auto at = std::lower_bound(edges_.begin(), edges_.end(), label);
    if (at != edges_.end() && *at == label) {
        edges_.erase(at);
    } else {
        edges_.insert(at, label);
    }
}

void Occupation::flip(int label) {
    toggle_edge(label);
    toggle_edge(label + 1);
}

int Occupation::particles() const {
    int count = 0;
    each_run([&](int a, int b) { count += b - a; });
    return count;
}

std::unique_ptr<Orbitals> plane_waves(int sites) {
    return std::make_unique<PlaneWaves>(sites);
}

std::unique_ptr<Orbitals> standing_waves(int sites) {
    return std::make_unique<StandingWaves>(sites);
}

}  // namespace chainmark::fermion
