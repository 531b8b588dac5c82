#include "casefile/case_text.hpp"

using namespace chainmark;
using namespace chainmark::test;

namespace {

/// Line 3 is `sites`, lines 9 and 10 name the quantity and its sector.
std::string with_sector(const std::string& sector,
                        const std::string& sites = "[8, 12]",
                        const std::string& name = "gap") {
    return changed("[8, 12]",
                   sites,
                   changed("name = \"ground_energy\"\n",
                           "name = \"" + name + "\"\nsector = " + sector + "\n"));
}

Labels sector_of(const std::string& sector, const std::string& sites = "[8, 12]") {
    const auto labels = case_of(with_sector(sector, sites)).quantities[0].query.options.sector;
    REQUIRE(labels.has_value());
    return *labels;
}

void check(const std::string& sector,
           const Expected& expected,
           const std::string& sites = "[8, 12]") {
    check_only_error(with_sector(sector, sites), expected);
}

}  // namespace

TEST_CASE("a sector is read label by label") {
    CHECK(sector_of("{ sz = 1, momentum = -3 }") == Labels{.sz = 1.0, .momentum = -3});
    CHECK(sector_of("{ sz = -2.5 }", "9") == Labels{.sz = -2.5});
    CHECK(sector_of("{ parity = -1 }") == Labels{.parity = -1});
    CHECK(sector_of("{ reflection = 1, inversion = -1 }") ==
          Labels{.reflection = 1, .inversion = -1});
    CHECK_FALSE(case_of(small_case).quantities[0].query.options.sector.has_value());
}

TEST_CASE("wrong sectors") {
    check("{}", {ErrorCode::bad_value, "c.toml:9:10", {"an empty table", "sz, momentum"}});
    check("1", {ErrorCode::wrong_type, "c.toml:9:10", {"the number 1", "{ sz = 1"}});
    check("{ momentm = 1 }",
          {ErrorCode::unknown_key, "c.toml:9:12", {"'momentm'", "did you mean 'momentum'"}});
    check("{ sz = 0.3 }", {ErrorCode::bad_value, "c.toml:9:17", {"'sz'", "a half"}});
    check("{ sz = \"0\" }", {ErrorCode::wrong_type, "c.toml:9:17", {"'sz'", "a number"}});
    check("{ momentum = 1.0 }", {ErrorCode::wrong_type, "c.toml:9:23", {"as in 1"}});
    check("{ inversion = 0 }", {ErrorCode::bad_value, "c.toml:9:24", {"'inversion'", "1 or -1"}});
    check("{ reflection = 2 }", {ErrorCode::bad_value, "c.toml:9:25", {"'reflection'"}});
    check("{ parity = true }", {ErrorCode::wrong_type, "c.toml:9:21", {"'parity'", "true"}});
}

TEST_CASE("a sector exists in every chain of the grid") {
    const std::string at = "c.toml:9:10";
    check("{ sz = 0.5 }",
          {ErrorCode::bad_value, at, {"sz = 0.5", "8 sites of spin 1/2", "-4, -3"}});
    check("{ sz = 0 }", {ErrorCode::bad_value, at, {"9 sites", "-4.5, -3.5, ... 4.5"}}, "[8, 9]");
    check("{ sz = 5 }", {ErrorCode::bad_value, at, {"sz = 5", "8 sites"}});
    CHECK(sector_of("{ sz = 5 }", "[10, 12]").sz == 5.0);
    CHECK(sector_of("{ sz = 5 }", "5\nspin = \"1\"").sz == 5.0);
    CHECK(sector_of("{ sz = 1.5 }", "5\nspin = \"3/2\"").sz == 1.5);
    check("{ sz = 6 }",
          {ErrorCode::bad_value, "c.toml:10:10", {"sz = 6", "5 sites of spin 1"}},
          "5\nspin = \"1\"");
    // (-1)^N_up with N_up = sz + L S
    check("{ sz = 1, parity = 1 }", {ErrorCode::bad_value, at, {"parity = (-1)^(sz + L S) = -1"}});
    CHECK(sector_of("{ sz = 1, parity = -1 }").parity == -1);
}

TEST_CASE("momenta belong to rings and lie in one zone") {
    const std::string at = "c.toml:9:10";
    CHECK(sector_of("{ momentum = 4 }").momentum == 4);
    check("{ momentum = -4 }", {ErrorCode::bad_value, at, {"momentum = -4", "from -3 to 4"}});
    check("{ momentum = 5 }", {ErrorCode::bad_value, at, {"momentum = 5", "8 sites"}});
    check("{ momentum = 4 }", {ErrorCode::bad_value, at, {"from -3 to 3"}}, "7");
    check("{ momentum = 0 }",
          {ErrorCode::bad_value, "c.toml:10:10", {"a momentum", "open chain has none"}},
          "8\nboundary = \"open\"");
    check("{ momentum = 1, reflection = 1 }", {ErrorCode::bad_value, at, {"k into -k"}});
    CHECK(sector_of("{ momentum = 4, reflection = 1 }", "8").reflection == 1);
    CHECK(sector_of("{ momentum = 0, reflection = -1 }").reflection == -1);
    check("{ sz = 1, inversion = 1 }", {ErrorCode::bad_value, at, {"Sz into -Sz"}});
    CHECK(sector_of("{ sz = 0, inversion = 1 }").inversion == 1);
}

TEST_CASE("the infinite chain has no sectors") {
    check("{ sz = 0 }",
          {ErrorCode::bad_value, "c.toml:9:10", {"\"infinite\"", "finite chains"}},
          "[8, \"infinite\"]");
}
