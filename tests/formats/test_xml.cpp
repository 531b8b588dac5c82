#include <doctest/doctest.h>

#include "chainmark/formats/xml.hpp"

using namespace chainmark;

// XML 1.0 (fifth edition), section 2.2: the characters a document may hold; 2.4: what to escape.
TEST_CASE("text is escaped, and rid of what XML forbids") {
    CHECK(xml_text("a < b & c > \"d\" 'e'") == "a &lt; b &amp; c &gt; &quot;d&quot; &apos;e&apos;");
    CHECK(xml_text("tab\tline\nend\r") == "tab\tline\nend\r");
    CHECK(xml_text("\x1b[31mred\x1b[0m \x01\x7f!") == "red !");
    CHECK(xml_text("\x1b[") == "");
    CHECK(xml_text("\xc3\xa9\xe2\x88\x91\xf0\x9f\x98\x80") ==
          "\xc3\xa9\xe2\x88\x91\xf0\x9f\x98\x80");
    const std::string bad = "\xef\xbf\xbd";
    CHECK(xml_text("\xff") == bad);
    CHECK(xml_text("\xc3") == bad);
    CHECK(xml_text("\xc0\x80") == bad + bad);            // overlong
    CHECK(xml_text("\xed\xa0\x80") == bad + bad + bad);  // a surrogate
    CHECK(xml_text("\xef\xbf\xbf") == bad + bad + bad);  // U+FFFF
}

TEST_CASE("elements") {
    XmlWriter writer;
    writer.open("testsuite", {{"name", "a\"b\nc"}, {"tests", "1"}});
    writer.open("testcase");
    writer.element("failure", {{"type", "differ"}}, "x < y");
    writer.element("skipped", {});
    writer.close();
    CHECK_THROWS(static_cast<void>(writer.text()));
    writer.close();
    CHECK_THROWS(writer.close());
    CHECK(writer.text() ==
          "<?xml version=\"1.0\" encoding=\"UTF-8\"?>\n"
          "<testsuite name=\"a&quot;b&#10;c\" tests=\"1\">\n"
          "  <testcase>\n"
          "    <failure type=\"differ\">x &lt; y</failure>\n"
          "    <skipped/>\n"
          "  </testcase>\n"
          "</testsuite>\n");
}
