#pragma once

#include <cstring>
#include <limits>
#include <string_view>

#include "chainmark/formats/byte_stream.hpp"

namespace chainmark {

/// Lines of a stream, one after the other, without holding it.
class LineReader {
public:
    explicit LineReader(std::unique_ptr<FileStream> stream)
        : stream_(std::move(stream)), buffer_(buffer_size, '\0') {}

    /// The next line without its end, valid until the next call; false at the end of the file.
    /// Fails with `bad_syntax` for a line of more than 64 KiB, which no number needs.
    Result<bool> next(std::string_view& line) {
        while (true) {
            const char* begin = buffer_.data() + at_;
            const void* end = std::memchr(begin, '\n', end_ - at_);
            if (end != nullptr) {
                const auto size = static_cast<std::size_t>(static_cast<const char*>(end) - begin);
                line = {begin, size};
                at_ += size + 1;
                count();
                return true;
            }
            Result<bool> more = refill();
            if (!more) {
                return more;
            }
            if (!*more) {
                line = {buffer_.data() + at_, end_ - at_};
                at_ = end_;
                count();
                return !line.empty();
            }
        }
    }

    /// Of the line that was given last, from 1.
    int line() const { return line_; }
    const FileStream& stream() const { return *stream_; }

private:
    static constexpr std::size_t buffer_size = 1U << 20;
    static constexpr std::size_t longest_line = 1U << 16;

    void count() { line_ += line_ < std::numeric_limits<int>::max() ? 1 : 0; }

    /// Moves the rest to the front and reads behind it; false at the end of the file.
    Result<bool> refill() {
        if (end_ - at_ > longest_line) {
            return tl::unexpected(Error{ErrorCode::bad_syntax,
                                        {stream_->source(), line_ + 1, 1},
                                        "a line of more than 64 KiB",
                                        "one entry a line"});
        }
        std::memmove(buffer_.data(), buffer_.data() + at_, end_ - at_);
        end_ -= at_;
        at_ = 0;
        Result<std::size_t> got = stream_->read({buffer_.data() + end_, buffer_.size() - end_});
        if (!got) {
            return tl::unexpected(got.error());
        }
        end_ += *got;
        return *got > 0;
    }

    std::unique_ptr<FileStream> stream_;
    std::string buffer_;
    std::size_t at_ = 0;
    std::size_t end_ = 0;
    int line_ = 0;
};

}  // namespace chainmark
