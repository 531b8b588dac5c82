#include <doctest/doctest.h>

#include "chainmark/report/text_layout.hpp"

using namespace chainmark;

TEST_CASE("width counts characters, not bytes") {
    CHECK(display_width("gap") == 3);
    CHECK(display_width("\xc3\xa4\xce\x94") == 2);
    CHECK(padded("\xce\x94", 3) == "\xce\x94  ");
}

TEST_CASE("control characters do not reach the terminal") {
    CHECK(printable("a\033[31mb\nc") == "a [31mb c");
}

TEST_CASE("wrapping") {
    CHECK(wrapped("one two three", 2, 9) == "  one two\n  three\n");
    CHECK(wrapped({"1", "22", "333"}, ", ", 0, 6) == "1, 22,\n333\n");
    CHECK(wrapped("unbreakable", 2, 5) == "  unbreakable\n");
}

TEST_CASE("numbers stand with their points below each other") {
    TextTable table({{"h", Align::point}, {"digits", Align::right}, {"word", Align::left}});
    table.add_row({{"0.25"}, {"9.5"}, {"a"}});
    table.add_row({{"-12"}, {"14.3"}, {"bc"}}, "    below\n");
    CHECK(table.text(1) ==
          "      h  digits  word\n"
          "   0.25     9.5  a\n"
          " -12       14.3  bc\n"
          "    below\n");
}

TEST_CASE("an empty column is left out, colours take no room") {
    TextTable table({{"a"}, {"never"}, {"b"}});
    table.add_row({{"1", "<", ">"}, {""}, {"2"}});
    CHECK(table.text(0) ==
          "a  b\n"
          "<1>  2\n");
}

TEST_CASE("definitions") {
    CHECK(definition_list({{"gap", {"first level", "more"}}, {"levels", {"many"}}}) ==
          "gap     first level\n"
          "        more\n"
          "levels  many\n");
}
