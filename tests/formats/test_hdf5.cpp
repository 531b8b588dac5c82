#include "chainmark/formats/array_file.hpp"
#include "formats/support.hpp"

using namespace chainmark;
using namespace chainmark::test;
using Complex = std::complex<double>;

namespace {

Result<Array> data_set(const std::string& name, double memory = 256e6) {
    return read_array(python_files() / "all.h5", name, with_memory(memory));
}

double element(const Result<Array>& array, std::size_t i) {
    if (!array) {
        FAIL(to_string(array.error()));
    }
    return std::get<std::vector<double>>(array->values).at(i);
}

Complex complex_element(const Result<Array>& array, std::size_t i) {
    if (!array) {
        FAIL(to_string(array.error()));
    }
    return std::get<std::vector<Complex>>(array->values).at(i);
}

}  // namespace

TEST_SUITE_BEGIN("hdf5" * doctest::skip(!has_hdf5()));

TEST_CASE("HDF5: numbers of every kind, as h5py writes them") {
    for (const char* name : {"E", "group/inner/single", "big"}) {
        CAPTURE(name);
        const auto array = data_set(name);
        CHECK(element(array, 6) == 12.25);
        CHECK(array->shape == ArrayShape{3, 4});
    }
    CHECK(element(data_set("n"), 5) == 5);
    CHECK(std::get<std::vector<std::int64_t>>(data_set("large")->values)[0] ==
          (std::int64_t{1} << 53) + 1);
    CHECK(element(data_set("flag"), 0) == 1);
    CHECK(element(data_set("scalar"), 0) == 2.5);
    CHECK(data_set("scalar")->shape.empty());
    CHECK(data_set("none")->shape == ArrayShape{0, 5});
    CHECK(complex_element(data_set("psi"), 6) == Complex(12.25, 112.25));
    CHECK(complex_element(data_set("psi_single"), 6) == Complex(12.25, 112.25));
    CHECK(complex_element(data_set("named"), 1) == Complex(3, 4));
}

TEST_CASE("HDF5: chunks, compression, and rows larger than the buffer") {
    const auto packed = data_set("packed");
    const auto wide = data_set("wide");
    for (std::size_t i = 0; i < 300000; i += 997) {
        CHECK(element(packed, i) == static_cast<double>(i));
    }
    for (std::size_t i = 0; i < 5000000; i += 49999) {
        CHECK(element(wide, i) == static_cast<double>(i));
    }
}

TEST_CASE("HDF5: the list, and what is refused by name") {
    const auto infos = list_arrays(python_files() / "all.h5", with_memory());
    if (!infos) {
        FAIL(to_string(infos.error()));
    }
    CHECK(infos->size() == 20);
    check_refused(data_set("other"), "HDF5 compound");
    check_refused(data_set("word"), "HDF5 string");
    check_refused(data_set("nothing"), "no elements");
    check_refused(data_set("e"), "did you mean 'E'?");
    check_refused(data_set("claimed"), "is impossible");
    check_refused(data_set("chunk"), "which is read as a whole");
    check_refused(data_set("wide", 1e7), "of memory");
    const Folder folder;
    const std::string bytes = content(python_files() / "all.h5");
    check_refused(read_arrays(put(folder / "x.h5", bytes.substr(0, 3000)), with_memory()),
                  "cannot be opened");
}

TEST_SUITE_END();
