#pragma once

#include <string>

#include "chainmark/casefile/case.hpp"
#include "chainmark/reference/quantity.hpp"

/// The words of the case format, for output.
namespace chainmark {

/// "open", "periodic", "antiperiodic", "twist 0.4".
std::string boundary_text(const Case& c);

/// "infinite" for sites = "infinite", else the number.
std::string parameter_text(const std::string& name, double value);

/// "distance = [1, 2, 3], connected": the options that differ from their defaults.
std::string options_text(const Query& query);

}  // namespace chainmark
