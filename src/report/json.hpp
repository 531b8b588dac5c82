#pragma once

#include <string>

#include "chainmark/report/run_report.hpp"

namespace chainmark {

/// The run as JSON, format 1. Doubles read back identically. What is no finite number is never
/// written as one: a value without a number is null with a `status`, an unknown bound is null.
std::string run_json(const RunReport& report);

}  // namespace chainmark
