#pragma once

#include <string>

#include "chainmark/base/error.hpp"

namespace chainmark::cli {

/// The text of a case file that runs as it is, with every parameter of the family. Fails with
/// `unknown_name` where there is no such family.
Checked<std::string> example_case(const std::string& family_name);

}  // namespace chainmark::cli
