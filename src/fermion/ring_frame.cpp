#include <cmath>
#include <map>

#include "chainmark/fermion/closed_frames.hpp"

namespace chainmark::fermion {
namespace {

using Complex = std::complex<Real>;

std::size_t at(std::int64_t i) {
    return static_cast<std::size_t>(i);
}

/// Sums of complex numbers with little rounding.
class ComplexSum {
public:
    void add(Complex x) {
        real_.add(x.real());
        imaginary_.add(x.imag());
    }
    Complex value() const { return {real_.value(), imaginary_.value()}; }

private:
    CompensatedSum real_;
    CompensatedSum imaginary_;
};

Complex unit(std::int64_t p, std::int64_t q) {
    return {cos_pi(p, q), sin_pi(p, q)};
}

struct RingModes {
    MomentumGrid grid;
    std::vector<PairAngle> angles;  ///< empty where nothing is paired
    Real error = 0.0L;
    bool real_pairs = true;

    bool paired() const { return !angles.empty(); }
};

class RingState : public GaussianState {
public:
    RingState(const RingModes& modes, const std::vector<Real>& s)
        : grid_(modes.grid), parity_(pure_parity(s, 1)) {
        std::vector<Real> normal = s;
        real_ = grid_.shift == 0.0L && modes.real_pairs;
        for (int m = 0; m < grid_.sites; ++m) {
            const Real other = s[at(grid_.partner(m))];
            real_ = real_ && s[at(m)] == other;
            if (modes.paired()) {
                const PairAngle& angle = modes.angles[at(m)];
                const bool single = grid_.partner(m) == m;
                // 1 - 2 n_k = u^2 s_k - v^2 s_-k with u^2, v^2 = (1 +- cosine)/2.
                normal[at(m)] =
                    single ? s[at(m)] : (angle.cosine * (s[at(m)] + other) + s[at(m)] - other) / 2;
                anomalous_.push_back(-std::conj(angle.sine) * (s[at(m)] + other) / 4.0L);
            }
        }
        runs_ = runs_of(normal);
        error_ = error_of_wave + modes.error;
    }

    int sites() const override { return grid_.sites; }

    MajoranaBlock block(int i, int j) const override {
        const auto known = blocks_.find(j - i);
        if (known != blocks_.end()) {
            return known->second;
        }
        const std::int64_t r = j - i;
        Complex normal = normal_sum(r);
        Complex anomalous = anomalous_sum(r);
        if (real_) {
            normal.imag(0.0L);
            anomalous.imag(0.0L);
        }
        return blocks_[j - i] = majorana_block(normal, anomalous);
    }

    RealMatrix covariance(int, int count) const override {
        const Eigen::Index size = count;
        RealMatrix gamma(2 * size, 2 * size);
        for (int r = 0; r < count; ++r) {
            const MajoranaBlock own = block(0, r);
            for (Eigen::Index i = 0; i + r < size; ++i) {
                for (Eigen::Index a = 0; a < 2; ++a) {
                    for (Eigen::Index b = 0; b < 2; ++b) {
                        const auto value = static_cast<double>(own[at(a)][at(b)]);
                        gamma(2 * (i + r) + b, 2 * i + a) = -value;
                        gamma(2 * i + a, 2 * (i + r) + b) = value;
                    }
                }
            }
        }
        return gamma;
    }

    Real error(int majoranas) const override { return static_cast<Real>(majoranas) * error_; }
    bool homogeneous() const override { return true; }
    bool bipartite() const override { return real_; }
    std::optional<int> parity() const override { return parity_; }

private:
    /// (1/L) sum over m of normal_m exp(i k_m r); a run's geometric sum is
    ///   exp(i pi (a+b-1+half_steps) r/L) sin(pi (b-a) r/L) / sin(pi r/L).
    Complex normal_sum(std::int64_t r) const {
        const std::int64_t sites = grid_.sites;
        const Real wave = sin_pi(r, sites);
        ComplexSum sum;
        for (const Run& run : runs_) {
            const std::int64_t count = run.b - run.a;
            const Real size = count == 1 || r % sites == 0 ? static_cast<Real>(count)
                                                           : sin_pi(count * r, sites) / wave;
            sum.add(run.value * size * unit((run.a + run.b - 1 + grid_.half_steps) * r, sites));
        }
        return turned(sum.value(), r);
    }

    Complex anomalous_sum(std::int64_t r) const {
        ComplexSum sum;
        for (std::size_t m = 0; m < anomalous_.size(); ++m) {
            const std::int64_t p = grid_.numerator(static_cast<int>(m));
            sum.add(anomalous_[m] * unit(p * r, grid_.sites));
        }
        return turned(sum.value(), r);
    }

    Complex turned(Complex sum, std::int64_t r) const {
        const Real angle = grid_.shift * static_cast<Real>(r);
        return sum * Complex(std::cos(angle), std::sin(angle)) / static_cast<Real>(grid_.sites);
    }

    MomentumGrid grid_;
    std::vector<Run> runs_;
    std::vector<Complex> anomalous_;
    bool real_ = true;
    Real error_ = 0.0L;
    std::optional<int> parity_;
    mutable std::map<int, MajoranaBlock> blocks_;  ///< those asked for, by j - i
};

class RingFrame : public ModeFrame {
public:
    explicit RingFrame(RingModes modes) : modes_(std::move(modes)) {}

    int sites() const override { return modes_.grid.sites; }

    std::unique_ptr<GaussianState> filled(std::vector<Real> s) const override {
        return std::make_unique<RingState>(modes_, s);
    }

    /// n_k + n_-k - 1 = cosine (b+_k b_k + b+_-k b_-k - 1) + |sine| (b+_k b+_-k + h.c.) up to the
    /// phase of b.
    FieldForm field_form() const override {
        FieldForm form;
        form.diagonal.assign(at(sites()), 1.0L);
        for (std::size_t m = 0; m < modes_.angles.size(); ++m) {
            const PairAngle& angle = modes_.angles[m];
            const int partner = modes_.grid.partner(static_cast<int>(m));
            if (at(partner) == m) {
                continue;
            }
            form.diagonal[m] = angle.cosine;
            if (m < at(partner) && angle.sine != 0.0L) {
                form.mixed.push_back({.k = static_cast<int>(m),
                                      .l = partner,
                                      .hop = {},
                                      .pair = static_cast<double>(std::abs(angle.sine))});
            }
        }
        form.error = static_cast<Real>(sites()) * (modes_.error + double_rounding);
        return form;
    }

private:
    RingModes modes_;
};

}  // namespace

std::unique_ptr<ModeFrame> plane_waves(const MomentumGrid& grid) {
    return std::make_unique<RingFrame>(RingModes{.grid = grid, .angles = {}});
}

std::unique_ptr<ModeFrame> paired_waves(const MomentumGrid& grid,
                                        std::vector<PairAngle> angles,
                                        Real error,
                                        bool real_pairs) {
    return std::make_unique<RingFrame>(RingModes{
        .grid = grid, .angles = std::move(angles), .error = error, .real_pairs = real_pairs});
}

}  // namespace chainmark::fermion
