#include <algorithm>
#include <array>
#include <bit>
#include <charconv>
#include <cstring>
#include <limits>
#include <optional>

#include <fmt/format.h>

#include "chainmark/formats/npy.hpp"
#include "chainmark/formats/shown.hpp"

namespace chainmark {
namespace {

constexpr std::string_view magic = "\x93NUMPY";
constexpr std::size_t longest_header = 1U << 20;
constexpr std::size_t most_axes = 64;

tl::unexpected<Error> bad_header(const ByteStream& stream,
                                 std::size_t byte,
                                 const std::string& found,
                                 const std::string& allowed) {
    return refuse(ErrorCode::bad_syntax,
                  {.source = stream.source()},
                  fmt::format("byte {}: {}", byte, found),
                  allowed);
}

/// Reads the dictionary {'descr': ..., 'fortran_order': ..., 'shape': ...}: a literal of Python
/// with exactly these keys in any order.
class HeaderText {
public:
    HeaderText(std::string_view text, NpyHeader& header) : text_(text), header_(header) {}

    /// The place of the first character that is wrong, and what stands there instead of what.
    std::optional<std::string> problem;
    std::size_t at = 0;

    bool read() {
        if (!expect('{')) {
            return false;
        }
        while (!accept('}')) {
            const std::optional<std::string> key = quoted();
            if (!key || !expect(':') || !value(*key)) {
                return problem.has_value() ? false : wrong("a key in quotes");
            }
            if (!accept(',')) {
                if (!expect('}')) {
                    return false;
                }
                break;
            }
        }
        skip();
        if (at < text_.size()) {
            return wrong("the end of the header");
        }
        return (has_descr_ && has_order_ && has_shape_) ||
               wrong("the keys 'descr', 'fortran_order' and 'shape'");
    }

private:
    bool wrong(const std::string& expected) {
        problem = fmt::format("{} where {} is expected", shown(text_.substr(at, 20)), expected);
        return false;
    }
    void skip() {
        while (at < text_.size() && std::strchr(" \t\r\n", text_[at]) != nullptr) {
            ++at;
        }
    }
    bool accept(char c) {
        skip();
        const bool here = at < text_.size() && text_[at] == c;
        at += here ? 1 : 0;
        return here;
    }
    bool expect(char c) { return accept(c) || wrong(fmt::format("'{}'", c)); }
    bool accept_word(std::string_view word) {
        skip();
        const bool here = text_.substr(at, word.size()) == word;
        at += here ? word.size() : 0;
        return here;
    }

    std::optional<std::string> quoted() {
        skip();
        const char quote = at < text_.size() ? text_[at] : '\0';
        const std::size_t close =
            quote == '\'' || quote == '"' ? text_.find(quote, at + 1) : std::string_view::npos;
        if (close == std::string_view::npos) {
            return std::nullopt;
        }
        std::string content(text_.substr(at + 1, close - at - 1));
        at = close + 1;
        return content;
    }

    bool value(const std::string& key) {
        if (key == "descr" && !has_descr_) {
            has_descr_ = true;
            return descr();
        }
        if (key == "fortran_order" && !has_order_) {
            has_order_ = true;
            header_.fortran_order = accept_word("True");
            return header_.fortran_order || accept_word("False") || wrong("True or False");
        }
        if (key == "shape" && !has_shape_) {
            has_shape_ = true;
            return shape();
        }
        return wrong("each of the keys 'descr', 'fortran_order' and 'shape' once");
    }

    bool descr() {
        skip();
        if (at < text_.size() && text_[at] == '[') {
            header_.descr = "a structure";
            header_.kind = 'V';
            at = text_.size();  // its members do not matter: it is refused by name
            problem = "";
            return false;
        }
        const std::optional<std::string> word = quoted();
        if (!word) {
            return wrong("an element type in quotes");
        }
        header_.descr = *word;
        return true;
    }

    bool shape() {
        if (!expect('(')) {
            return false;
        }
        while (!accept(')')) {
            skip();
            std::int64_t length = 0;
            const auto [end, error] =
                std::from_chars(text_.data() + at, text_.data() + text_.size(), length);
            if (error != std::errc() || length < 0 || header_.shape.size() >= most_axes) {
                return wrong("a length of an axis");
            }
            at = static_cast<std::size_t>(end - text_.data());
            at += at < text_.size() && text_[at] == 'L' ? 1 : 0;  // Python 2
            header_.shape.push_back(length);
            if (!accept(',')) {
                return expect(')');
            }
        }
        return true;
    }

    std::string_view text_;
    NpyHeader& header_;
    bool has_descr_ = false;
    bool has_order_ = false;
    bool has_shape_ = false;
};

/// Order, kind and size from "<f8".
bool split_descr(NpyHeader& header) {
    const std::string_view descr = header.descr;
    if (descr == "|O") {
        header.kind = 'O';
        return true;
    }
    if (descr.size() < 3 || std::strchr("<>|=", descr[0]) == nullptr) {
        return false;
    }
    const char* last = descr.data() + descr.size();
    const auto [end, error] = std::from_chars(descr.data() + 2, last, header.bytes);
    header.kind = descr[1];
    constexpr char foreign_order = std::endian::native == std::endian::little ? '>' : '<';
    header.swapped = descr[0] == foreign_order && header.bytes > 1;
    return error == std::errc() && end == last;
}

bool is_number_type(const NpyHeader& header) {
    const auto is_one_of = [&](std::initializer_list<int> sizes) {
        return std::find(sizes.begin(), sizes.end(), header.bytes) != sizes.end();
    };
    switch (header.kind) {
        case 'f':
            return is_one_of({4, 8});
        case 'c':
            return is_one_of({8, 16});
        case 'i':
        case 'u':
            return is_one_of({1, 2, 4, 8});
        case 'b':
            return header.bytes == 1;
        default:
            return false;
    }
}

/// Why a type is not read, where people meet it.
std::string advice(const NpyHeader& header) {
    switch (header.kind) {
        case 'O':
            return "numbers: save with astype(float) or astype(complex); objects are pickled "
                   "programs and are never run";
        case 'V':
            return "one array a quantity, with np.savez";
        case 'f':
        case 'c':
            return "double precision: save with astype(float) or astype(complex)";
        default:
            return "one of f4 f8 c8 c16 i1 i2 i4 i8 u1 u2 u4 u8 b1";
    }
}

Result<void> check_type(const ByteStream& stream, const NpyHeader& header) {
    const bool byte_string = header.kind == 'S' && header.bytes > 0 && header.bytes <= 64;
    if (is_number_type(header) || byte_string) {
        return {};
    }
    return refuse(ErrorCode::wrong_type,
                  {.source = stream.source()},
                  header.kind == 'O'   ? "the elements are Python objects (" + header.descr + ")"
                  : header.kind == 'V' ? "the elements are structures"
                                       : "the elements are of type " + shown(header.descr),
                  advice(header));
}

/// The product of the shape, checked against what the stream holds.
Result<void> check_count(const ByteStream& stream, NpyHeader& header) {
    double product = 1;
    header.count = 1;
    for (const std::int64_t length : header.shape) {
        product *= static_cast<double>(length);
    }
    constexpr double largest = 4e18;
    if (product * header.bytes > largest) {
        return bad_header(stream,
                          10,
                          "the shape " + shape_text(header.shape) + " is impossible",
                          "a shape whose elements fit in a file");
    }
    for (const std::int64_t length : header.shape) {
        header.count = product == 0 ? 0 : header.count * length;
    }
    const std::optional<std::int64_t> size = stream.size();
    const std::int64_t needed = header.count * header.bytes;
    if (size && *size - header.data_offset != needed) {
        return bad_header(stream,
                          static_cast<std::size_t>(header.data_offset),
                          fmt::format("{} bytes follow the header, and the shape {} of {} needs {}",
                                      *size - header.data_offset,
                                      shape_text(header.shape),
                                      shown(header.descr),
                                      needed),
                          "the complete file of one array");
    }
    return {};
}

/// Length of the header's text, from the magic bytes, the version and the length field.
Result<std::size_t> read_start(ByteStream& stream) {
    std::array<unsigned char, 12> start{};
    const auto chars = std::as_writable_bytes(std::span(start));
    char* to = static_cast<char*>(static_cast<void*>(chars.data()));
    Result<std::size_t> got = stream.read({to, 8});
    if (!got) {
        return got;
    }
    if (*got < 8 || std::memcmp(to, magic.data(), magic.size()) != 0) {
        return bad_header(stream, 0, "this is no NPY file", "a file written by np.save");
    }
    const bool short_length = start[6] == 1;
    if (start[6] < 1 || start[6] > 3) {
        return bad_header(stream,
                          6,
                          fmt::format("NPY version {}.{}", start[6], start[7]),
                          "version 1.0, 2.0 or 3.0");
    }
    const std::size_t width = short_length ? 2 : 4;
    Result<std::size_t> more = stream.read({to + 8, width});
    if (!more) {
        return more;
    }
    std::size_t length = 0;
    for (std::size_t i = 0; i < width; ++i) {
        length |= static_cast<std::size_t>(start[8 + i]) << (8 * i);
    }
    if (*more < width || length > longest_header) {
        return bad_header(stream,
                          8,
                          *more < width ? "the file ends in its header"
                                        : fmt::format("a header of {} bytes", length),
                          "the header of an array of numbers");
    }
    return (short_length ? 0 : longest_header * 2) + length;
}

}  // namespace

Result<NpyHeader> read_npy_header(ByteStream& stream) {
    Result<std::size_t> start = read_start(stream);
    if (!start) {
        return tl::unexpected(start.error());
    }
    const std::size_t length = *start % (longest_header * 2);
    const std::size_t first = *start == length ? 10 : 12;
    std::string text(length, '\0');
    Result<std::size_t> got = stream.read(text);
    if (!got) {
        return tl::unexpected(got.error());
    }
    if (*got < length) {
        return bad_header(stream, first + *got, "the file ends in its header", "a complete file");
    }
    NpyHeader header;
    HeaderText reader(text, header);
    const bool read = reader.read();
    const bool structure = header.kind == 'V';
    if (!read && !structure) {
        return bad_header(stream,
                          first + reader.at,
                          reader.problem.value_or("a bad header"),
                          "a header as np.save writes it");
    }
    header.data_offset = static_cast<std::int64_t>(first + length);
    if (!structure && !split_descr(header)) {
        return refuse(ErrorCode::wrong_type,
                      {.source = stream.source()},
                      "the elements are of type " + shown(header.descr),
                      "an element type such as '<f8'");
    }
    Result<void> checked = check_type(stream, header);
    if (checked) {
        checked = check_count(stream, header);
    }
    if (!checked) {
        return tl::unexpected(checked.error());
    }
    return header;
}

}  // namespace chainmark
