#include "chainmark/compare/compare.hpp"

#include <algorithm>
#include <cmath>

#include <fmt/format.h>

#include "chainmark/base/numerics.hpp"

namespace chainmark {
namespace {

/// The comparison of two numbers, with what is needed to find the worst of many.
struct NumberComparison {
    Verdict verdict = Verdict::agree;
    double difference = 0.0;
    double allowed = 0.0;
    double digits = 0.0;
    std::string reason;

    double severity() const { return difference / std::max(allowed, 1e-300); }
};

bool is_guess(const Reference& reference) {
    return reference.basis == Basis::estimate;
}

/// c is the element of the reference with the smaller bound.
NumberComparison compare_numbers(const Reference& c_reference,
                                 const Reference& x_reference,
                                 std::size_t i,
                                 const Tolerance& tolerance) {
    const std::complex<double> c = c_reference.value.data[i];
    const std::complex<double> x = x_reference.value.data[i];
    const double bounds = c_reference.bound[i] + x_reference.bound[i];
    NumberComparison result;
    result.difference = std::abs(x - c);
    result.allowed = tolerance.allowed(std::abs(c));
    result.digits = agreeing_digits(
        std::abs(c) + result.difference, std::abs(c), c_reference.bound[i], tolerance);
    const bool proven = !is_guess(c_reference) && !is_guess(x_reference);
    if (!std::isfinite(result.difference)) {
        result.verdict = Verdict::differ;
        result.reason = "not a finite number";
    } else if (proven && result.difference > bounds) {
        result.verdict = Verdict::differ;
        result.reason =
            fmt::format("{} and {} are {:.2g} apart, more than their bounds together ({:.2g})",
                        to_string(c_reference.route),
                        to_string(x_reference.route),
                        result.difference,
                        bounds);
    } else if (result.difference - bounds > result.allowed) {
        result.verdict = Verdict::differ;
        result.reason = fmt::format("{} and {} are {:.2g} apart, allowed {:.2g}",
                                    to_string(c_reference.route),
                                    to_string(x_reference.route),
                                    result.difference,
                                    result.allowed);
    } else if (!(result.difference + bounds <= result.allowed)) {
        result.verdict = Verdict::undecided;
        result.reason =
            fmt::format("the bounds ({:.2g} together) are too wide for the tolerance ({:.2g})",
                        bounds,
                        result.allowed);
    }
    return result;
}

/// What can be said without looking at numbers: nothing, or why the two differ.
std::string different_in_kind(const Reference& a, const Reference& b) {
    const auto routes = fmt::format("{} and {}", to_string(a.route), to_string(b.route));
    if (a.value.kind != b.value.kind) {
        return routes + " give different kinds of answer";
    }
    if (a.value.text != b.value.text) {
        return fmt::format("{}: '{}' against '{}'", routes, a.value.text, b.value.text);
    }
    if (a.value.shape != b.value.shape || a.value.data.size() != b.value.data.size()) {
        return fmt::format(
            "{}: {} values against {}", routes, a.value.data.size(), b.value.data.size());
    }
    for (std::size_t i = 0; i < a.value.data.size(); ++i) {
        if (a.value.special_at(i) != b.value.special_at(i)) {
            const auto shown = [&](const Value& value) {
                const std::string word = to_string(value.special_at(i));
                return word.empty() ? fmt::format("{}", value.real_at(i)) : word;
            };
            return fmt::format("{}: '{}' against '{}'", routes, shown(a.value), shown(b.value));
        }
    }
    if (a.value.total_sz != b.value.total_sz) {
        return routes + " give different total Sz between the jumps";
    }
    return {};
}

/// Folds the comparison of one pair of references into `total`.
void compare_pair(const Reference& a,
                  const Reference& b,
                  const Tolerance& tolerance,
                  Comparison& total,
                  double& severity) {
    const std::string kind = different_in_kind(a, b);
    if (!kind.empty()) {
        total.verdict = Verdict::differ;
        total.reason = kind;
        return;
    }
    for (std::size_t i = 0; i < a.value.data.size(); ++i) {
        if (a.value.special_at(i) != Special::none) {
            continue;
        }
        const bool a_is_better = a.bound[i] <= b.bound[i];
        const NumberComparison one =
            compare_numbers(a_is_better ? a : b, a_is_better ? b : a, i, tolerance);
        if (one.verdict > total.verdict) {
            total.reason = one.reason;
            total.element = i;
        }
        total.verdict = worse(total.verdict, one.verdict);
        total.digits = std::min(total.digits.value_or(one.digits), one.digits);
        if (!total.difference || !(one.severity() <= severity)) {
            severity = one.severity();
            total.difference = one.difference;
            total.allowed = one.allowed;
        }
    }
}

}  // namespace

std::string to_string(Verdict verdict) {
    switch (verdict) {
        case Verdict::single:
            return "single";
        case Verdict::agree:
            return "agree";
        case Verdict::undecided:
            return "undecided";
        case Verdict::differ:
            return "differ";
    }
    return "";
}

Verdict worse(Verdict a, Verdict b) {
    return std::max(a, b);
}

double agreeing_digits(double x, double c, double bound, const Tolerance& tolerance) {
    const double scale = std::abs(c) <= std::max(bound, tolerance.absolute) ? 1.0 : std::abs(c);
    const double smallest = std::max(bound, epsilon / 2 * scale);
    return -std::log10(std::max(std::abs(x - c), smallest) / scale);
}

Comparison compare_references(const std::vector<Reference>& references,
                              const Tolerance& tolerance) {
    Comparison total;
    if (references.empty()) {
        total.verdict = Verdict::undecided;
        total.reason = "no route gives an answer";
        return total;
    }
    if (references.size() == 1) {
        return total;
    }
    total.verdict = Verdict::agree;
    double severity = 0.0;
    for (std::size_t i = 0; i < references.size(); ++i) {
        for (std::size_t j = i + 1; j < references.size(); ++j) {
            compare_pair(references[i], references[j], tolerance, total, severity);
        }
    }
    return total;
}

}  // namespace chainmark
