#pragma once

#include <string>
#include <vector>

#include "chainmark/fermion/angles.hpp"
#include "chainmark/reference/value.hpp"

/// From extended precision to references.
namespace chainmark::fermion {

/// A number before it is rounded to a double, with a bound on its error.
struct Bounded {
    Real value = 0.0L;
    Real error = 0.0L;
};

/// The bound after rounding to a double.
double rounded_bound(const Bounded& number);

Reference number_reference(const Bounded& number, Basis basis);
Reference array_reference(const std::vector<Bounded>& numbers, Basis basis);

/// A status in the place of a number. Exact.
Reference status_reference(Special special);
Reference text_reference(std::string text);

}  // namespace chainmark::fermion
