#include <doctest/doctest.h>

#include "chainmark/formats/csv.hpp"

using namespace chainmark;

// RFC 4180, section 2: rules 5 to 7 on quotes.
TEST_CASE("fields are quoted only where they must be") {
    CHECK(csv_field("sector") == "sector");
    CHECK(csv_field("") == "");
    CHECK(csv_field("a,b") == "\"a,b\"");
    CHECK(csv_field("say \"once\"") == "\"say \"\"once\"\"\"");
    CHECK(csv_field("two\nlines") == "\"two\nlines\"");
    CHECK(csv_field(" outer") == "\" outer\"");
    CHECK(csv_field("in side") == "in side");
}

TEST_CASE("lines") {
    CHECK(csv_line({"a", "", "b,c"}) == "a,,\"b,c\"\n");
    CHECK(csv_line({}) == "\n");
}
