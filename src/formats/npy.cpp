#include "chainmark/formats/npy.hpp"

#include <algorithm>
#include <array>
#include <cstring>
#include <limits>
#include <type_traits>

#include <fmt/format.h>

#include "chainmark/formats/shown.hpp"

namespace chainmark {
namespace {

constexpr std::int64_t exact_in_double = std::int64_t{1} << 53;
constexpr std::size_t piece = 1U << 15;  // elements at a time

/// One number as it is stored, in this machine's byte order.
template <class Stored>
Stored load(const char* from, bool swapped) {
    std::array<char, sizeof(Stored)> bytes{};
    std::memcpy(bytes.data(), from, sizeof(Stored));
    if (swapped) {
        std::reverse(bytes.begin(), bytes.end());
    }
    Stored value{};
    std::memcpy(&value, bytes.data(), sizeof(Stored));
    return value;
}

/// Whether `value` fits into T without rounding, and as T.
template <class T, class Stored>
bool convert(Stored value, T& to) {
    if constexpr (std::is_integral_v<Stored>) {
        if constexpr (std::is_same_v<T, std::int64_t>) {
            // A number of eight bits, no character. NOLINTNEXTLINE(bugprone-signed-char-misuse)
            to = static_cast<std::int64_t>(value);
            return std::in_range<std::int64_t>(value);
        } else {
            to = T(static_cast<double>(value));
            return std::in_range<std::int64_t>(value) &&
                   static_cast<std::int64_t>(value) <= exact_in_double &&
                   static_cast<std::int64_t>(value) >= -exact_in_double;
        }
    } else {
        to = T(static_cast<double>(value));
        return true;
    }
}

/// Decodes a run of elements; the number of those before the first that does not fit.
template <class T, class Stored>
std::size_t decode_run(const char* from, bool swapped, std::span<T> to) {
    for (std::size_t i = 0; i < to.size(); ++i) {
        if (!convert(load<Stored>(from + i * sizeof(Stored), swapped), to[i])) {
            return i;
        }
    }
    return to.size();
}

template <class Stored>
std::size_t decode_complex(const char* from, bool swapped, std::span<std::complex<double>> to) {
    for (std::size_t i = 0; i < to.size(); ++i) {
        const char* at = from + 2 * i * sizeof(Stored);
        to[i] = {static_cast<double>(load<Stored>(at, swapped)),
                 static_cast<double>(load<Stored>(at + sizeof(Stored), swapped))};
    }
    return to.size();
}

template <class T>
std::size_t decode_integers(const char* from, const NpyHeader& header, std::span<T> to) {
    const bool with_sign = header.kind == 'i';
    switch (header.bytes) {
        case 1:
            return with_sign ? decode_run<T, std::int8_t>(from, header.swapped, to)
                             : decode_run<T, std::uint8_t>(from, header.swapped, to);
        case 2:
            return with_sign ? decode_run<T, std::int16_t>(from, header.swapped, to)
                             : decode_run<T, std::uint16_t>(from, header.swapped, to);
        case 4:
            return with_sign ? decode_run<T, std::int32_t>(from, header.swapped, to)
                             : decode_run<T, std::uint32_t>(from, header.swapped, to);
        default:
            return with_sign ? decode_run<T, std::int64_t>(from, header.swapped, to)
                             : decode_run<T, std::uint64_t>(from, header.swapped, to);
    }
}

template <class T>
std::size_t decode(const char* from, const NpyHeader& header, std::span<T> to) {
    if constexpr (std::is_same_v<T, std::complex<double>>) {
        if (header.kind == 'c') {
            return header.bytes == 8 ? decode_complex<float>(from, header.swapped, to)
                                     : decode_complex<double>(from, header.swapped, to);
        }
    }
    if constexpr (!std::is_same_v<T, std::int64_t>) {
        if (header.kind == 'f') {
            return header.bytes == 4 ? decode_run<T, float>(from, header.swapped, to)
                                     : decode_run<T, double>(from, header.swapped, to);
        }
    }
    return decode_integers(from, header, to);
}

template <class T>
bool can_hold(const NpyHeader& header) {
    const bool integer = header.kind == 'i' || header.kind == 'u' || header.kind == 'b';
    return integer || (header.kind == 'f' && !std::is_same_v<T, std::int64_t>) ||
           (header.kind == 'c' && std::is_same_v<T, std::complex<double>>);
}

/// All elements, in row-major order.
template <class T>
Result<std::vector<T>> read_values(ByteStream& stream,
                                   const NpyHeader& header,
                                   MemoryShare& memory,
                                   const Context& context) {
    Result<void> taken =
        memory.take(static_cast<double>(header.count) * static_cast<double>(sizeof(T)),
                    stream.source(),
                    "the array of " + shape_text(header.shape));
    if (!taken) {
        return tl::unexpected(taken.error());
    }
    const auto count = static_cast<std::size_t>(header.count);
    std::vector<T> values(count);
    const bool scattered = header.fortran_order && header.shape.size() > 1;
    RowMajorPlaces places(header.shape);
    std::vector<T> buffer(scattered ? std::min(piece, count) : 0);
    for (std::size_t first = 0; first < count; first += piece) {
        poll(context);
        const std::size_t size = std::min(piece, count - first);
        const std::span<T> to =
            scattered ? std::span(buffer).first(size) : std::span(values).subspan(first, size);
        Result<void> read = read_elements(stream, header, to);
        if (!read) {
            return tl::unexpected(read.error());
        }
        for (std::size_t i = 0; scattered && i < size; ++i) {
            values[places.next()] = buffer[i];
        }
    }
    return values;
}

/// Doubles where every integer is exact as one.
Result<void> store_integers(Array& array, std::vector<std::int64_t> integers) {
    const bool exact = std::all_of(integers.begin(), integers.end(), [](std::int64_t value) {
        return value <= exact_in_double && value >= -exact_in_double;
    });
    if (!exact) {
        array.values = std::move(integers);
        return {};
    }
    Result<void> taken =
        array.memory.take(8.0 * static_cast<double>(integers.size()), array.source, "the array");
    if (taken) {
        array.values = std::vector<double>(integers.begin(), integers.end());
    }
    return taken;
}

template <class T>
Result<void> store(Array& array,
                   ByteStream& stream,
                   const NpyHeader& header,
                   const Context& context) {
    Result<std::vector<T>> values = read_values<T>(stream, header, array.memory, context);
    if (!values) {
        return tl::unexpected(values.error());
    }
    if constexpr (std::is_same_v<T, std::int64_t>) {
        return store_integers(array, std::move(*values));
    } else {
        array.values = std::move(*values);
        return {};
    }
}

}  // namespace

RowMajorPlaces::RowMajorPlaces(const ArrayShape& shape)
    : shape_(shape), strides_(shape.size(), 1), index_(shape.size(), 0) {
    for (std::size_t axis = shape.size(); axis > 1; --axis) {
        // may wrap for shapes with a length of 0, which have no places
        strides_[axis - 2] =
            static_cast<std::int64_t>(static_cast<std::uint64_t>(strides_[axis - 1]) *
                                      static_cast<std::uint64_t>(shape[axis - 1]));
    }
}

std::size_t RowMajorPlaces::next() {
    const std::int64_t here = place_;
    for (std::size_t axis = 0; axis < shape_.size(); ++axis) {
        place_ += strides_[axis];
        if (++index_[axis] < shape_[axis]) {
            break;
        }
        place_ -= strides_[axis] * shape_[axis];
        index_[axis] = 0;
    }
    return static_cast<std::size_t>(here);
}

template <class T>
Result<void> read_elements(ByteStream& stream, const NpyHeader& header, std::span<T> to) {
    if (!can_hold<T>(header)) {
        return refuse(ErrorCode::wrong_type,
                      {.source = stream.source()},
                      "the elements are of type " + shown(header.descr),
                      std::is_same_v<T, std::int64_t> ? "integers" : "real numbers");
    }
    const auto bytes = static_cast<std::size_t>(header.bytes);
    std::vector<char> raw(std::min(piece, to.size()) * bytes);
    for (std::size_t first = 0; first < to.size(); first += piece) {
        const std::span<T> part = to.subspan(first, std::min(piece, to.size() - first));
        Result<std::size_t> got = stream.read({raw.data(), part.size() * bytes});
        if (!got) {
            return tl::unexpected(got.error());
        }
        if (*got < part.size() * bytes) {
            return refuse(ErrorCode::bad_syntax,
                          {.source = stream.source()},
                          "the file ends before its last element",
                          "a complete file of shape " + shape_text(header.shape));
        }
        const std::size_t done = decode(raw.data(), header, part);
        if (done < part.size()) {
            return refuse(
                ErrorCode::bad_value,
                {.source = stream.source()},
                fmt::format("an element of type {} is too large to be read exactly",
                            shown(header.descr)),
                std::is_same_v<T, std::int64_t> ? "integers below 2^63" : "integers up to 2^53");
        }
    }
    return {};
}

template Result<void> read_elements(ByteStream&, const NpyHeader&, std::span<double>);
template Result<void> read_elements(ByteStream&, const NpyHeader&, std::span<std::int64_t>);
template Result<void> read_elements(ByteStream&, const NpyHeader&, std::span<std::complex<double>>);

Result<Array> read_npy(ByteStream& stream, const Context& context) {
    const Result<NpyHeader> header = read_npy_header(stream);
    if (!header) {
        return tl::unexpected(header.error());
    }
    if (header->kind == 'S') {
        return refuse(ErrorCode::wrong_type,
                      {.source = stream.source()},
                      "the elements are strings (" + shown(header->descr) + ")",
                      "numbers");
    }
    Array array;
    array.source = stream.source();
    array.stored_as = header->descr;
    array.single_precision =
        (header->kind == 'f' && header->bytes == 4) || (header->kind == 'c' && header->bytes == 8);
    array.shape = header->shape;
    array.memory = MemoryShare(context);
    Result<void> stored;
    if (header->kind == 'c') {
        stored = store<std::complex<double>>(array, stream, *header, context);
    } else if (header->bytes == 8 && header->kind != 'f') {
        stored = store<std::int64_t>(array, stream, *header, context);
    } else {
        stored = store<double>(array, stream, *header, context);
    }
    if (!stored) {
        return tl::unexpected(stored.error());
    }
    return array;
}

}  // namespace chainmark
