#pragma once

#include <string>
#include <vector>

#include "chainmark/base/error.hpp"
#include "chainmark/casefile/case.hpp"

namespace chainmark::cli {

/// The cases with only those quantities that the shell pattern `glob` names: one with a slash is
/// matched with "case/label", another with either. Cases without a quantity left are dropped; fails
/// with `bad_option`, listing every "case/label", where nothing is left.
Result<std::vector<Case>> select_quantities(std::vector<Case> cases, const std::string& glob);

}  // namespace chainmark::cli
