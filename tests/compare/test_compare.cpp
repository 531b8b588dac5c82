#include <cmath>
#include <limits>

#include <doctest/doctest.h>

#include "chainmark/compare/compare.hpp"
#include "support/near.hpp"

using namespace chainmark;
using namespace chainmark::test;

namespace {

Reference number(double value, double bound, RouteId route, Basis basis = Basis::residual) {
    Reference reference;
    reference.value = Value::number(value);
    reference.bound = {bound};
    reference.basis = basis;
    reference.route = route;
    return reference;
}

Reference a(double value, double bound, Basis basis = Basis::residual) {
    return number(value, bound, RouteId::sector, basis);
}
Reference b(double value, double bound, Basis basis = Basis::residual) {
    return number(value, bound, RouteId::fermion, basis);
}

Verdict verdict(const Reference& x, const Reference& y, const Tolerance& tolerance = {}) {
    return compare_references({x, y}, tolerance).verdict;
}

}  // namespace

TEST_CASE("the rule for two references") {
    CHECK(verdict(a(1.0, 1e-14), b(1.0 + 1e-15, 1e-14)) == Verdict::agree);
    // further apart than their bounds, though within the tolerance: one of the bounds is wrong
    CHECK(verdict(a(1.0, 1e-14), b(1.0 + 1e-12, 1e-14)) == Verdict::differ);
    // an estimate's bound proves nothing; within the tolerance it agrees
    CHECK(verdict(a(1.0, 1e-14), b(1.0 + 1e-12, 1e-14, Basis::estimate)) == Verdict::agree);
    CHECK(verdict(a(1.0, 1e-14), b(1.0 + 1e-9, 1e-14, Basis::estimate)) == Verdict::differ);
    // bounds too wide for the tolerance
    CHECK(verdict(a(1.0, 1e-9), b(1.0, 1e-14)) == Verdict::undecided);
    CHECK(verdict(a(1.0, 1e-9), b(1.0 + 1e-9, 1e-14)) == Verdict::undecided);
    CHECK(verdict(a(1.0, 1e-14), b(std::nan(""), 1e-14)) == Verdict::differ);
    CHECK(verdict(a(1.0, 1e-14), b(std::numeric_limits<double>::infinity(), 1e-14)) ==
          Verdict::differ);
}

TEST_CASE("one reference is compared with nothing, none is undecided") {
    CHECK(compare_references({a(1.0, 0.0)}, {}).verdict == Verdict::single);
    CHECK(compare_references({}, {}).verdict == Verdict::undecided);
}

TEST_CASE("difference, tolerance and digits come with the verdict") {
    // design: -3.98... with absolute and relative 1e-10 allows 4.98e-10
    const Comparison found = compare_references(
        {a(-3.98205080756888, 2e-14), b(-3.98205080756888 + 4e-15, 1e-14)}, {1e-10, 1e-10});
    CHECK(found.verdict == Verdict::agree);
    CHECK_NEAR(found.allowed.value(), 4.98205080756888e-10, rounding(1e-9, 2));
    CHECK_NEAR(found.difference.value(), 4e-15, rounding(4.0, 2));
    // capped by the reference's bound 1e-14: -log10(1e-14 / 3.98)
    CHECK_NEAR(found.digits.value(), 14.6, published(1));
}

TEST_CASE("digits are relative, absolute near zero, and capped") {
    const Tolerance tolerance;
    CHECK_NEAR(agreeing_digits(100.001, 100.0, 1e-13, tolerance), 5.0, rounding(1e5, 10));
    CHECK_NEAR(agreeing_digits(1e-7, 0.0, 1e-14, tolerance), 7.0, rounding(10, 10));
    CHECK_NEAR(agreeing_digits(1.0, 1.0, 1e-9, tolerance), 9.0, rounding(10, 10));
    CHECK_NEAR(agreeing_digits(1.0, 1.0, 0.0, tolerance), 15.95, published(2));
}

TEST_CASE("statuses, texts, shapes and total Sz are compared exactly") {
    Reference jump = a(0.0, 0.0);
    jump.value = Value::status(Special::jump);
    CHECK(verdict(jump, b(0.0, 0.0)) == Verdict::differ);
    Reference also = jump;
    also.route = RouteId::fermion;
    CHECK(verdict(jump, also) == Verdict::agree);

    Reference critical = a(0.0, 0.0);
    critical.value = Value::words("critical");
    Reference gapped = critical;
    gapped.value = Value::words("gapped");
    CHECK(verdict(critical, critical) == Verdict::agree);
    CHECK(verdict(critical, gapped) == Verdict::differ);

    Reference three = a(0.0, 0.0);
    three.value = Value::array({1.0, 2.0, 3.0});
    three.bound = {0.0, 0.0, 0.0};
    Reference two = three;
    two.value = Value::array({1.0, 2.0});
    CHECK(verdict(three, two) == Verdict::differ);
    Reference stairs = three;
    stairs.value.total_sz = {-1.0, 0.0, 1.0, 2.0};
    CHECK(verdict(three, stairs) == Verdict::differ);
}

TEST_CASE("of many routes and elements the worst counts") {
    Reference first = a(0.0, 0.0);
    first.value = Value::array({1.0, 2.0});
    first.bound = {1e-14, 1e-14};
    Reference second = first;
    second.route = RouteId::dense;
    Reference third = first;
    third.route = RouteId::fermion;
    third.value = Value::array({1.0, 2.1});
    const Comparison found = compare_references({first, second, third}, {});
    CHECK(found.verdict == Verdict::differ);
    CHECK_NEAR(found.difference.value(), 0.1, rounding(2.0, 2));
    CHECK(found.reason.find("fermion") != std::string::npos);
    CHECK(worse(Verdict::undecided, Verdict::agree) == Verdict::undecided);
    CHECK(worse(Verdict::single, Verdict::agree) == Verdict::agree);
}
