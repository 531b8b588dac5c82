#include "chainmark/fermion/thermal_mixture.hpp"

namespace chainmark::fermion {

ThermalMixture::ThermalMixture(const Thermal& thermal) : thermal_(thermal) {
    constexpr Real negligible = 1e-20L;
    const ThermalModes& modes = thermal.modes();
    for (std::size_t c = 0; c < 2; ++c) {
        const Real weight = modes.shared ? (c == 0 ? 1.0L : 0.0L) : thermal.weight(c);
        if (weight < negligible) {
            left_out_ += modes.shared ? 0.0L : weight;
            continue;
        }
        members_.push_back(
            {weight,
             std::make_unique<ClassStrings>(modes.classes[c], thermal.occupied(c), !modes.shared)});
    }
}

void ThermalMixture::each(const std::function<void(Real, const StringMeasure&)>& visit) const {
    for (const Member& own : members_) {
        visit(own.weight, [&](const PauliString& string) { return own.strings->average(string); });
    }
}

Real ThermalMixture::relative_error() const {
    return thermal_.relative_error() + left_out_;
}

}  // namespace chainmark::fermion
