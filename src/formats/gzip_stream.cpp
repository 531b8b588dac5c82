#include <algorithm>
#include <cerrno>
#include <cstring>

#include <fmt/format.h>
#include <sys/stat.h>
#include <zlib.h>

#include "chainmark/formats/byte_stream.hpp"
#include "chainmark/formats/shown.hpp"

namespace chainmark {
namespace {

/// zlib's file reader passes plain files through.
class GzipStream : public FileStream {
public:
    GzipStream(std::string path, gzFile file, double bytes)
        : path_(std::move(path)), file_(file), bytes_(bytes) {}
    GzipStream(const GzipStream&) = delete;
    GzipStream& operator=(const GzipStream&) = delete;
    ~GzipStream() override { static_cast<void>(gzclose_r(file_)); }

    Result<std::size_t> read(std::span<char> to) override {
        constexpr std::size_t largest = 1U << 30;  // zlib counts in int
        std::size_t done = 0;
        while (done < to.size()) {
            const auto wanted = static_cast<unsigned>(std::min(largest, to.size() - done));
            const int got = gzread(file_, to.data() + done, wanted);
            int error = Z_OK;
            const char* message = gzerror(file_, &error);
            if (got < 0 || (error != Z_OK && error != Z_STREAM_END)) {
                return refuse(ErrorCode::cannot_read,
                              {.source = path_},
                              fmt::format("reading stopped at byte {}: {}",
                                          gztell(file_),
                                          error == Z_ERRNO ? std::strerror(errno) : message),
                              "a complete file");
            }
            if (got == 0) {
                break;
            }
            done += static_cast<std::size_t>(got);
        }
        return done;
    }

    std::optional<std::int64_t> size() const override {
        return gzdirect(file_) != 0 ? std::optional(static_cast<std::int64_t>(bytes_))
                                    : std::nullopt;
    }
    const std::string& source() const override { return path_; }
    double bytes_on_disk() const override { return bytes_; }
    double bytes_done() const override { return static_cast<double>(gzoffset(file_)); }

private:
    std::string path_;
    gzFile file_;
    double bytes_;
};

/// Bytes behind the unpacking of a gzip file; stops as soon as they exceed `most`.
Result<double> unpacked_size(const std::string& path, double most, const Context& context) {
    Result<std::unique_ptr<FileStream>> stream = open_file(path);
    if (!stream) {
        return tl::unexpected(stream.error());
    }
    std::string piece(1U << 20, '\0');
    double size = 0;
    while (size <= most) {
        poll(context);
        Result<std::size_t> got = (*stream)->read(piece);
        if (!got) {
            return tl::unexpected(got.error());
        }
        if (*got == 0) {
            break;
        }
        size += static_cast<double>(*got);
    }
    return size;
}

Result<void> check_is_text(const Text& text) {
    const std::string_view view = text.view();
    if (view.substr(0, 2) == "\xff\xfe" || view.substr(0, 2) == "\xfe\xff") {
        return refuse(ErrorCode::bad_syntax,
                      {text.source, 1, 1},
                      "the file starts with the mark of UTF-16",
                      "save it as UTF-8 or ASCII");
    }
    const std::size_t nul = view.find('\0');
    if (nul != std::string_view::npos) {
        return refuse(ErrorCode::bad_syntax,
                      {.source = text.source},
                      fmt::format("byte {} is 0: this is no text", nul),
                      "a text file, or the right ending for a binary one (.npy .npz .h5)");
    }
    return {};
}

/// Fills text.bytes; the file must still have the size that was seen before.
Result<void> fill(Text& text, const std::string& path, const Context& context) {
    Result<std::unique_ptr<FileStream>> stream = open_file(path);
    if (!stream) {
        return tl::unexpected(stream.error());
    }
    constexpr std::size_t piece = 1U << 24;
    std::size_t done = 0;
    while (done < text.size) {
        poll(context);
        const std::size_t wanted = std::min(piece, text.size - done);
        Result<std::size_t> got = (*stream)->read({text.bytes.get() + done, wanted});
        if (!got) {
            return tl::unexpected(got.error());
        }
        done += *got;
        if (*got < wanted) {
            break;
        }
    }
    char more = 0;
    Result<std::size_t> end = (*stream)->read({&more, 1});
    if (done < text.size || !end || *end != 0) {
        return refuse(
            ErrorCode::cannot_read, {.source = path}, "the file changed while it was being read");
    }
    return {};
}

}  // namespace

Result<std::unique_ptr<FileStream>> open_file(const std::string& path) {
    struct stat status {};
    if (stat(path.c_str(), &status) != 0) {
        return refuse(ErrorCode::cannot_read,
                      {.source = path},
                      fmt::format("cannot be read: {}", std::strerror(errno)));
    }
    if (!S_ISREG(status.st_mode)) {
        return refuse(ErrorCode::cannot_read,
                      {.source = path},
                      S_ISDIR(status.st_mode) ? "is a folder" : "is a pipe or a device",
                      "a regular file");
    }
    const gzFile file = gzopen(path.c_str(), "rb");
    if (file == nullptr) {
        return refuse(ErrorCode::cannot_read,
                      {.source = path},
                      fmt::format("cannot be read: {}", std::strerror(errno)));
    }
    static_cast<void>(gzbuffer(file, 1U << 18));
    return std::make_unique<GzipStream>(path, file, static_cast<double>(status.st_size));
}

Result<Text> read_text(const std::string& path, const Context& context) {
    Result<std::unique_ptr<FileStream>> stream = open_file(path);
    if (!stream) {
        return tl::unexpected(stream.error());
    }
    Text text{.source = path, .bytes = nullptr, .size = 0, .memory = MemoryShare(context)};
    std::optional<std::int64_t> known = (*stream)->size();
    stream->reset();
    double bytes = static_cast<double>(known.value_or(0));
    if (!known) {
        Result<double> unpacked = unpacked_size(path, text.memory.limit(), context);
        if (!unpacked) {
            return tl::unexpected(unpacked.error());
        }
        bytes = *unpacked;
    }
    Result<void> taken = text.memory.take(bytes + 1, path, "the text");
    if (!taken) {
        return tl::unexpected(taken.error());
    }
    text.size = static_cast<std::size_t>(bytes);
    text.bytes = std::make_unique_for_overwrite<char[]>(text.size + 1);
    text.bytes[text.size] = '\0';
    Result<void> read = fill(text, path, context);
    if (read) {
        read = check_is_text(text);
    }
    if (!read) {
        return tl::unexpected(read.error());
    }
    constexpr std::string_view mark = "\xef\xbb\xbf";
    if (text.view().substr(0, mark.size()) == mark) {
        text.size -= mark.size();
        std::memmove(text.bytes.get(), text.bytes.get() + mark.size(), text.size + 1);
    }
    return text;
}

}  // namespace chainmark
