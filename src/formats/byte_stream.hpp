#pragma once

#include <cstdint>
#include <memory>
#include <optional>
#include <span>
#include <string>

#include "chainmark/base/error.hpp"
#include "chainmark/formats/memory_share.hpp"

namespace chainmark {

/// Bytes read from front to back.
class ByteStream {
public:
    ByteStream() = default;
    ByteStream(const ByteStream&) = delete;
    ByteStream& operator=(const ByteStream&) = delete;
    virtual ~ByteStream() = default;

    /// Fills `to`; fewer bytes only at the end, and 0 behind it. Errors have the file's name.
    virtual Result<std::size_t> read(std::span<char> to) = 0;

    /// All bytes from front to end, where that is known before reading.
    virtual std::optional<std::int64_t> size() const = 0;

    /// File name, for messages: "run.npz:E.npy" inside an archive.
    virtual const std::string& source() const = 0;
};

/// A file that is read as it is, or unpacked while it is read where it is a gzip file.
class FileStream : public ByteStream {
public:
    /// The size of the file itself, packed or not, and how much of it has been read: for progress.
    virtual double bytes_on_disk() const = 0;
    virtual double bytes_done() const = 0;
};

/// Opens a regular file. Fails with `cannot_read`: also for folders, pipes and devices, which may
/// never end.
Result<std::unique_ptr<FileStream>> open_file(const std::string& path);

/// A whole text in memory.
struct Text {
    std::string source;
    std::unique_ptr<char[]> bytes;
    std::size_t size = 0;
    MemoryShare memory;

    std::string_view view() const { return {bytes.get(), size}; }
};

/// The whole of a plain or gzip file, without a UTF-8 byte order mark. Fails with `cannot_read`,
/// `over_memory`, and with `bad_syntax` for what is no text: NUL bytes, UTF-16.
Result<Text> read_text(const std::string& path, const Context& context);

}  // namespace chainmark
