#include <cmath>

#include "chainmark/fermion/closed_frames.hpp"

namespace chainmark::fermion {
namespace {

using Complex = std::complex<Real>;

std::size_t at(std::int64_t i) {
    return static_cast<std::size_t>(i);
}

/// With sin a sin b = [cos(a-b) - cos(a+b)]/2 every element is a difference of two sums
///   sum over m = a ... b-1 of cos(m x) = sin((b-a) x/2) cos((a+b-1) x/2) / sin(x/2).
class StandingState : public GaussianState {
public:
    StandingState(const std::vector<Real>& s, std::complex<double> hop)
        : period_(static_cast<std::int64_t>(s.size()) + 1),
          runs_(runs_of(s)),
          hop_(hop),
          parity_(pure_parity(s, 1)) {
        for (const Run& run : runs_) {
            total_ += run.value * static_cast<Real>(run.b - run.a);
        }
    }

    int sites() const override { return static_cast<int>(period_ - 1); }

    MajoranaBlock block(int i, int j) const override {
        const Real value = (cosine_sum(i - j) - cosine_sum(i + j + 2)) / static_cast<Real>(period_);
        return majorana_block(value * phase(i - j), 0.0L);
    }

    Real error(int majoranas) const override {
        const Real turn = bipartite() ? 0.0L : 8 * real_epsilon * static_cast<Real>(period_);
        return static_cast<Real>(majoranas) * (2 * error_of_wave + turn);
    }
    bool bipartite() const override { return hop_.imag() == 0.0; }
    std::optional<int> parity() const override { return parity_; }

private:
    /// exp(i turn r)
    Complex phase(int r) const {
        if (hop_.imag() == 0.0) {
            return hop_.real() < 0 && r % 2 != 0 ? -1.0L : 1.0L;
        }
        return std::polar(1.0L, std::arg(Complex(hop_)) * static_cast<Real>(r));
    }

    /// q in x = pi q/(L+1); labels count from 0, wave numbers from 1.
    Real cosine_sum(std::int64_t q) const {
        if (q == 0) {
            return total_;
        }
        CompensatedSum sum;
        for (const Run& run : runs_) {
            sum.add(run.value * sin_pi((run.b - run.a) * q, 2 * period_) *
                    cos_pi((run.a + run.b + 1) * q, 2 * period_) / sin_pi(q, 2 * period_));
        }
        return sum.value();
    }

    std::int64_t period_;
    std::vector<Run> runs_;
    std::complex<double> hop_;
    Real total_ = 0.0L;
    std::optional<int> parity_;
};

class StandingFrame : public ModeFrame {
public:
    StandingFrame(int sites, std::complex<double> hop) : sites_(sites), hop_(hop) {}

    int sites() const override { return sites_; }

    std::unique_ptr<GaussianState> filled(std::vector<Real> s) const override {
        return std::make_unique<StandingState>(s, hop_);
    }

    FieldForm field_form() const override {
        return {.diagonal = std::vector<Real>(at(sites_), 1.0L), .mixed = {}, .error = 0.0L};
    }

private:
    int sites_;
    std::complex<double> hop_;
};

}  // namespace

std::unique_ptr<ModeFrame> standing_waves(int sites, std::complex<double> hop) {
    return std::make_unique<StandingFrame>(sites, hop);
}

}  // namespace chainmark::fermion
