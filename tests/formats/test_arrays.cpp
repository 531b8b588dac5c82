#include <cmath>

#include "chainmark/formats/array_file.hpp"
#include "formats/support.hpp"

using namespace chainmark;
using namespace chainmark::test;
using Complex = std::complex<double>;

namespace {

Result<Array> python_array(const std::string& file, const std::string& name = "") {
    return read_array(python_files() / file, name, with_memory());
}

/// make_files.py's grid: element [i, j] of 3 x 4 is 10 i + j + 0.25, and + i (that + 100).
template <class T>
void check_grid(const Array& array) {
    REQUIRE(array.shape == ArrayShape{3, 4});
    const auto& values = std::get<std::vector<T>>(array.values);
    for (std::size_t i = 0; i < 12; ++i) {
        const double expected =
            10.0 * static_cast<double>(i / 4) + static_cast<double>(i % 4) + 0.25;
        if constexpr (std::is_same_v<T, Complex>) {
            CHECK(values[i] == Complex(expected, expected + 100));
        } else {
            CHECK(values[i] == expected);
        }
    }
}

template <class T>
void check_grid(const Result<Array>& array) {
    if (!array) {
        FAIL(to_string(array.error()));
    }
    check_grid<T>(*array);
}

const std::vector<double>& doubles(const Result<Array>& array) {
    if (!array) {
        FAIL(to_string(array.error()));
    }
    return std::get<std::vector<double>>(array->values);
}

/// The bytes of an NPY file with this header text.
std::string npy_file(const std::string& header, const std::string& data, char version = 1) {
    std::string file = "\x93NUMPY";
    file += {version, '\0'};
    for (int i = 0; i < (version == 1 ? 2 : 4); ++i) {
        file += static_cast<char>((header.size() >> (8 * i)) & 0xff);
    }
    return file + header + data;
}

Result<Array> array_of(const std::string& bytes) {
    const Folder folder;
    return read_array(put(folder / "a.npy", bytes), "", with_memory());
}

Result<Array> with_header(const std::string& header) {
    return array_of(npy_file(header, std::string(96, '\0')));
}

}  // namespace

TEST_CASE("NPY: every order and type gives the same numbers") {
    for (const char* file : {"real.npy",
                             "fortran.npy",
                             "single.npy",
                             "big_endian.npy",
                             "big_single.npy",
                             "version1.npy",
                             "version2.npy",
                             "version3.npy"}) {
        CAPTURE(file);
        check_grid<double>(python_array(file));
    }
    for (const char* file : {"complex.npy", "complex_single.npy", "complex_big.npy"}) {
        CAPTURE(file);
        check_grid<Complex>(python_array(file));
    }
    CHECK(python_array("single.npy")->single_precision);
    CHECK(python_array("complex_single.npy")->single_precision);
    CHECK_FALSE(python_array("real.npy")->single_precision);
    const auto three = python_array("fortran3.npy");
    for (std::size_t i = 0; i < 24; ++i) {
        CHECK(doubles(three)[i] == static_cast<double>(i));
    }
}

TEST_CASE("NPY: integers, booleans, single numbers, nothing") {
    int files = 0;
    for (const auto& entry : std::filesystem::directory_iterator(python_files().path)) {
        const std::string name = entry.path().filename().string();
        if (name.rfind("int_", 0) == 0) {
            CAPTURE(name);
            CHECK(doubles(python_array(name)) == std::vector<double>{0, 1, 2, 3, 4, 5});
            ++files;
        }
    }
    CHECK(files == 10);
    CHECK(doubles(python_array("bool.npy")) == std::vector<double>{1, 0, 1});
    CHECK(doubles(python_array("scalar.npy")) == std::vector<double>{2.5});
    CHECK(python_array("scalar.npy")->shape.empty());
    CHECK(python_array("empty.npy")->shape == ArrayShape{0, 5});
    CHECK(std::get<std::vector<std::int64_t>>(python_array("large.npy")->values)[0] ==
          (std::int64_t{1} << 53) + 1);
    check_refused(python_array("too_large.npy"), "too large");
}

TEST_CASE("NPY: types that are no numbers are refused by name") {
    check_refused(python_array("object.npy"), "Python objects (|O)");
    check_refused(python_array("structure.npy"), "structures");
    check_refused(python_array("string.npy"), "'<U2'");
    check_refused(python_array("half.npy"), "'<f2'");
    check_refused(python_array("extended.npy"), "'<f16'");
}

TEST_CASE("NPY: headers written otherwise, and absurd ones") {
    const std::string twelve = std::string(96, '\0');
    CHECK(with_header("{\"shape\":(3 , 4),\"descr\":\"<f8\",\"fortran_order\":False}").has_value());
    CHECK(array_of(
              npy_file("{'descr': '=f8', 'fortran_order': True, 'shape': (12L,), }\n", twelve, 3))
              .has_value());
    const auto shape = [](const std::string& text) {
        return with_header("{'descr': '<f8', 'fortran_order': False, 'shape': " + text + "}");
    };
    CHECK(shape("(12,)").has_value());
    check_refused(shape("(13,)"),
                  "96 bytes follow the header, and the shape 13 of '<f8' needs 104");
    check_refused(shape("(11,)"), "needs 88");
    check_refused(shape("(-12,)"), "a length of an axis is expected");
    check_refused(shape("(1000000000000, 1000000000000)"), "is impossible");
    check_refused(shape("(99999999999999999999,)"), "a length of an axis");
    check_refused(shape("12"), "'(' is expected");
    check_refused(shape("(0, 4611686018427387904, 4611686018427387904)"), "96 bytes follow");
    check_refused(with_header("{'descr': '<f8', 'shape': (12,)}"), "the keys 'descr'");
    check_refused(with_header("{'descr': '<f8', 'descr': '<f8'"), "once");
    check_refused(with_header("{'descr': '<f8'} and more"), "the end of the header");
    check_refused(with_header("{'descr': os.system('x')"), "byte 20");
    check_refused(array_of("\x93NUMPY\x09\x01" + std::string(50, ' ')), "NPY version 9.1");
    check_refused(array_of(npy_file("", "").substr(0, 8) + "\xff\xff\xff\x7f"),
                  "ends in its header");
    // the claim of 8 TB in a gzip file, whose size is not known before
    check_refused(read_array(python_files() / "real.npy", "x", with_memory()),
                  "there is no array 'x'");
}

TEST_CASE("NPZ: stored and deflated, many arrays") {
    for (const char* file : {"plain.npz", "packed.npz"}) {
        CAPTURE(file);
        const auto arrays = read_arrays(python_files() / file, with_memory());
        REQUIRE(arrays.has_value());
        CHECK(arrays->size() == 3);
        check_grid<double>(arrays->at("E"));
        check_grid<Complex>(arrays->at("psi"));
        const auto infos = list_arrays(python_files() / file, with_memory());
        REQUIRE(infos.has_value());
        CHECK(infos->at(0).name == "E");
        CHECK(infos->at(0).shape == ArrayShape{3, 4});
    }
    check_refused(python_array("plain.npz", "e"), "there is no array 'e'; did you mean 'E'?");
    check_refused(read_array(python_files() / "packed.npz", "zeros", with_memory(10000)),
                  "of memory");
    check_refused(read_arrays(python_files() / "objects.npz", with_memory()), "Python objects");
    CHECK_FALSE(list_arrays(python_files() / "objects.npz", with_memory())->at(0).readable);
}

TEST_CASE("complex numbers from pairs and from parts") {
    const auto real = python_array("real.npy");
    Array imaginary = python_array("real.npy").value();
    for (double& value : std::get<std::vector<double>>(imaginary.values)) {
        value += 100;
    }
    check_grid<Complex>(complex_from_parts(*real, imaginary, with_memory()));
    Array pairs = python_array("real.npy").value();
    pairs.shape = {3, 2, 2};
    const auto joined = complex_from_last_axis(pairs, with_memory());
    REQUIRE(joined.has_value());
    CHECK(joined->shape == ArrayShape{3, 2});
    CHECK(std::get<std::vector<Complex>>(joined->values)[1] == Complex(2.25, 3.25));
    check_refused(complex_from_last_axis(*real, with_memory()), "no pairs along its last axis");
    const auto wide = as_complex(python_array("real.npy").value(), with_memory());
    CHECK(std::get<std::vector<Complex>>(wide->values)[5] == Complex(11.25));
    CHECK(complex_parts({"E", "psi_Im", "psi_Re"}, "psi").first == "psi_Re");
    CHECK(complex_parts({"psi/imag", "psi/real"}, "psi").second == "psi/imag");
    CHECK(complex_parts({"psi"}, "psi").first.empty());
}

TEST_CASE("other files are not taken for arrays") {
    const Folder folder;
    CHECK(array_file_kind(put(folder / "x", "sites,E\n")) == ArrayFileKind::other);
    check_refused(read_arrays(folder / "x", with_memory()), "no array file");
    check_refused(read_arrays(folder / "none", with_memory()), "cannot be read");
    check_refused(read_arrays(put(folder / "x", "PK\x03\x04 and no more"), with_memory()),
                  "no zip archive");
}
