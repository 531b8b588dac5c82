#pragma once

#include <string>

#include "chainmark/report/run_report.hpp"

namespace chainmark {

/// The run as a long table, one row per element of every reference. Columns: case, every parameter
/// of any case, quantity (its label), index (from 0, empty for a number), route, value, status,
/// bound, basis, verdict. Values of the infinite chain beside a finite one have route `limit` and
/// no verdict; a quantity without any value has one row with its verdict.
std::string run_csv(const RunReport& report);

}  // namespace chainmark
