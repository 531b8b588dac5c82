#pragma once

#include <optional>
#include <string>
#include <vector>

#include "chainmark/reference/tolerance.hpp"
#include "chainmark/reference/value.hpp"

namespace chainmark {

/// Ordered: a whole is as bad as its worst part.
enum class Verdict { single, agree, undecided, differ };

/// "agree", "differ", "undecided", "single".
std::string to_string(Verdict verdict);

/// The worse of two verdicts: differ > undecided > agree > single.
Verdict worse(Verdict a, Verdict b);

/// How the references of one quantity at one point stand to each other.
struct Comparison {
    Verdict verdict = Verdict::single;
    std::optional<double> difference;  ///< largest |a - b| over routes and elements
    std::optional<double> allowed;     ///< the tolerance there
    std::optional<double> digits;      ///< fewest agreeing digits over routes and elements
    std::size_t element = 0;           ///< of an array: the one that decided the verdict
    std::string reason;                ///< in words, where the verdict is `differ` or `undecided`
};

/// Compares every pair of references, element by element:
///   differ     if |a-b| > bound_a + bound_b and both bases are better than `estimate`,
///              or if |a-b| - bound_a - bound_b > tolerance;
///   agree      if |a-b| + bound_a + bound_b <= tolerance;
///   undecided  otherwise.
/// Statuses, texts and shapes are compared exactly. The tolerance and the digits refer to the
/// reference with the smaller bound. One reference: `single`. None: `undecided`.
Comparison compare_references(const std::vector<Reference>& references, const Tolerance& tolerance);

/// -log10(|x-c|/|c|), or -log10 |x-c| where |c| <= max(bound, absolute tolerance); never more than
/// the same with the bound (or the double's rounding, 15.95) in the place of |x-c|.
double agreeing_digits(double x, double c, double bound, const Tolerance& tolerance);

}  // namespace chainmark
