#pragma once

#include <memory>
#include <vector>

#include "chainmark/plan/plan.hpp"

/// Inside of a plan.
namespace chainmark {

/// A line of the result: a point with the quantities that are asked there.
struct Row {
    Parameters parameters;
    std::vector<std::size_t> quantities;  ///< indices into Case::quantities
};

struct CaseLayout {
    const Case* source = nullptr;
    std::vector<Row> rows;
};

/// Where an answer goes.
struct Target {
    std::size_t case_index = 0;
    std::size_t row = 0;
    std::size_t slot = 0;  ///< position in Row::quantities
};

/// Problems that share their terms, and the places their answers go to.
struct Bundle {
    Batch batch;
    std::vector<std::size_t> quantities;  ///< of each query: index into Case::quantities
    std::vector<std::vector<std::vector<Target>>> targets;  ///< [problem][query] -> where to
    bool beside = false;  ///< route `limit` shown beside finite chains, without a vote
    std::size_t case_index = 0;
};

/// One route on one bundle.
struct Job {
    const Bundle* bundle = nullptr;
    const Route* route = nullptr;
    Coverage coverage;
};

struct Plan::Work {
    std::vector<CaseLayout> cases;
    std::vector<std::unique_ptr<Bundle>> bundles;
    std::vector<Job> jobs;
};

/// "7.2 KiB", "31 MiB", "1.6 GiB".
std::string size_text(double bytes);

/// Trends of every quantity: over sizes beside the infinite chain, and of the infinite chain
/// towards its critical fields.
std::vector<Trend> case_trends(const CaseResult& result);

}  // namespace chainmark
