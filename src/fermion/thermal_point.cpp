#include "chainmark/fermion/thermal_point.hpp"

#include <cmath>

#include "chainmark/base/error.hpp"

namespace chainmark::fermion {

bool needs_sz(QuantityId id) {
    return id == QuantityId::magnetization || id == QuantityId::susceptibility;
}

ThermalPoint::ThermalPoint(const Solution& solution,
                           const ThermalModes& modes,
                           const Problem& problem,
                           const Context& context)
    : solution_(solution),
      problem_(problem),
      context_(context),
      thermal_(modes, problem.temperature.value()) {}

Answer ThermalPoint::answer(const Query& query) {
    const QuantityId id = query.spec->id;
    if (id == QuantityId::free_energy || id == QuantityId::free_energy_per_site) {
        return number(thermal_.free_energy(), id == QuantityId::free_energy_per_site);
    }
    if (!thermal_.resolved()) {
        return Undecided{"the temperature is not far above the errors of the levels"};
    }
    switch (id) {
        case QuantityId::energy:
        case QuantityId::energy_per_site:
            return number(thermal_.energy(), id == QuantityId::energy_per_site);
        case QuantityId::entropy:
        case QuantityId::entropy_per_site:
            return number(thermal_.entropy(), id == QuantityId::entropy_per_site);
        case QuantityId::specific_heat:
        case QuantityId::specific_heat_per_site:
            return number(thermal_.specific_heat(), id == QuantityId::specific_heat_per_site);
        case QuantityId::magnetization:
            return number(thermal_.magnetization(), true);
        case QuantityId::susceptibility:
            return number(thermal_.response(), true);
        default:
            CHAINMARK_EXPECTS(id == QuantityId::spin_correlation);
            return spin_correlation(query.options);
    }
}

Answer ThermalPoint::number(const Bounded& total, bool per_site) const {
    const Real sites = per_site ? static_cast<Real>(problem_.chain.length()) : 1.0L;
    const Real value = total.value / sites;
    const Bounded result{value, total.error / sites + real_epsilon * std::abs(value)};
    if (!std::isfinite(static_cast<double>(result.value)) ||
        !std::isfinite(rounded_bound(result))) {
        return Undecided{"the value or its error bound is beyond the range of a double"};
    }
    return number_reference(result, basis());
}

Answer ThermalPoint::spin_correlation(const Options& options) {
    if (!mixture_) {
        mixture_.emplace(thermal_);
    }
    return average_reference(correlations(*mixture_, problem_.chain, options, context_),
                             options.axes == Axes::plus_minus,
                             basis());
}

}  // namespace chainmark::fermion
