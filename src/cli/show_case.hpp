#pragma once

#include <string>

#include "chainmark/base/error.hpp"

/// What `show` says about a CASE argument (which may stand for several cases).
namespace chainmark::cli {

/// Batches with their routes, refusals and cost.
Checked<std::string> plan_of_case(const std::string& argument);

/// The canonical operator strings at the first point of every chain size, 60 of them at most.
Checked<std::string> terms_of_case(const std::string& argument);

/// The symmetries at the first point of every finite chain size.
Checked<std::string> symmetries_of_case(const std::string& argument);

}  // namespace chainmark::cli
