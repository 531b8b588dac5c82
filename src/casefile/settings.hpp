#pragma once

#include <string>
#include <vector>

#include "chainmark/base/error.hpp"

namespace chainmark {

/// Where a setting's key stands in a case: ["system", "sites"], or ["title"] at the top.
using KeyPath = std::vector<std::string>;

/// The path that KEY of --set KEY=VALUE means, for a case whose [parameters] has the keys
/// `parameters`. Fails with `bad_option`; the error's place is left empty.
Result<KeyPath> setting_path(const std::string& key, const std::vector<std::string>& parameters);

}  // namespace chainmark
