#pragma once

#include <array>
#include <string>
#include <vector>

#include "chainmark/plan/plan.hpp"

namespace chainmark {

/// Where the numbers of a run come from.
struct Provenance {
    std::string version;
    std::string commit;
    std::string compiler;
    int threads = 1;
    double memory_gib = 0.0;  ///< what big arrays might take together
    std::string command_line;
    std::string started;        ///< UTC, ISO 8601
    double wall_seconds = 0.0;  ///< of the computation
};

/// Everything that is to be said about a run.
struct RunReport {
    Provenance provenance;
    std::vector<CaseResult> cases;
    bool interrupted = false;  ///< the cases then hold finished points alone
};

/// The worst verdict of the cases; `undecided` where not one quantity was answered.
Verdict overall_verdict(const RunReport& report);

struct RunCounts {
    std::size_t cases = 0;
    std::size_t points = 0;
    std::size_t planned_points = 0;
    std::size_t quantities = 0;
    std::array<std::size_t, 4> verdicts{};  ///< indexed by Verdict

    std::size_t with(Verdict verdict) const { return verdicts[static_cast<std::size_t>(verdict)]; }
};

RunCounts count(const RunReport& report);

/// The status of element i as it is shown: `undefined` also for a NaN or infinity that a route let
/// through as an ordinary number.
Special shown_status(const Value& value, std::size_t i);

}  // namespace chainmark
