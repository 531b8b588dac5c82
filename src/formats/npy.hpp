#pragma once

#include <span>

#include "chainmark/formats/array.hpp"
#include "chainmark/formats/byte_stream.hpp"

/// NumPy's array files, versions 1.0, 2.0 and 3.0.
namespace chainmark {

/// What stands before the elements.
struct NpyHeader {
    std::string descr;     ///< as written: "<f8"
    char kind = 0;         ///< f, c, i, u, b as NumPy has them, S for bytes
    int bytes = 0;         ///< of one element
    bool swapped = false;  ///< the bytes stand in the order that this machine does not use
    bool fortran_order = false;
    ArrayShape shape;
    std::int64_t count = 0;        ///< product of the shape
    std::int64_t data_offset = 0;  ///< where the elements start
};

/// Reads the header and leaves the stream at the first element. Fails with `bad_syntax` and the
/// byte, and with `wrong_type` naming an element type that is no number: objects, structures,
/// strings, half and extended precision. Byte strings are let through for the one caller that
/// wants them. Where the stream knows its size, the elements must fill it exactly.
Result<NpyHeader> read_npy_header(ByteStream& stream);

/// The next to.size() elements in the file's order, as double, std::complex<double> or
/// std::int64_t. Fails with `bad_syntax` where the file ends, `wrong_type` where the type cannot
/// hold the stored one, `bad_value` for an integer that would be rounded.
template <class T>
Result<void> read_elements(ByteStream& stream, const NpyHeader& header, std::span<T> to);

/// An element's value of a shape in column-major order goes to its place in row-major order:
/// tells the places one after the other.
class RowMajorPlaces {
public:
    explicit RowMajorPlaces(const ArrayShape& shape);
    /// Place of the element at hand, then on to the next one.
    std::size_t next();

private:
    ArrayShape shape_;
    std::vector<std::int64_t> strides_;
    std::vector<std::int64_t> index_;
    std::int64_t place_ = 0;
};

/// The array that a stream holds. Fails as `read_npy_header` and `read_elements` do, and with
/// `over_memory`.
Result<Array> read_npy(ByteStream& stream, const Context& context);

}  // namespace chainmark
