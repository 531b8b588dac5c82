#pragma once

#include <cmath>

namespace chainmark {

/// Two values may differ by absolute + relative * |c|.
struct Tolerance {
    double absolute = 1e-10;
    double relative = 1e-10;

    double allowed(double magnitude) const { return absolute + relative * std::abs(magnitude); }
    bool operator==(const Tolerance&) const = default;
};

}  // namespace chainmark
