#pragma once

#include "chainmark/dense/observables.hpp"
#include "chainmark/dense/thermal.hpp"
#include "chainmark/reference/problem.hpp"
#include "chainmark/reference/value.hpp"

namespace chainmark::dense {

/// What the temperature of a problem does not change, kept for the next one of the same spectrum.
template <class Scalar>
using MagnetizationMatrix = std::optional<typename FullSpectrum<Scalar>::Vectors>;

/// Any quantity with a temperature, from the spectrum of the problem. `kept` is filled where it is
/// needed and empty; it must belong to the same spectrum.
template <class Scalar>
Answer thermal_answer(const Problem& problem,
                      const FullSpectrum<Scalar>& spectrum,
                      MagnetizationMatrix<Scalar>& kept,
                      const Query& query,
                      const Context& context);

extern template Answer thermal_answer(const Problem&,
                                      const FullSpectrum<double>&,
                                      MagnetizationMatrix<double>&,
                                      const Query&,
                                      const Context&);
extern template Answer thermal_answer(const Problem&,
                                      const FullSpectrum<std::complex<double>>&,
                                      MagnetizationMatrix<std::complex<double>>&,
                                      const Query&,
                                      const Context&);

}  // namespace chainmark::dense
