#pragma once

#include <functional>
#include <vector>

#include "chainmark/base/context.hpp"
#include "chainmark/fermion/wick.hpp"
#include "chainmark/reference/problem.hpp"
#include "chainmark/reference/value.hpp"

/// Correlations, structure factors and strings in a mixture of Gaussian states.
namespace chainmark::fermion {

using StringMeasure = std::function<Average(const PauliString&)>;

/// sum_s weight_s rho_s, rho_s being known by its averages of strings. Each member of the mixture
/// has a definite parity or commutes with it, so that odd strings have no average.
class Mixture {
public:
    Mixture() = default;
    Mixture(const Mixture&) = delete;
    Mixture& operator=(const Mixture&) = delete;
    virtual ~Mixture() = default;

    /// visit(weight, measure) member by member.
    virtual void each(const std::function<void(Real, const StringMeasure&)>& visit) const = 0;

    /// Bound on |d<A>| / |A| from the error of H, the members being exact for a neighbouring H.
    virtual Real relative_error() const = 0;

    /// True where translation changes no member.
    virtual bool homogeneous() const = 0;
};

/// <Sz_j> for all j.
std::vector<Average> sz_profile(const Mixture& mixture, const Chain& chain, const Context& context);

/// spin_correlation: for each of `pairs`, then each `distance`.
std::vector<Average> correlations(const Mixture& mixture,
                                  const Chain& chain,
                                  const Options& options,
                                  const Context& context);

/// string_order, likewise.
std::vector<Average> order_strings(const Mixture& mixture,
                                   const Chain& chain,
                                   const Options& options,
                                   const Context& context);

/// structure_factor, for n = 0 ... L-1:
///   S(q) = (1/L) [D_0 + 2 Re sum_{r>0} exp(iqr) D_r],  D_r = sum_{i < L-r} <A_i B_{i+r}>,
/// since <A_j B_i> = <A_i B_j>*. Real.
std::vector<Average> structure_factors(const Mixture& mixture,
                                       const Chain& chain,
                                       const Options& options,
                                       const Context& context);

/// An array of averages; `complex`: as complex numbers.
Reference average_reference(const std::vector<Average>& averages, bool complex, Basis basis);

}  // namespace chainmark::fermion
