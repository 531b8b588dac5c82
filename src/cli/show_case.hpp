#pragma once

#include <string>
#include <vector>

#include "chainmark/base/error.hpp"

/// What `show` says about a CASE argument (which may stand for several cases), with the texts
/// KEY=VALUE of `set` applied.
namespace chainmark::cli {

/// Batches with their routes, refusals and cost.
Checked<std::string> plan_of_case(const std::string& argument, const std::vector<std::string>& set);

/// The canonical operator strings at the first point of every chain size, 60 of them at most.
Checked<std::string> terms_of_case(const std::string& argument,
                                   const std::vector<std::string>& set);

/// The symmetries at the first point of every finite chain size.
Checked<std::string> symmetries_of_case(const std::string& argument,
                                        const std::vector<std::string>& set);

}  // namespace chainmark::cli
