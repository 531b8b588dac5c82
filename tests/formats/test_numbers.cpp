#include <bit>
#include <cmath>
#include <cstdint>
#include <limits>
#include <random>

#include <doctest/doctest.h>

#include "chainmark/formats/numbers.hpp"

using namespace chainmark;

namespace {

constexpr double infinity = std::numeric_limits<double>::infinity();

bool reads_back(double value) {
    const double read = std::strtod(number_text(value).c_str(), nullptr);
    return std::bit_cast<std::uint64_t>(read) == std::bit_cast<std::uint64_t>(value);
}

}  // namespace

TEST_CASE("number text is the shortest that reads back") {
    CHECK(number_text(0.1) == "0.1");
    CHECK(number_text(-3.98205080756888) == "-3.98205080756888");
    CHECK(number_text(1.0 / 3.0) == "0.3333333333333333");
    CHECK(number_text(100000.0) == "100000");
    CHECK(number_text(12.0) == "12");
    CHECK(number_text(0.0) == "0");
    CHECK(number_text(-0.0) == "-0");
    CHECK(number_text(2e-14) == "2e-14");
    CHECK(number_text(1e300) == "1e+300");
    CHECK(number_text(std::nan("")) == "nan");
    CHECK(number_text(-infinity) == "-inf");
}

TEST_CASE("doubles of every bit pattern read back identically") {
    std::mt19937_64 random(20240501);
    for (int i = 0; i < 20000; ++i) {
        const double value = std::bit_cast<double>(random());
        if (std::isfinite(value)) {
            CHECK_MESSAGE(reads_back(value), number_text(value));
        }
    }
    CHECK(reads_back(std::numeric_limits<double>::denorm_min()));
    CHECK(reads_back(std::numeric_limits<double>::max()));
    CHECK(reads_back(999999999999999.0));
    CHECK(reads_back(-0.0));
}

TEST_CASE("complex numbers") {
    CHECK(number_text(std::complex<double>(0.5, -2.0)) == "0.5-2j");
    CHECK(number_text(std::complex<double>(-1.0, 1e-3)) == "-1+0.001j");
    CHECK(certain_digits(std::complex<double>(0.123456, 0.5), 1e-3) == "0.123+0.500j");
}

TEST_CASE("the last digit shown is one that the bound supports") {
    CHECK(certain_digits(-3.98205080756888, 2e-14) == "-3.9820508075689");
    CHECK(certain_digits(-3.98205080756888, 1e-14) == "-3.98205080756888");
    CHECK(certain_digits(-3.98205080756888, 1e-3) == "-3.982");
    CHECK(certain_digits(-3.98205080756888, 1.1e-3) == "-3.98");
    CHECK(certain_digits(0.5, 1e-6) == "0.500000");
    CHECK(certain_digits(3.0, 0.5) == "3");
}

TEST_CASE("rounding may carry into a new leading digit") {
    CHECK(certain_digits(9.9996, 1e-3) == "10.000");
    CHECK(certain_digits(0.99999999999999999, 1e-20) == "1.00000000000000");
}

TEST_CASE("at most the asked number of significant digits") {
    CHECK(certain_digits(-1.0 / 3.0, 0.0) == "-0.333333333333333");
    CHECK(certain_digits(-1.0 / 3.0, 1e-18) == "-0.333333333333333");
    CHECK(certain_digits(-1.0 / 3.0, 1e-18, 6) == "-0.333333");
    CHECK(certain_digits(0.25, 0.0) == "0.25");
}

TEST_CASE("zeros, exact and within the bound") {
    CHECK(certain_digits(0.0, 0.0) == "0");
    CHECK(certain_digits(-0.0, 1e-15) == "0");
    CHECK(certain_digits(3e-17, 2e-16) == "0");
    CHECK(certain_digits(9e-9, 2e-9) == "1e-08");
    CHECK(certain_digits(-0.7, 0.9) == "-1e+00");
}

TEST_CASE("scientific notation for the small, the large and the uncertain") {
    CHECK(certain_digits(1.2346e-9, 1e-12) == "1.235e-09");
    CHECK(certain_digits(1234567.0, 1e3) == "1.235e+06");
    CHECK(certain_digits(1.5e20, 0.0) == "1.5e+20");
    CHECK(certain_digits(0.0, infinity) == "0");
    CHECK(certain_digits(0.123, infinity) == "1e-01");
    CHECK(certain_digits(infinity, 1.0) == "inf");
}

TEST_CASE("what is shown lies within one unit of the last certain place") {
    std::mt19937_64 random(7);
    std::uniform_real_distribution<double> exponent(-12.0, 8.0);
    std::uniform_real_distribution<double> mantissa(-10.0, 10.0);
    for (int i = 0; i < 5000; ++i) {
        const double value = mantissa(random) * std::pow(10.0, exponent(random));
        const double bound = std::abs(mantissa(random)) * std::pow(10.0, exponent(random));
        const double shown = std::strtod(certain_digits(value, bound).c_str(), nullptr);
        // half a unit of the place of `bound`, which is less than 10 bounds, or 15 digits of value
        const double allowed = std::max(5.0 * bound, 5e-15 * std::abs(value));
        CHECK_MESSAGE(std::abs(shown - value) <= allowed, value << " +- " << bound);
    }
}
