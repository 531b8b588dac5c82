#pragma once

#include <string>
#include <vector>

#include <CLI/CLI.hpp>

namespace chainmark::cli {

struct ShowOptions {
    std::string topic;             ///< "families", ...
    std::string argument;          ///< the CASE or FAMILY of topics that take one
    std::vector<std::string> set;  ///< KEY=VALUE for topics about a CASE
    std::string json;              ///< a file or "-" for JSON instead of text
};

/// Adds the command with a subcommand for every topic.
void add_show(CLI::App& app, ShowOptions& options);

/// Prints the topic. Returns the exit code.
int show(const ShowOptions& options);

}  // namespace chainmark::cli
