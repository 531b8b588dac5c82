#pragma once

#include <optional>
#include <string>
#include <vector>

#include <CLI/CLI.hpp>

namespace chainmark::cli {

struct RunOptions {
    std::vector<std::string> cases;
    std::string json;  ///< a file, "-", or empty
    std::string csv;
    std::vector<std::string> set;
    std::string only;
    std::optional<int> threads;  ///< default: all
    std::optional<double> memory_gib;
    std::optional<int> digits;  ///< default: what doubles hold
    bool quiet = false;
    bool no_color = false;
};

/// Adds the command; its options land in `options`.
CLI::App* add_run(CLI::App& app, RunOptions& options);

/// Computes and reports. `command_line` goes into the JSON. Returns the exit code; after an
/// interrupt it does not return.
int run(const RunOptions& options, const std::string& command_line);

}  // namespace chainmark::cli
