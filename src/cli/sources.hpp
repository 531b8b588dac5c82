#pragma once

#include <string>
#include <vector>

#include "chainmark/base/error.hpp"
#include "chainmark/casefile/case.hpp"

namespace chainmark::cli {

/// The cases that CASE arguments stand for. A CASE is a file, a folder (every .toml in it and in
/// its folders, by name), or the name of an embedded case with or without .toml; what exists as
/// a path is taken as a path. Every error of every case.
Checked<std::vector<Case>> load_cases(const std::vector<std::string>& arguments,
                                      const std::vector<Setting>& settings);

/// "KEY=VALUE" taken apart. Fails with `bad_option` where either is missing.
Checked<std::vector<Setting>> parse_settings(const std::vector<std::string>& texts);

}  // namespace chainmark::cli
