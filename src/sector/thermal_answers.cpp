#include "chainmark/sector/thermal_answers.hpp"

#include <cmath>

#include "chainmark/base/error.hpp"
#include "chainmark/base/numerics.hpp"

namespace chainmark::sector {
namespace {

Answer checked(Value value, std::vector<double> bounds) {
    for (std::size_t i = 0; i < bounds.size(); ++i) {
        if (!std::isfinite(value.data[i].real()) || !std::isfinite(value.data[i].imag()) ||
            !std::isfinite(bounds[i])) {
            return Undecided{
                "at this temperature the value or its error bound is beyond the range of a double"};
        }
    }
    Reference result;
    result.value = std::move(value);
    result.bound = std::move(bounds);
    result.basis = Basis::residual;
    result.complete = Completeness::proved;
    return result;
}

Answer number(const Estimate& estimate, double factor = 1.0) {
    const double value = estimate.value * factor;
    return checked(Value::number(value), {estimate.bound * factor + epsilon * std::abs(value)});
}

Answer correlation(const Problem& problem, const Options& options, const Thermal& thermal) {
    const Chain& chain = problem.chain;
    const bool complex = options.axes == Axes::plus_minus;
    Value value;
    std::vector<double> bounds;
    const std::vector<PairSum> sums = correlations(chain, options);
    value = Value::array(std::vector<double>(sums.size(), 0.0));
    value.complex = complex;
    for (std::size_t e = 0; e < sums.size(); ++e) {
        Average average = thermal.average(observable_of(sums[e], chain));
        if (options.connected) {
            std::vector<Average> factors;
            for (const Observable& factor : factors_of(sums[e], chain)) {
                factors.push_back(thermal.average(factor));
            }
            subtract_products(average, sums[e], factors);
        }
        value.data[e] = complex ? average.value : average.value.real();
        bounds.push_back(average.bound);
    }
    return checked(std::move(value), std::move(bounds));
}

}  // namespace

std::vector<Observable> thermal_observables(const Chain& chain,
                                            const std::vector<Query>& queries,
                                            bool sz_conserved) {
    std::vector<Observable> observables;
    for (const Query& query : queries) {
        if (query.spec->id == QuantityId::magnetization && !sz_conserved) {
            observables.push_back(mean_sz(chain));
        }
        if (query.spec->id != QuantityId::spin_correlation) {
            continue;
        }
        for (const PairSum& sum : correlations(chain, query.options)) {
            observables.push_back(observable_of(sum, chain));
            if (query.options.connected) {
                for (Observable& factor : factors_of(sum, chain)) {
                    observables.push_back(std::move(factor));
                }
            }
        }
    }
    return observables;
}

Answer thermal_answer(const Problem& problem,
                      const Query& query,
                      const Thermal& thermal,
                      bool sz_conserved) {
    const double per_site = 1.0 / problem.chain.length();
    switch (query.spec->id) {
        case QuantityId::free_energy:
            return number(thermal.free_energy());
        case QuantityId::free_energy_per_site:
            return number(thermal.free_energy(), per_site);
        case QuantityId::energy:
            return number(thermal.energy());
        case QuantityId::energy_per_site:
            return number(thermal.energy(), per_site);
        case QuantityId::entropy:
            return number(thermal.entropy());
        case QuantityId::entropy_per_site:
            return number(thermal.entropy(), per_site);
        case QuantityId::specific_heat:
            return number(thermal.specific_heat());
        case QuantityId::specific_heat_per_site:
            return number(thermal.specific_heat(), per_site);
        case QuantityId::magnetization: {
            if (sz_conserved) {
                return number(thermal.magnetization(), per_site);
            }
            const Average mean = thermal.average(mean_sz(problem.chain));
            return number({mean.value.real(), mean.bound});
        }
        case QuantityId::susceptibility:
            return sz_conserved
                       ? number(thermal.magnetization_variance(), per_site / *problem.temperature)
                       : number(thermal.response(), per_site);
        default:
            CHAINMARK_EXPECTS(query.spec->id == QuantityId::spin_correlation);
            return correlation(problem, query.options, thermal);
    }
}

}  // namespace chainmark::sector
