#pragma once

#include <memory>
#include <vector>

#include "chainmark/formats/byte_stream.hpp"

namespace chainmark {

/// A zip archive, stored or deflated, with 64-bit sizes. Members are read as streams; nothing is
/// ever unpacked to a file. Sizes are those of the central directory, and a member that unpacks to
/// more or less, or to another checksum, is an error.
class ZipArchive {
public:
    struct Member {
        std::string name;
        std::int64_t size = 0;  ///< unpacked
    };

    /// Fails with `cannot_read`, `bad_syntax`: no zip file, a name twice, encryption, sizes that
    /// cannot be true.
    static Result<ZipArchive> open(const std::string& path);

    const std::string& source() const;
    const std::vector<Member>& members() const;

    /// Number of the member of this name; members().size() where there is none.
    std::size_t find(const std::string& name) const;

    /// A stream over one member; several can be read at the same time.
    Result<std::unique_ptr<ByteStream>> stream(std::size_t member) const;

private:
    struct Open;
    explicit ZipArchive(std::shared_ptr<Open> open) : open_(std::move(open)) {}
    std::shared_ptr<Open> open_;  // streams keep it open
};

}  // namespace chainmark
