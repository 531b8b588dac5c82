#include <map>

#include <fmt/format.h>

#include "chainmark/plan/work.hpp"

namespace chainmark {
namespace {

std::string cost_text(const Coverage& coverage) {
    constexpr double mebibyte = 1024.0 * 1024;
    return fmt::format("about {:.2g} s, {:.2g} MiB",
                       std::max(coverage.seconds, 1e-3),
                       std::max(coverage.bytes / mebibyte, 1e-3));
}

/// What one route does for one bundle: covered labels, and refusals by reason.
std::string job_text(const Job& job) {
    std::vector<std::string> covered;
    std::map<std::string, std::vector<std::string>> refused;
    for (std::size_t q = 0; q < job.bundle->batch.queries.size(); ++q) {
        const std::string& label = job.bundle->batch.queries[q].label;
        const std::string& reason = job.coverage.refusal[q];
        (reason.empty() ? covered : refused[reason]).push_back(label);
    }
    std::string text;
    if (!covered.empty()) {
        text += fmt::format("    {:<8} {} ({})\n",
                            to_string(job.route->id),
                            fmt::join(covered, ", "),
                            cost_text(job.coverage));
    }
    for (const auto& [reason, labels] : refused) {
        text += fmt::format(
            "    {:<8} not {}: {}\n", to_string(job.route->id), fmt::join(labels, ", "), reason);
    }
    return text;
}

}  // namespace

std::string Plan::describe() const {
    std::string text;
    for (std::size_t c = 0; c < work_->cases.size(); ++c) {
        const CaseLayout& layout = work_->cases[c];
        text += fmt::format(
            "{}  {}\n  {} points\n", layout.source->name, layout.source->title, layout.rows.size());
        const Bundle* last = nullptr;
        for (const Job& job : work_->jobs) {
            if (job.bundle->case_index != c) {
                continue;
            }
            if (job.bundle != last) {
                const auto& problems = job.bundle->batch.problems;
                text += fmt::format("  {}{}, {} field{}\n",
                                    to_string(problems.front().chain),
                                    job.bundle->beside ? " beside the finite ones" : "",
                                    problems.size(),
                                    problems.size() == 1 ? "" : "s");
                last = job.bundle;
            }
            text += job_text(job);
        }
    }
    return text;
}

}  // namespace chainmark
