#pragma once

#include <string>

#include "chainmark/report/run_report.hpp"

namespace chainmark {

struct TerminalOptions {
    bool colour = false;
    bool quiet = false;  ///< only what differs or is undecided, and the summary line
};

/// The run for people: per case a heading and one table per quantity with a row per point, then a
/// summary line. Values are shown to the digits that their bound supports. Of tables above 40
/// rows, those that agree are shown at both ends alone.
std::string run_text(const RunReport& report, const TerminalOptions& options);

}  // namespace chainmark
