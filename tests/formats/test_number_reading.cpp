#include <bit>
#include <clocale>
#include <cmath>
#include <random>

#include <doctest/doctest.h>

#include "chainmark/formats/number_reading.hpp"
#include "chainmark/formats/numbers.hpp"

using namespace chainmark;
using Complex = std::complex<double>;

namespace {

bool reads(const char* text, double expected) {
    const auto value = read_real(text);
    return value.has_value() &&
           std::bit_cast<std::uint64_t>(*value) == std::bit_cast<std::uint64_t>(expected);
}

bool reads_complex(const char* text, Complex expected) {
    const auto value = read_number(text);
    return value.has_value() && value->is_complex && value->value == expected;
}

NumberFault fault(const std::string& text) {
    const auto value = read_number(text);
    REQUIRE_FALSE(value.has_value());
    return value.error();
}

}  // namespace

TEST_CASE("real numbers as programs print them") {
    CHECK(reads("0.5", 0.5));
    CHECK(reads(" +0.5\t", 0.5));
    CHECK(reads("-.5e-3", -0.5e-3));
    CHECK(reads("1.", 1.0));
    CHECK(reads("-0.0", -0.0));
    CHECK(reads("1E+2", 100.0));
    CHECK(reads("-1.25D-02", -1.25e-2));  // Fortran
    CHECK(reads("0.1d5", 0.1e5));
    CHECK(reads("1.5-103", 1.5e-103));
    CHECK(reads("-0.25+100", -0.25e100));
    CHECK(reads("0x1.8p1", 3.0));
    CHECK(reads("-0x1p-3", -0.125));
    CHECK(reads("9007199254740993", 9007199254740992.0));
    CHECK(reads("4.9e-324", std::numeric_limits<double>::denorm_min()));
    CHECK(reads("1e-400", 0.0));
    CHECK(reads("inf", std::numeric_limits<double>::infinity()));
    CHECK(reads("-Infinity", -std::numeric_limits<double>::infinity()));
    CHECK(std::isnan(read_real("NaN").value()));
    CHECK(std::isnan(read_real("-nan").value()));
}

TEST_CASE("what is no real number says why") {
    CHECK(fault("") == NumberFault::empty);
    CHECK(fault("  ") == NumberFault::empty);
    CHECK(fault("0,5") == NumberFault::decimal_comma);
    CHECK(fault("(1,5,2,5)") == NumberFault::decimal_comma);
    CHECK(fault("1e400") == NumberFault::out_of_range);
    CHECK(fault("-1e5000") == NumberFault::out_of_range);
    CHECK(fault("1e400+1j") == NumberFault::out_of_range);
    CHECK(fault("********") == NumberFault::field_too_narrow);
    for (const std::string text : {"J",
                                   "j",
                                   "i",
                                   "h",
                                   "1.0.0",
                                   "--1",
                                   "+-1",
                                   "1e",
                                   "1 2",
                                   "0x",
                                   "1d",
                                   "e5",
                                   "1+2",
                                   "1+j2",
                                   "(1,2",
                                   "()",
                                   "1j2",
                                   "2024-101",
                                   "1.5-1034"}) {
        CHECK_MESSAGE(fault(text) == NumberFault::no_number, text);
    }
}

TEST_CASE("complex numbers") {
    CHECK(reads_complex("1+2j", {1, 2}));
    CHECK(reads_complex("(1+2j)", {1, 2}));  // Python
    CHECK(reads_complex("1e-5-2.5e+03i", {1e-5, -2.5e3}));
    CHECK(reads_complex("1.0 - 2.0im", {1, -2}));  // Julia
    CHECK(reads_complex("-1. + 2.*I", {-1, 2}));
    CHECK(reads_complex("( -1.5 , 2e0 )", {-1.5, 2}));  // Fortran, C++
    CHECK(reads_complex("2j", {0, 2}));
    CHECK(reads_complex("-0.5J", {0, -0.5}));
    CHECK(reads_complex("1+0j", {1, 0}));
    const auto lost = read_number("nan+infj");
    REQUIRE(lost.has_value());
    CHECK(std::isnan(lost->value.real()));
    CHECK(std::isinf(lost->value.imag()));
    CHECK_FALSE(read_number("1.5").value().is_complex);
    CHECK(read_number("(1.5)").value().value == Complex(1.5));
}

TEST_CASE("what was written reads back to the same doubles, in any locale") {
    // A locale with a decimal comma, where the machine has one.
    std::setlocale(LC_ALL, "de_DE.UTF-8");
    std::mt19937_64 random(11);
    for (int i = 0; i < 20000; ++i) {
        const double re = std::bit_cast<double>(random());
        const double im = std::bit_cast<double>(random());
        if (std::isfinite(re) && std::isfinite(im)) {
            const auto real = read_real(number_text(re));
            const auto both = read_number(number_text(Complex(re, im)));
            REQUIRE(real.has_value());
            REQUIRE(both.has_value());
            CHECK(*real == re);
            CHECK(both->value == Complex(re, im));
        }
    }
    std::setlocale(LC_ALL, "C");
}
