#pragma once

#include <functional>

#include "chainmark/formats/byte_stream.hpp"

namespace chainmark {

/// Writes bytes to whoever reads the stream; false once nobody does.
using ByteSink = std::function<bool(std::span<const char>)>;

/// Runs `write` in a child process and gives what it writes as a stream. For libraries that may
/// crash, hang or take any amount of memory on a broken file: here that ends as an error of
/// `read`, with `when_broken` as its text. The child may allocate up to `memory` bytes beyond what
/// the process has now, is ended when it is silent for a minute, and with the stream. It must not
/// use threads.
Result<std::unique_ptr<ByteStream>> start_child(const std::string& source,
                                                const std::string& when_broken,
                                                double memory,
                                                const Context& context,
                                                const std::function<void(const ByteSink&)>& write);

}  // namespace chainmark
