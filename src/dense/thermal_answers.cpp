#include "chainmark/dense/thermal_answers.hpp"

#include <cmath>

#include "chainmark/base/error.hpp"
#include "chainmark/base/numerics.hpp"

namespace chainmark::dense {
namespace {

Answer finite_or_undecided(Value value, std::vector<double> bound) {
    for (std::size_t e = 0; e < bound.size(); ++e) {
        const bool finite = std::isfinite(value.data[e].real()) &&
                            std::isfinite(value.data[e].imag()) && std::isfinite(bound[e]);
        if (!finite) {
            return Undecided{"the value or its error bound is beyond the range of a double"};
        }
    }
    Reference result;
    result.value = std::move(value);
    result.bound = std::move(bound);
    result.basis = Basis::residual;
    return result;
}

Answer number(const Estimate& estimate, double factor = 1.0) {
    const double value = estimate.value * factor;
    return finite_or_undecided(Value::number(value),
                               {estimate.bound * factor + epsilon * std::abs(value)});
}

/// Of a total or, with its twin, of the total divided by L.
Answer total_or_per_site(const Estimate& total, bool per_site, int length) {
    return number(total, per_site ? 1.0 / length : 1.0);
}

template <class Scalar>
Average measure(const Thermal<Scalar>& thermal,
                const FullSpectrum<Scalar>& spectrum,
                const std::vector<Product>& products,
                const Context& context) {
    const FullOperator a = spectrum.on_chain(products);
    return thermal.average(spectrum.diagonal(a, context), a.norm);
}

template <class Scalar>
Answer magnetization(const Problem& problem,
                     const Thermal<Scalar>& thermal,
                     const FullSpectrum<Scalar>& spectrum,
                     const Context& context) {
    if (spectrum.field_commutes()) {
        return number(thermal.magnetization(), 1.0 / spectrum.length());
    }
    const Average mean = measure(thermal, spectrum, mean_spin(Axis::z, problem.chain), context);
    return number({mean.value.real(), mean.bound});
}

template <class Scalar>
Answer susceptibility(const Problem& problem,
                      const Thermal<Scalar>& thermal,
                      const FullSpectrum<Scalar>& spectrum,
                      MagnetizationMatrix<Scalar>& kept) {
    const double length = spectrum.length();
    if (spectrum.field_commutes()) {
        const Estimate variance = thermal.magnetization_variance();
        return number(
            {variance.value / *problem.temperature, variance.bound / *problem.temperature},
            1.0 / length);
    }
    if (!kept) {
        kept = spectrum.magnetization_matrix();
    }
    return number(thermal.kubo_response(*kept, length * problem.chain.spin()), 1.0 / length);
}

template <class Scalar>
Answer spin_correlation(const Problem& problem,
                        const Thermal<Scalar>& thermal,
                        const FullSpectrum<Scalar>& spectrum,
                        const Options& options,
                        const Context& context) {
    const std::vector<Average> averages =
        measure_pairs(correlations(problem.chain, options),
                      options.connected,
                      problem.chain,
                      [&](const std::vector<Product>& products) {
                          return measure(thermal, spectrum, products, context);
                      });
    Value value = Value::array(std::vector<double>(averages.size()));
    value.complex = options.axes == Axes::plus_minus;
    std::vector<double> bounds;
    for (std::size_t e = 0; e < averages.size(); ++e) {
        value.data[e] = averages[e].value;
        bounds.push_back(averages[e].bound);
    }
    return finite_or_undecided(std::move(value), std::move(bounds));
}

}  // namespace

template <class Scalar>
Answer thermal_answer(const Problem& problem,
                      const FullSpectrum<Scalar>& spectrum,
                      MagnetizationMatrix<Scalar>& kept,
                      const Query& query,
                      const Context& context) {
    const Thermal<Scalar> thermal(spectrum.levels(problem.field), spectrum, *problem.temperature);
    const QuantityId id = query.spec->id;
    const int length = spectrum.length();
    if (id == QuantityId::free_energy || id == QuantityId::free_energy_per_site) {
        return total_or_per_site(
            thermal.free_energy(), id == QuantityId::free_energy_per_site, length);
    }
    if (id == QuantityId::energy || id == QuantityId::energy_per_site) {
        return total_or_per_site(thermal.energy(), id == QuantityId::energy_per_site, length);
    }
    if (!thermal.resolved()) {
        return Undecided{
            "the temperature is below the rounding of the levels that lie closest to the lowest"};
    }
    switch (id) {
        case QuantityId::entropy:
        case QuantityId::entropy_per_site:
            return total_or_per_site(thermal.entropy(), id == QuantityId::entropy_per_site, length);
        case QuantityId::specific_heat:
        case QuantityId::specific_heat_per_site:
            return total_or_per_site(
                thermal.specific_heat(), id == QuantityId::specific_heat_per_site, length);
        case QuantityId::magnetization:
            return magnetization(problem, thermal, spectrum, context);
        case QuantityId::susceptibility:
            return susceptibility(problem, thermal, spectrum, kept);
        default:
            CHAINMARK_EXPECTS(id == QuantityId::spin_correlation);
            return spin_correlation(problem, thermal, spectrum, query.options, context);
    }
}

template Answer thermal_answer(const Problem&,
                               const FullSpectrum<double>&,
                               MagnetizationMatrix<double>&,
                               const Query&,
                               const Context&);
template Answer thermal_answer(const Problem&,
                               const FullSpectrum<std::complex<double>>&,
                               MagnetizationMatrix<std::complex<double>>&,
                               const Query&,
                               const Context&);

}  // namespace chainmark::dense
