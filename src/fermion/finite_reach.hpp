#pragma once

#include <string>

#include "chainmark/fermion/form.hpp"
#include "chainmark/reference/problem.hpp"
#include "chainmark/reference/quantity.hpp"

/// What is computed from covariances on finite chains.
namespace chainmark::fermion {

/// Why a correlation, a structure factor, a string or an entropy is not covered; empty where it is.
std::string average_refusal(const Query& query, const QuadraticForm& form);

/// Rough seconds and bytes one of them takes at one point, once the modes are known.
struct AverageCost {
    double seconds = 0.0;
    double bytes = 0.0;
};
AverageCost average_cost(const Query& query, const QuadraticForm& form, bool thermal);

}  // namespace chainmark::fermion
