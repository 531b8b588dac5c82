#pragma once

#include <complex>
#include <cstdint>
#include <map>
#include <string>
#include <variant>
#include <vector>

#include "chainmark/formats/memory_share.hpp"

namespace chainmark {

using ArrayShape = std::vector<std::int64_t>;

/// Numbers with a shape, from NPY, NPZ or HDF5.
struct Array {
    std::string source;             ///< "run.npz:E", for messages
    std::string stored_as;          ///< "<f4", "HDF5 integer of 8 bytes"
    bool single_precision = false;  ///< stored with 24 bits of precision
    ArrayShape shape;               ///< empty for a single number
    /// Row-major: the last index varies fastest, however the file stores it. Integers and booleans
    /// are doubles where all of them are exact as such, else int64.
    std::variant<std::vector<double>, std::vector<std::complex<double>>, std::vector<std::int64_t>>
        values;
    MemoryShare memory;

    std::size_t size() const;
    bool is_complex() const { return values.index() == 1; }
};

using Arrays = std::map<std::string, Array>;

/// "3 x 4", "a single number".
std::string shape_text(const ArrayShape& shape);

/// The array as complex numbers with an imaginary part of 0. Needs memory for both.
Result<Array> as_complex(Array array, const Context& context);

/// Pairs (re, im) along the last axis, of length 2, made into complex numbers. Fails with
/// `wrong_type` where the array is complex already or the axis has another length.
Result<Array> complex_from_last_axis(const Array& array, const Context& context);

/// One complex array from two real ones of the same shape. Fails with `wrong_type`.
Result<Array> complex_from_parts(const Array& real, const Array& imaginary, const Context& context);

/// The names of the real and the imaginary part of `name` among `names`, where a file has two data
/// sets instead of one: name_re and name_im, _real and _imag, with '.', '/' or nothing for '_', in
/// any case. Both empty where there are none.
std::pair<std::string, std::string> complex_parts(const std::vector<std::string>& names,
                                                  const std::string& name);

}  // namespace chainmark
