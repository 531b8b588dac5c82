#pragma once

#include <optional>

#include "chainmark/fermion/ground_space.hpp"
#include "chainmark/fermion/thermal_mixture.hpp"
#include "chainmark/fermion/thermal_modes.hpp"

namespace chainmark::fermion {

/// True for the quantities that need sum_j Sz_j in the modes.
bool needs_sz(QuantityId id);

/// Answers at one field and temperature of a solved chain. What was passed in must outlive it.
class ThermalPoint {
public:
    ThermalPoint(const Solution& solution,
                 const ThermalModes& modes,
                 const Problem& problem,
                 const Context& context);

    /// The query must be one that the route covers.
    Answer answer(const Query& query);

private:
    Answer number(const Bounded& total, bool per_site) const;
    Answer spin_correlation(const Options& options);
    Basis basis() const { return solution_.measured() ? Basis::residual : Basis::rounding; }

    const Solution& solution_;
    const Problem& problem_;
    const Context& context_;
    Thermal thermal_;
    std::optional<ThermalMixture> mixture_;
};

}  // namespace chainmark::fermion
