#include "chainmark/formats/printed_digits.hpp"
#include "formats/support.hpp"
#include "support/near.hpp"

using namespace chainmark;
using namespace chainmark::test;

namespace {

std::optional<PrintedDigits> digits_of(const std::string& column) {
    const Folder folder;
    const auto table = read_table(put(folder / "t.txt", "# x\n" + column), with_memory());
    REQUIRE(table.has_value());
    return printed_digits(*table, 0);
}

}  // namespace

TEST_CASE("fixed format: equal decimals") {
    const auto digits = digits_of("0.500000\n-12.250000\n0.000000\n");
    REQUIRE(digits.has_value());
    CHECK(digits->decimals == 6);
    CHECK_FALSE(digits->significant.has_value());
    CHECK_NEAR(digits->half_unit(123.0), 5e-7, rounding(5e-7, 4));
}

TEST_CASE("scientific format: equal significant digits") {
    const auto digits = digits_of("5.0000e-01\n-1.2250E+01\n0.0000e+00\n1.0000D-10\n");
    REQUIRE(digits.has_value());
    CHECK(digits->significant == 5);
    CHECK_FALSE(digits->decimals.has_value());
    CHECK_NEAR(digits->half_unit(-12.25), 5e-4, rounding(5e-4, 4));
    CHECK(digits->half_unit(0.0) == 0.0);
    CHECK(digits_of("0.12345E-03\n0.50000E+00\n0.10000E+02\n")->significant == 5);  // Fortran
}

TEST_CASE("dropped zeros: the coarser of both rules") {
    // as printf's %g prints 12.3456789, 0.00123456789, 0.5 and 1.23456789e-20
    const auto general = digits_of("12.3457\n0.00123457\n0.5\n1.23457e-20\n");
    REQUIRE(general.has_value());
    CHECK(general->significant == 6);
    CHECK_NEAR(general->half_unit(12.3457), 5e-5, rounding(5e-5, 4));
    CHECK_NEAR(general->half_unit(1.23457e-20), 5e-26, rounding(5e-26, 4));
    // as Python prints round(x, 6)
    const auto rounded = digits_of("12.345678\n0.1\n1e-06\n");
    REQUIRE(rounded.has_value());
    CHECK_NEAR(rounded->half_unit(12.345678), 5e-7, rounding(5e-7, 4));
    CHECK_NEAR(rounded->half_unit(1e-6), 5e-7, rounding(5e-7, 4));
}

TEST_CASE("complex numbers count with both parts, others not at all") {
    CHECK(digits_of("(0.500,0.250)\n0.125+1.000j\nnan\n0.250\n")->decimals == 3);
}

TEST_CASE("no digits: few rows, whole numbers, hexadecimal, JSON") {
    CHECK_FALSE(digits_of("0.5\n0.25\n").has_value());
    CHECK_FALSE(digits_of("0.5\n0.25\nnan\n").has_value());
    CHECK_FALSE(digits_of("8\n10\n12\n").has_value());
    CHECK_FALSE(digits_of("0x1.8p1\n0x1p0\n0x1p1\n").has_value());
    const Folder folder;
    const auto json = read_table(put(folder / "t.json", "{\"x\":[0.5,0.25,0.1]}"), with_memory());
    REQUIRE(json.has_value());
    CHECK_FALSE(printed_digits(*json, 0).has_value());
}
