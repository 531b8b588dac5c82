#pragma once

#include <optional>
#include <string>
#include <utility>
#include <vector>

#include "chainmark/reference/value.hpp"

namespace chainmark {

/// A number derived from one quantity along one axis of the grid.
struct Trend {
    std::string trend;     ///< "exponent", "envelope", "decay_length", "central_charge", "velocity"
    std::string quantity;  ///< the label
    std::string axis;      ///< "sites" or "h"
    std::string group;  ///< "even" or "odd" sizes; "below 1" or "above 1": side of a critical |h|
    std::vector<std::pair<std::string, double>> parameters;  ///< what was held fixed
    double value = 0.0;
    double error = 0.0;
    std::optional<double> expected;
};

/// One finite size beside the infinite chain.
struct SizePoint {
    int sites = 0;
    double value = 0.0;
    double bound = 0.0;
};

/// How values of sizes of one parity approach the infinite chain's `limit`, by the law expected.
///   power:       the exponent p of |value - limit| ~ L^-p. The local exponents of neighbouring
///                sizes drift with 1/L; the last two are continued linearly to 1/L = 0, and the
///                error is the distance from the last one, and what the bounds leave open.
///   envelope:    the smallest c with |value - limit| <= c L^-exponent at every size, the error
///                from the bounds.
///   exponential: the decay length of |value - limit| ~ L^-p exp(-L/length), whose local slopes
///                drift with 1/L: the last three continued by a parabola, the error being what it
///                changed against a line.
/// Besides, the amplitude that the approach names, for even sizes: polynomials in 1/L^2 (with a
/// surface term in 1/L) through the last three numbers, the error being what the last order
/// changed. Nothing where fewer than three sizes lie outside their bounds.
std::vector<Trend> approach_trends(const std::vector<SizePoint>& sizes,
                                   double limit,
                                   double limit_bound,
                                   const Approach& approach);

/// A value at a distance from a critical point.
struct CriticalPoint {
    double distance = 0.0;
    double value = 0.0;
    double bound = 0.0;
};

/// The exponent of |value - law.at_point| ~ distance^exponent from the points within half of
/// law.field: local exponents of neighbours, continued linearly to distance 0; the error is the
/// distance from the last one, and what the bounds leave open. Nothing for fewer than three points.
std::optional<Trend> critical_trend(const std::vector<CriticalPoint>& points,
                                    const CriticalLaw& law);

}  // namespace chainmark
