#include "chainmark/report/run_report.hpp"

#include <cmath>

namespace chainmark {

Verdict overall_verdict(const RunReport& report) {
    if (count(report).quantities == 0) {
        return Verdict::undecided;
    }
    Verdict verdict = Verdict::single;
    for (const CaseResult& result : report.cases) {
        verdict = worse(verdict, result.verdict);
    }
    return verdict;
}

RunCounts count(const RunReport& report) {
    RunCounts counts;
    counts.cases = report.cases.size();
    for (const CaseResult& result : report.cases) {
        counts.points += result.points.size();
        counts.planned_points += result.points_planned;
        for (const PointResult& point : result.points) {
            for (const QuantityResult& quantity : point.quantities) {
                ++counts.quantities;
                ++counts.verdicts[static_cast<std::size_t>(quantity.comparison.verdict)];
            }
        }
    }
    return counts;
}

Special shown_status(const Value& value, std::size_t i) {
    const std::complex<double> x = value.data[i];
    const bool finite = std::isfinite(x.real()) && std::isfinite(x.imag());
    const Special special = value.special_at(i);
    return special == Special::none && !finite ? Special::undefined : special;
}

}  // namespace chainmark
