#pragma once

#include <optional>
#include <string>
#include <utility>
#include <vector>

#include "chainmark/reference/value.hpp"

namespace chainmark {

/// A number derived from one quantity along one axis of the grid.
struct Trend {
    std::string trend;     ///< "exponent" or "envelope"
    std::string quantity;  ///< the label
    std::string axis;      ///< "sites"
    std::string group;     ///< "even" or "odd": parity of the sizes that were used
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
///   power:    the exponent p of |value - limit| ~ L^-p. The local exponents of neighbouring sizes
///             drift with 1/L; the last two are continued linearly to 1/L = 0, and the error is the
///             distance from the last one.
///   envelope: the smallest c with |value - limit| <= c L^-exponent at every size, the error from
///             the bounds.
/// Nothing where fewer than three sizes lie outside their bounds, for a power law.
std::optional<Trend> approach_trend(const std::vector<SizePoint>& sizes,
                                    double limit,
                                    double limit_bound,
                                    const Approach& approach);

}  // namespace chainmark
