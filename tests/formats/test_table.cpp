#include <random>

#include <zlib.h>

#include "chainmark/formats/csv.hpp"
#include "chainmark/formats/numbers.hpp"
#include "chainmark/formats/table.hpp"
#include "formats/support.hpp"

using namespace chainmark;
using namespace chainmark::test;

namespace {

Result<Table> table_of(const std::string& text, const std::string& name = "t.csv") {
    const Folder folder;
    return read_table(put(folder / name, text), with_memory());
}

/// All cells, "|" between columns and "/" between rows, names first.
std::string cells_of(const Table& table) {
    std::string all;
    for (const std::string& name : table.names()) {
        all += (&name == &table.names().front() ? "" : "|") + name;
    }
    for (std::size_t row = 0; row < table.rows(); ++row) {
        for (std::size_t column = 0; column < table.names().size(); ++column) {
            all += (column == 0 ? "/" : "|") + std::string(table.text(row, column));
        }
    }
    return all;
}

std::string read_cells(const std::string& text) {
    const Result<Table> table = table_of(text);
    return table ? cells_of(*table) : to_string(table.error());
}

}  // namespace

TEST_CASE("separators are found in the line of the names") {
    const std::string expected = "sites|E/8|-3.5/10|-4.5";
    CHECK(read_cells("sites,E\n8,-3.5\n10,-4.5\n") == expected);
    CHECK(read_cells("sites\tE\n8\t-3.5\n10\t-4.5") == expected);
    CHECK(read_cells("sites;E\n8;-3.5\n10;-4.5\n") == expected);
    CHECK(read_cells("  sites   E\n   8  -3.5  \n\t10\t-4.5\n") == expected);
    CHECK(read_cells("sites , E\r\n8 ,\t-3.5\r\n10 , -4.5\r\n") == expected);
    CHECK(read_cells("\xef\xbb\xbfsites,E\n8,-3.5\n10,-4.5") == expected);
    CHECK(read_cells("E\n-3.5\n") == "E/-3.5");
}

TEST_CASE("comments, blank lines, names in a comment") {
    const std::string expected = "sites|E/8|-3.5";
    CHECK(read_cells("# made on Monday\n\nsites,E\n# half way\n\n8,-3.5\n#end") == expected);
    CHECK(read_cells("# sites E\n8 -3.5\n") == expected);
    CHECK(read_cells("# sites E\n8,-3.5\n") == expected);
    CHECK(read_cells("# made on Monday\n#sites,E\n\n8,-3.5\n") == expected);
    CHECK(read_cells("sites E\n8 -3.5 # good\n") == expected);
}

TEST_CASE("quotes and parentheses") {
    CHECK(read_cells("\"a,\"\"b\"\"\",c\n\"1\n2\",x\n") == "a,\"b\"|c/1\n2|x");
    CHECK(read_cells("a,c\n\"\",\n") == "a|c/|");
    CHECK(read_cells("z,h\n(0.5,-0.1),1\n( 1 , 2 ),2\n") == "z|h/(0.5,-0.1)|1/( 1 , 2 )|2");
    CHECK(read_cells("z h\n(0.5,-0.1) 1\n( 1 , 2 ) 2\n") == "z|h/(0.5,-0.1)|1/( 1 , 2 )|2");
    CHECK(read_cells("\"a b\" c\n1 2\n") == "a b|c/1|2");
}

TEST_CASE("cells know their line, through quoted line breaks, too") {
    const auto table = table_of("# first\na,b\n\"x\ny\",1\n\n2,  q\n");
    REQUIRE(table.has_value());
    CHECK(table->place(0, 0).line == 3);
    CHECK(table->place(0, 1).line == 4);
    CHECK(table->place(1, 1).line == 6);
    CHECK(table->place(1, 1).column == 5);
    check_refused(table->real(1, 1), "t.csv:6:5: column 'b' holds 'q'");
    CHECK(table->real(1, 0).value() == 2.0);
    CHECK(table->column("b").value() == 1);
    check_refused(table->column("bb"), "there is no column 'bb'");
}

TEST_CASE("what is no table is refused with its place") {
    const auto refused = [](const std::string& text, const std::string& part) {
        check_refused(table_of(text), part);
    };
    refused("", "holds no table");
    refused("# only a comment\n", "holds no table");
    refused("1,2\n3,4\n", "t.csv:1:1: the first line that is no comment holds numbers (2 columns)");
    refused("a,b\n1,2\n3\n",
            "t.csv:3:1: the line has 1 cell, the names of line 1 have 2, separated by ','");
    refused("a,b\n8,0,5\n", "decimals behind a point");
    refused("a;b\n8;0,5\n", "t.csv:2:3: '0,5' has a decimal comma");
    refused("a,a\n1,2\n", "column 'a' occurs twice");
    refused("a,b\n\"1,2\n", "t.csv:2:1: a quote is opened and not closed");
    refused("a,b\n\"1\"x,2\n", "text follows a closing quote");
    refused(std::string("a,b\n1,\0\n", 8), "byte 6 is 0");
    refused(
        "\xff\xfe"
        "a",
        "UTF-16");
    check_refused(read_table("/nowhere/x.csv", with_memory()), "/nowhere/x.csv: cannot be read");
    check_refused(read_table("/tmp", with_memory()), "is a folder");
    check_refused(read_table("/dev/zero", with_memory()), "a device");
    const auto table = table_of("a\n0,5\n");  // one column: no separator can be told
    REQUIRE(table.has_value());
    check_refused(table->real(0, 0), "decimals behind a point");
}

TEST_CASE("gzip files are unpacked, broken ones refused") {
    const Folder folder;
    const std::string path = folder / "t.csv.gz";
    gzFile file = gzopen(path.c_str(), "wb");
    std::string text = "a,b\n";
    for (int i = 0; i < 5000; ++i) {
        text += number_text(i * 0.37) + "," + number_text(i * 1.1) + "\n";
    }
    gzwrite(file, text.data(), static_cast<unsigned>(text.size()));
    gzclose(file);
    const auto table = read_table(path, with_memory());
    REQUIRE(table.has_value());
    CHECK(table->rows() == 5000);
    CHECK(table->real(4999, 1).value() == 4999 * 1.1);
    const std::string packed = content(path);
    check_refused(read_table(put(path, packed.substr(0, packed.size() / 2)), with_memory()),
                  "reading stopped");
}

TEST_CASE("what is written reads back") {
    std::mt19937_64 random(5);
    std::uniform_int_distribution<int> pick(0, 7);
    const std::vector<std::string> pieces{"a", ",", "\"", "\n", "#", "\xc3\xa9", "0.5", " x"};
    std::vector<std::vector<std::string>> rows;
    std::string text = csv_line({"first", "second", "third"});
    for (int row = 0; row < 300; ++row) {
        std::vector<std::string> cells(3);
        for (std::string& cell : cells) {
            for (int i = pick(random); i > 0; --i) {
                cell += pieces[static_cast<std::size_t>(pick(random))];
            }
        }
        cells[0] = "r" + cells[0];  // neither a blank line nor a comment
        if (cells[0].back() == ' ') {
            cells[0] += "x";
        }
        rows.push_back(cells);
        text += csv_line(cells);
    }
    const auto table = table_of(text);
    REQUIRE(table.has_value());
    REQUIRE(table->rows() == rows.size());
    for (std::size_t row = 0; row < rows.size(); ++row) {
        for (std::size_t column = 0; column < 3; ++column) {
            CHECK(table->text(row, column) == rows[row][column]);
        }
    }
}

TEST_CASE("the budget is asked before memory is taken, and gets it back") {
    const Folder folder;
    std::string text = "a,b,c\n";
    for (int i = 0; i < 20000; ++i) {
        text += "1,2,3\n";
    }
    const std::string path = put(folder / "t.csv", text);
    const double needed = static_cast<double>(text.size()) + 20000 * 3 * sizeof(CellSpan);
    check_refused(read_table(path, with_memory(0.9 * needed)), "of memory");
    check_refused(read_table(path, with_memory(1000)), "the text needs");
    const Context context = with_memory(1.1 * needed + 2000);
    for (int i = 0; i < 3; ++i) {
        CHECK(read_table(path, context).has_value());
    }
}
