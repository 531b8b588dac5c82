#pragma once

#include <cmath>

#include <doctest/doctest.h>
#include <fmt/format.h>

/// Checks |found - expected| <= allowed with a message that shows all of it. `allowed` is built
/// from one of the policies below, never a bare literal.
#define CHECK_NEAR(found, expected, allowed) \
    ::chainmark::test::check_near(found, expected, allowed, #found, __FILE__, __LINE__)

namespace chainmark::test {

/// An allowed difference with the reason for it.
struct Allowed {
    double size;
    const char* policy;
};

/// `operations` roundings of numbers of magnitude `scale`.
inline Allowed rounding(double scale, double operations) {
    return {2.3e-16 * scale * operations, "rounding"};
}

/// The bound that the code under test itself reports.
inline Allowed bound(double reported) {
    return {reported, "reported bound"};
}

/// Half a unit of the last quoted digit of a published value.
inline Allowed published(int decimals) {
    return {0.5 * std::pow(10.0, -decimals), "published"};
}

inline void check_near(
    double found, double expected, Allowed allowed, const char* text, const char* file, int line) {
    const double difference = std::abs(found - expected);
    const bool near = difference <= allowed.size;  // false for NaN
    const std::string message = fmt::format(
        "{}: found {:.17g}, expected {:.17g}, difference {:.3g}, "
        "allowed {:.3g} ({})",
        text,
        found,
        expected,
        difference,
        allowed.size,
        allowed.policy);
    if (near) {
        CHECK(near);  // counts as an assertion
    } else {
        ADD_FAIL_CHECK_AT(file, line, message);
    }
}

}  // namespace chainmark::test
