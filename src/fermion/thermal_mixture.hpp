#pragma once

#include <memory>
#include <vector>

#include "chainmark/fermion/spin_averages.hpp"
#include "chainmark/fermion/thermal_strings.hpp"

namespace chainmark::fermion {

/// The thermal state: both classes by their weights, or one for both where they share their modes.
class ThermalMixture : public Mixture {
public:
    /// The sums must outlive it.
    explicit ThermalMixture(const Thermal& thermal);

    void each(const std::function<void(Real, const StringMeasure&)>& visit) const override;
    Real relative_error() const override;
    bool homogeneous() const override { return members_.front().strings->homogeneous(); }

private:
    struct Member {
        Real weight;
        std::unique_ptr<ClassStrings> strings;
    };

    const Thermal& thermal_;
    Real left_out_ = 0.0L;  ///< weight of classes that were not looked at
    std::vector<Member> members_;
};

}  // namespace chainmark::fermion
