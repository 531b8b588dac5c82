#pragma once

#include <memory>
#include <span>
#include <string>
#include <utility>
#include <vector>

#include "chainmark/base/context.hpp"
#include "chainmark/base/error.hpp"
#include "chainmark/casefile/case.hpp"
#include "chainmark/compare/compare.hpp"
#include "chainmark/compare/trend.hpp"
#include "chainmark/reference/problem.hpp"
#include "chainmark/reference/route.hpp"
#include "chainmark/reference/value.hpp"

/// From a case to answers: points, batches, the routes that cover them, verdicts.
namespace chainmark {

/// Every route of this build, in the order in which they are shown.
std::span<const Route> routes();

/// One choice of the grid's parameters, by name, in the order of the case's axes.
using Parameters = std::vector<std::pair<std::string, double>>;

/// All points of the grid in written order, the last axis fastest. Fails with `grid_too_large`
/// above 10^5 points, and where zipped lists differ in length.
Result<std::vector<Parameters>> grid_points(const Case& c);

/// The problem at one point. Fails with a place in the case file where the chain cannot carry it.
Result<Problem> build_problem(const Case& c, const Parameters& point);

/// A route that was asked and gave no value.
struct NotRun {
    RouteId route;
    std::string reason;
    bool covers = false;  ///< it reaches the quantity but could not decide
};

/// One quantity at one point.
struct QuantityResult {
    const CaseQuantity* quantity = nullptr;
    std::vector<Reference> references;  ///< those that vote, best bound first
    std::optional<Reference> infinite;  ///< route `limit`, shown beside a finite chain
    std::vector<NotRun> not_run;
    Comparison comparison;
};

struct PointResult {
    Parameters parameters;  ///< without "h" for quantities that are asked once per chain
    std::vector<QuantityResult> quantities;
};

struct CaseResult {
    const Case* source = nullptr;
    Verdict verdict = Verdict::single;
    std::vector<PointResult> points;  ///< only finished ones after an interrupt
    std::vector<Trend> trends;
    std::size_t points_planned = 0;
};

/// A case made ready: problems built, batches formed, nothing computed yet.
class Plan {
public:
    /// All points of all cases, checked: every error of every case at once.
    static Checked<Plan> make(const std::vector<Case>& cases);

    /// Routes by batch with their refusals and cost, for people (`show plan`).
    std::string describe() const;

    /// Computes everything. Returns within a second of a stop request with what is finished;
    /// library calls that cannot be stopped are left behind on threads of their own, so a program
    /// should end soon after that.
    std::vector<CaseResult> run(const Context& context) const;

    struct Work;

private:
    std::shared_ptr<const Work> work_;
};

}  // namespace chainmark
