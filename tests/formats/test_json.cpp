#include <cmath>

#include "chainmark/formats/json.hpp"
#include "chainmark/formats/table.hpp"
#include "formats/support.hpp"

using namespace chainmark;
using namespace chainmark::test;

namespace {

Result<Table> json_table(const std::string& text) {
    const Folder folder;
    return read_table(put(folder / "t.json", text), with_memory());
}

std::string text_at(const Table& table, std::size_t row, const std::string& name) {
    return std::string(table.text(row, table.column(name).value()));
}

}  // namespace

TEST_CASE("records, also of different keys, with arrays and objects inside") {
    const auto table = json_table(
        "[{\"sites\": 8, \"E\": -3.651e0,\n  \"czz\": [0.1, -0.2], \"p\": {\"h\": 1}},\n"
        " {\"E\": null, \"sites\": 10, \"m\": [[1, 2], [3, 4]], \"n\\u0061me\": \"t\\\"x\"}]");
    REQUIRE(table.has_value());
    CHECK(table->rows() == 2);
    CHECK(text_at(*table, 0, "sites") == "8");
    CHECK(table->real(0, table->column("E").value()).value() == -3.651);
    CHECK(text_at(*table, 0, "czz[1]") == "-0.2");
    CHECK(text_at(*table, 0, "p.h") == "1");
    CHECK(text_at(*table, 1, "m[1][0]") == "3");
    CHECK(text_at(*table, 1, "name") == "t\"x");
    CHECK(text_at(*table, 1, "czz[0]").empty());
    CHECK(text_at(*table, 1, "E").empty());
    CHECK(table->place(0, table->column("czz[0]").value()).line == 2);
    CHECK(table->place(1, table->column("sites").value()).line == 3);
    CHECK_FALSE(table->printed());
}

TEST_CASE("columns and a single record") {
    const auto columns = json_table(R"({"sites": [8, 10], "c": [[1, 2, 3], [4, 5, 6]]})");
    REQUIRE(columns.has_value());
    CHECK(columns->rows() == 2);
    CHECK(columns->names().size() == 4);
    CHECK(text_at(*columns, 1, "c[2]") == "6");
    const auto record = json_table(R"({"sites": 8, "levels": [-1.5, 0]})");
    REQUIRE(record.has_value());
    CHECK(record->rows() == 1);
    CHECK(text_at(*record, 0, "levels[1]") == "0");
}

TEST_CASE("complex numbers are pairs where the document says so") {
    const auto check = [](const Result<Table>& table, std::size_t row, const char* name) {
        REQUIRE(table.has_value());
        CHECK(table->number(row, table->column(name).value()).value() ==
              std::complex<double>(0.5, -2));
    };
    check(json_table(R"([{"z": [0.5, -2], "complex": true}])"), 0, "z");
    check(json_table(R"([{"a": 1}, {"complex": true, "z": [[1, 2], [ 0.5 , -2 ]]}])"), 1, "z[1]");
    check(json_table("{\"z\": [[1,2],[\n0.5,\n-2\n]],\"complex\": [\"z\"], \"l\": [[1,2],[3,4]]}"),
          1,
          "z");
    const auto kept = json_table(R"([{"l": [1, 2], "z": [3, 4], "complex": ["z"]}])");
    REQUIRE(kept.has_value());
    CHECK(text_at(*kept, 0, "l[1]") == "2");
    const auto real = json_table(R"([{"z": [0.5, -2], "complex": false}])");
    REQUIRE(real.has_value());
    CHECK(text_at(*real, 0, "z[0]") == "0.5");
    check_refused(json_table(R"([{"z": [0.5, -2], "complex": 3}])"), "neither true nor false");
}

TEST_CASE("NaN and Infinity, which some writers put into JSON") {
    const auto table =
        json_table("[{\"a\": NaN, \"b\": [-Infinity, Infinity], \"c\": \"NaN \\\" x\"}]");
    REQUIRE(table.has_value());
    CHECK(std::isnan(table->real(0, table->column("a").value()).value()));
    CHECK(table->real(0, table->column("b[0]").value()).value() < -1e308);
    CHECK(text_at(*table, 0, "c") == "NaN \" x");
}

TEST_CASE("what is no table is refused with its place") {
    check_refused(json_table("[{\"a\": 1},\n {\"a\": }]"), "t.json:2:8: no JSON at");
    check_refused(json_table("[1, 2]"), "t.json:1:3: a single value stands where a record");
    check_refused(json_table("[[1, 2]]"), "an array stands where a record");
    check_refused(json_table("7"), "single value");
    check_refused(json_table("[]"), "holds no values");
    check_refused(json_table(""), "no JSON");
    check_refused(json_table("[{\"a\": 1, \"a\": 2}]"), "'a' occurs twice");
    check_refused(json_table(R"({"a": [1, 2], "b": [1]})"), "column 'b' has 1 element");
    check_refused(json_table("[{\"a\": 1e999}]"), "beyond the range");
    check_refused(json_table(std::string(100000, '[')), "256 deep");
}

TEST_CASE("a wide table of few values does not exceed the budget") {
    std::string text = "[";
    for (int i = 0; i < 3000; ++i) {
        text += (i == 0 ? "{\"k" : ",{\"k") + std::to_string(i) + "\": 1}";
    }
    const Folder folder;
    const std::string path = put(folder / "t.json", text + "]");
    check_refused(read_table(path, with_memory(32e6)), "the table needs");  // 3000^2 cells
}

TEST_CASE("documents") {
    const Folder folder;
    const auto document = read_json(
        put(folder / "d.json", R"({"a": [1, 2.5, "x"], "b": {"c": null}})"), with_memory());
    REQUIRE(document.has_value());
    CHECK(document->root.at("a").at(1).get<double>() == 2.5);
    CHECK(document->root.at("b").at("c").is_null());
    check_refused(
        read_json(put(folder / "d.json", R"({"a": 1, "b": {"c": 1, "c": 2}})"), with_memory()),
        "the key 'c' occurs twice");
    check_refused(read_json(put(folder / "d.json", "[" + std::string(200000, '[')), with_memory()),
                  "256 deep");
}
