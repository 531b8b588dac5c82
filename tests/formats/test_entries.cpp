#include <map>

#include "chainmark/formats/array_file.hpp"
#include "chainmark/formats/entry_source.hpp"
#include "chainmark/formats/matrix_market.hpp"
#include "chainmark/formats/numbers.hpp"
#include "formats/support.hpp"
#include "support/near.hpp"

using namespace chainmark;
using namespace chainmark::test;
using Complex = std::complex<double>;

namespace {

using Dense = std::map<std::pair<std::int64_t, std::int64_t>, Complex>;

struct Matrix {
    std::int64_t rows = 0;
    std::int64_t columns = 0;
    Dense entries;
    std::vector<std::string> warnings;
};

Result<Matrix> matrix_in(const std::string& path) {
    const auto source = open_entries(path, "", with_memory());
    if (!source) {
        return tl::unexpected(source.error());
    }
    Matrix matrix;
    matrix.rows = (*source)->rows();
    matrix.columns = (*source)->columns();
    std::int64_t count = 0;
    const Result<void> done = (*source)->for_each(
        [&](std::span<const MatrixEntry> block) {
            for (const MatrixEntry& entry : block) {
                matrix.entries[{entry.row, entry.column}] += entry.value;
                ++count;
            }
        },
        with_memory());
    if (!done) {
        return tl::unexpected(done.error());
    }
    CHECK(count <= (*source)->most_entries());
    matrix.warnings = (*source)->warnings();
    return matrix;
}

Result<Matrix> matrix_of(const std::string& text) {
    const Folder folder;
    return matrix_in(put(folder / "m.mtx", text));
}

/// Compares with NumPy's dense array; SciPy's writer prints 16 significant digits.
void check_same(const Matrix& matrix, const Array& dense) {
    REQUIRE(dense.shape == ArrayShape{matrix.rows, matrix.columns});
    const Array all =
        as_complex(Array{dense.source, dense.stored_as, false, dense.shape, dense.values, {}},
                   with_memory())
            .value();
    const auto& values = std::get<std::vector<Complex>>(all.values);
    for (std::int64_t row = 0; row < matrix.rows; ++row) {
        for (std::int64_t column = 0; column < matrix.columns; ++column) {
            const auto found = matrix.entries.find({row, column});
            const Complex value = found == matrix.entries.end() ? 0.0 : found->second;
            const Complex expected =
                values[static_cast<std::size_t>(row * matrix.columns + column)];
            const double digits = 1e-15 * std::abs(expected);
            CHECK_NEAR(value.real(), expected.real(), bound(digits));
            CHECK_NEAR(value.imag(), expected.imag(), bound(digits));
        }
    }
}

}  // namespace

TEST_CASE("every file of a matrix gives the entries of NumPy's dense array") {
    for (const std::string name :
         {"general", "complex_general", "symmetric", "hermitian", "skew", "integer"}) {
        const Array dense = read_array(python_files() / (name + ".npy"), "", with_memory()).value();
        for (const char* end :
             {".npy", ".mtx", "_array.mtx", ".mtx.gz", "_csr.npz", "_csc.npz", "_coo.npz"}) {
            const std::string path = python_files() / (name + end);
            CAPTURE(path);
            const Result<Matrix> matrix = matrix_in(path);
            if (!matrix) {
                FAIL(to_string(matrix.error()));
            }
            check_same(*matrix, dense);
            CHECK(matrix->warnings.empty());
        }
    }
}

TEST_CASE("SciPy does write the symmetric kinds that are tested above") {
    const auto first_line = [](const std::string& name) {
        const std::string text = content(python_files() / name);
        return text.substr(0, text.find('\n'));
    };
    CHECK(first_line("symmetric.mtx").find("symmetric") != std::string::npos);
    CHECK(first_line("hermitian.mtx").find("hermitian") != std::string::npos);
    CHECK(first_line("skew_array.mtx").find("skew-symmetric") != std::string::npos);
}

TEST_CASE("patterns, dense matrices in memory, repeated entries") {
    const auto pattern = matrix_in(python_files() / "pattern.mtx");
    const auto general = matrix_in(python_files() / "general.mtx");
    REQUIRE(pattern.has_value());
    CHECK(pattern->entries.size() == general->entries.size());
    CHECK(pattern->entries.begin()->second == Complex(1));
    const auto repeated = matrix_in(python_files() / "repeated.npz");
    REQUIRE(repeated.has_value());
    CHECK(repeated->entries.at({1, 1}) == Complex(5));
    REQUIRE(repeated->warnings.size() == 1);
    CHECK(repeated->warnings[0].find("1 value at a place that occurs before") == 0);
    check_refused(matrix_in(python_files() / "blocks.npz"), "the sparse format is 'bsr'");
    check_refused(matrix_in(python_files() / "not_finite.npy"), "element [0, 1] is not finite");
    check_refused(matrix_in(python_files() / "scalar.npy"), "with two axes");
    check_refused(matrix_in(python_files() / "plain.npz"), "say which one is the matrix: 'E'");
}

TEST_CASE("Matrix Market by hand: the definition's kinds") {
    const auto skew =
        matrix_of("%%MatrixMarket MATRIX Coordinate Real Skew-Symmetric\n% a\n\n2 2 1\n2 1 3\n");
    REQUIRE(skew.has_value());
    CHECK(skew->entries == Dense{{{1, 0}, 3}, {{0, 1}, -3}});
    const auto hermitian = matrix_of(
        "%%MatrixMarket matrix coordinate complex hermitian\n2 2 2\n1 1 5 0\n\n2 1 1 -2\r\n");
    REQUIRE(hermitian.has_value());
    CHECK(hermitian->entries == Dense{{{0, 0}, 5}, {{1, 0}, {1, -2}}, {{0, 1}, {1, 2}}});
    const auto array = matrix_of("%%MatrixMarket matrix array real symmetric\n2 2\n1\n2\n3\n");
    REQUIRE(array.has_value());
    CHECK(array->entries == Dense{{{0, 0}, 1}, {{1, 0}, 2}, {{0, 1}, 2}, {{1, 1}, 3}});
    const auto lower = matrix_of("%%MatrixMarket matrix array real skew-symmetric\n3 3\n1\n2\n3\n");
    REQUIRE(lower.has_value());
    CHECK(lower->entries.at({2, 1}) == Complex(3));
    CHECK(lower->entries.at({0, 2}) == Complex(-2));
}

TEST_CASE("Matrix Market: what is met in practice is read with a warning") {
    const std::string start = "%%MatrixMarket matrix coordinate real ";
    const auto both = matrix_of(start + "symmetric\n2 2 3\n1 1 1\n1 2 3\n2 1 3\n");
    REQUIRE(both.has_value());
    CHECK(both->entries.at({0, 1}) == Complex(3));
    CHECK(both->entries.at({1, 0}) == Complex(3));
    REQUIRE(both->warnings.size() == 1);
    CHECK(both->warnings[0].find("line 4: both triangles") == 0);
    const auto upper = matrix_of(start + "symmetric\n2 2 1\n1 2 3\n");
    CHECK(upper->entries.at({1, 0}) == Complex(3));
    CHECK(upper->warnings.at(0).find("upper triangle") != std::string::npos);
    const auto twice = matrix_of(start + "general\n2 2 3\n2 2 1\n1 1 4\n2 2 2\n");
    CHECK(twice->entries.at({1, 1}) == Complex(3));
    CHECK(twice->warnings.size() == 1);
}

TEST_CASE("Matrix Market: what is wrong is refused with line and column") {
    const auto refused =
        [](const std::string& kind, const std::string& rest, const std::string& part) {
            check_refused(matrix_of("%%MatrixMarket matrix " + kind + "\n" + rest), part);
        };
    refused("coordinate real general", "2 2 1\n3 1 1\n", "m.mtx:3:1: '3' is no index here; 1 to 2");
    refused("coordinate real general", "2 2 1\n1 0 1\n", "m.mtx:3:3: '0' is no index");
    refused("coordinate real general", "2 2 1\n1 -1 1\n", "'-1' is no index");
    refused("coordinate real general", "2 2 1\n1 99999999999999999999 1\n", "is no index");
    refused("coordinate real general", "2 2 1\n1 1 nan\n", "m.mtx:3:5: 'nan' is not finite");
    refused("coordinate real general", "2 2 1\n1 1 1,5\n", "decimals behind a point");
    refused("coordinate real general", "2 2 1\n1 1 1e999\n", "a number below 1.8e308");
    refused("coordinate real general", "2 2 1\n1 1\n", "ends too early");
    refused("coordinate real general", "2 2 1\n1 1 1 2\n", "follows a complete entry");
    refused("coordinate real general", "2 2 2\n1 1 1\n", "the file ends after 1 of 2 entries");
    refused("coordinate real general", "2 2 1\n1 1 1\n2 2 2\n", "more than the 1 entry");
    refused("coordinate real general", "-2 2 1\n", "where the sizes are expected");
    refused("coordinate real general",
            "1000000000000 1000000000000 1000000000000\n1 1 1\n",
            "ends after 1 of");
    refused("coordinate real general", "2 2 99999999999999999\n", "impossible sizes");
    refused("coordinate real general", "0 2 1\n", "impossible sizes");
    refused("coordinate real general", "", "ends before its sizes");
    refused("coordinate real symmetric", "2 3 1\n", "2 x 3 cannot be symmetric");
    refused("coordinate integer general", "1 1 1\n1 1 1.5\n", "no integer");
    refused("coordinate complex hermitian", "1 1 1\n1 1 1 0.5\n", "imaginary part 0.5");
    refused("coordinate real skew-symmetric", "1 1 1\n1 1 1\n", "is not 0");
    refused("coordinate real hermitian", "1 1 1\n", "hermitian belongs to complex");
    refused("array pattern general", "1 1\n", "array with pattern");
    refused("coordinate pattern hermitian", "1 1 1\n", "hermitian belongs");
    refused("coordinate quaternion general", "1 1 1\n", "'quaternion' in the first line");
    check_refused(matrix_of("sites,E\n8,-3\n"), "not that of a Matrix Market matrix");
    refused("coordinate real general",
            "1 1 1\n" + std::string(3 << 20, '%'),
            "a line of more than 64 KiB");
}

TEST_CASE("what is written reads back, and an interrupt ends the reading") {
    std::string text = "%%MatrixMarket matrix coordinate real general\n300000 1 300000\n";
    for (int i = 1; i <= 300000; ++i) {
        text += std::to_string(i) + " 1 " + number_text(1.0 / i) + "\n";
    }
    const Folder folder;
    const auto source = open_entries(put(folder / "m.mtx", text), "", with_memory());
    REQUIRE(source.has_value());
    std::int64_t wrong = 0;
    std::int64_t count = 0;
    const auto each = [&](std::span<const MatrixEntry> block) {
        for (const MatrixEntry& entry : block) {
            ++count;
            wrong += entry.value != 1.0 / static_cast<double>(entry.row + 1) ? 1 : 0;
        }
    };
    REQUIRE((*source)->for_each(each, with_memory()).has_value());
    CHECK(count == 300000);
    CHECK(wrong == 0);
    Context stopped = with_memory();
    std::stop_source stop;
    stop.request_stop();
    stopped.stop = stop.get_token();
    CHECK_THROWS_AS(static_cast<void>((*source)->for_each(each, stopped)), Interrupted);
}
