#pragma once

#include <memory>

#include "chainmark/report/run_report.hpp"

namespace chainmark::test {

/// A report made by hand, with the case it points to. The numbers are invented.
struct SampleRun {
    std::shared_ptr<Case> source;
    RunReport report;

    CaseResult& result() { return report.cases.front(); }
};

/// A case "invented-ring" of `sizes` with h = 0, 0.5 and the given quantities, without points.
SampleRun sample_run(const std::vector<double>& sizes, const std::vector<std::string>& quantities);

Reference reference(RouteId route, Value value, double bound, Basis basis = Basis::residual);

/// Adds a point with one result for the quantity at `index` of the case; the verdict is given.
QuantityResult& add_point(SampleRun& run,
                          double sites,
                          double h,
                          std::size_t index,
                          std::vector<Reference> references,
                          Verdict verdict);

}  // namespace chainmark::test
