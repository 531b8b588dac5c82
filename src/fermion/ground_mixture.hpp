#pragma once

#include <memory>
#include <vector>

#include "chainmark/fermion/ground_space.hpp"
#include "chainmark/fermion/spin_averages.hpp"

namespace chainmark::fermion {

/// One member of a mixture by itself.
class SingleMember : public Mixture {
public:
    SingleMember(const Mixture& mixture, std::size_t member) : mixture_(mixture), member_(member) {}

    void each(const std::function<void(Real, const StringMeasure&)>& visit) const override;
    Real relative_error() const override { return mixture_.relative_error(); }
    bool homogeneous() const override { return mixture_.homogeneous(); }

private:
    const Mixture& mixture_;
    std::size_t member_;
};

/// Tr(P A)/dim over a ground space: its occupation states, an orthonormal basis, in equal parts.
/// What was passed in must outlive it.
class GroundMixture : public Mixture {
public:
    GroundMixture(const Solution& solution,
                  const Levels& levels,
                  const GroundSpace& ground,
                  const Context& context);

    void each(const std::function<void(Real, const StringMeasure&)>& visit) const override;

    /// A space turned by an angle of sine t moves averages by at most 2 |A| t.
    Real relative_error() const override { return 2 * tilt_; }
    bool homogeneous() const override;

    Real tilt() const { return tilt_; }

    /// The covariance of a single ground state.
    WickState<double>& single() const;

private:
    struct Member {
        std::unique_ptr<GaussianState> state;
        std::unique_ptr<WickState<double>> wick;
    };

    Member member(const State& state) const;
    bool kept() const;

    const Solution& solution_;
    const Levels& levels_;
    const GroundSpace& ground_;
    const Context& context_;
    Real tilt_ = 0.0L;
    mutable std::vector<Member> members_;  ///< kept from query to query where they fit
};

}  // namespace chainmark::fermion
