#pragma once

#include <map>
#include <memory>
#include <string>
#include <vector>

#include "chainmark/plan/plan.hpp"

namespace chainmark {

/// Builds the problems of one case and shares term lists between points that differ in the field
/// and the temperature alone.
class ProblemBuilder {
public:
    explicit ProblemBuilder(const Case& c);

    /// The problem at a point; see build_problem.
    Result<Problem> build(const Parameters& point);

    /// The same with the family's own field set to 0, in the ground state.
    Result<Problem> build_without_field(const Parameters& point);

    /// Whether the case's terms have a meaning on the infinite chain.
    bool has_infinite_chain() const;

private:
    struct Shared {
        std::shared_ptr<const TermList> terms;
        double field = 0.0;  ///< uniform field among the written terms
    };

    Result<Shared> terms_at(const Parameters& point);
    Result<TermList> build_list(const Parameters& point) const;
    Error placed(Error error, const Parameters& point) const;

    const Case& case_;
    bool field_in_terms_ = false;  ///< a written term's coupling refers to "h"
    std::map<std::vector<double>, Shared> shared_;
};

/// The value of a parameter that the point is known to have.
double parameter(const Parameters& point, const std::string& name);

/// "sites = 12, h = 0.3"; "infinite" for the infinite chain.
std::string to_string(const Parameters& point);

}  // namespace chainmark
