#include <map>
#include <set>

#include <fmt/format.h>

#include "chainmark/base/words.hpp"
#include "chainmark/plan/work.hpp"

namespace chainmark {
namespace {

std::string cost_text(const Coverage& coverage) {
    return fmt::format(
        "about {:.2g} s, {}", std::max(coverage.seconds, 1e-3), size_text(coverage.bytes));
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

std::string bundle_text(const Bundle& bundle, const std::vector<Job>& jobs) {
    const auto& problems = bundle.batch.problems;
    std::set<double> fields;
    std::set<double> temperatures;
    for (const Problem& problem : problems) {
        fields.insert(problem.field);
        if (problem.temperature) {
            temperatures.insert(*problem.temperature);
        }
    }
    std::string text =
        fmt::format("  {}{}, {}{}\n",
                    to_string(problems.front().chain),
                    bundle.beside ? " beside the finite ones" : "",
                    counted(fields.size(), "field"),
                    temperatures.empty() ? "" : ", " + counted(temperatures.size(), "temperature"));
    for (const Job& job : jobs) {
        if (job.bundle == &bundle) {
            text += job_text(job);
        }
    }
    return text;
}

void count_block(std::vector<std::pair<std::string, int>>& blocks, const std::string& block) {
    for (auto& [text, count] : blocks) {
        if (text == block) {
            ++count;
            return;
        }
    }
    blocks.emplace_back(block, 1);
}

}  // namespace

std::string size_text(double bytes) {
    constexpr double kibi = 1024.0;
    if (bytes < kibi * kibi) {
        return fmt::format("{:.3g} KiB", std::max(bytes, 1.0) / kibi);
    }
    return bytes < 1000 * kibi * kibi ? fmt::format("{:.3g} MiB", bytes / kibi / kibi)
                                      : fmt::format("{:.2g} GiB", bytes / kibi / kibi / kibi);
}

std::string Plan::describe() const {
    std::string text;
    for (std::size_t c = 0; c < work_->cases.size(); ++c) {
        const CaseLayout& layout = work_->cases[c];
        text += fmt::format(
            "{}  {}\n  {} points\n", layout.source->name, layout.source->title, layout.rows.size());
        // Chains that differ in a coupling alone have the same text and are counted.
        std::vector<std::pair<std::string, int>> blocks;
        for (const auto& bundle : work_->bundles) {
            if (bundle->case_index == c) {
                count_block(blocks, bundle_text(*bundle, work_->jobs));
            }
        }
        for (const auto& [block, count] : blocks) {
            text += count == 1 ? block : fmt::format("  {} times:\n{}", count, block);
        }
    }
    return text;
}

}  // namespace chainmark
