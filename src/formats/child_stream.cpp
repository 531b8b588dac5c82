#include "chainmark/formats/child_stream.hpp"

#include <algorithm>
#include <array>
#include <cerrno>
#include <csignal>
#include <cstring>
#include <fstream>

#include <fmt/format.h>
#include <poll.h>
#include <sys/resource.h>
#include <sys/wait.h>
#include <unistd.h>

#include "chainmark/formats/shown.hpp"

namespace chainmark {
namespace {

constexpr int longest_silence = 60'000;  // milliseconds
constexpr int between_polls = 200;       // milliseconds between looks at the stop token

class ChildStream : public ByteStream {
public:
    ChildStream(
        pid_t child, int pipe, std::string source, std::string broken, const Context& context)
        : child_(child),
          pipe_(pipe),
          source_(std::move(source)),
          broken_(std::move(broken)),
          stop_(context) {}
    ChildStream(const ChildStream&) = delete;
    ChildStream& operator=(const ChildStream&) = delete;
    ~ChildStream() override {
        close(pipe_);
        if (child_ > 0) {
            kill(child_, SIGKILL);
            wait_for_child();
        }
    }

    Result<std::size_t> read(std::span<char> to) override {
        std::size_t done = 0;
        int silence = 0;
        while (done < to.size()) {
            chainmark::poll(stop_);
            pollfd waiting{pipe_, POLLIN, 0};
            const int ready = ::poll(&waiting, 1, between_polls);
            if (ready == 0 || (ready < 0 && errno == EINTR)) {
                silence += between_polls;
                if (silence < longest_silence) {
                    continue;
                }
                return broken("does not end");
            }
            const ssize_t got = ::read(pipe_, to.data() + done, to.size() - done);
            if (got < 0 && errno == EINTR) {
                continue;
            }
            if (got <= 0) {
                return ended(done);
            }
            silence = 0;
            done += static_cast<std::size_t>(got);
        }
        return done;
    }

    std::optional<std::int64_t> size() const override { return std::nullopt; }
    const std::string& source() const override { return source_; }

private:
    int wait_for_child() {
        int status = 0;
        while (waitpid(child_, &status, 0) < 0 && errno == EINTR) {
        }
        child_ = 0;
        return status;
    }

    /// The child has closed its end: of its own will?
    Result<std::size_t> ended(std::size_t done) {
        const int status = child_ > 0 ? wait_for_child() : 0;
        if (WIFEXITED(status) && WEXITSTATUS(status) == 0) {
            return done;
        }
        return broken(WIFSIGNALED(status) ? strsignal(WTERMSIG(status)) : "gave up");
    }

    tl::unexpected<Error> broken(const std::string& how) const {
        return refuse(ErrorCode::bad_syntax,
                      {.source = source_},
                      fmt::format("{} ({})", broken_, how),
                      "a complete file; the memory budget may be too small for it, too");
    }

    pid_t child_;
    int pipe_;
    std::string source_;
    std::string broken_;
    Context stop_;
};

/// Bytes of address space that this process has.
double address_space() {
    std::ifstream file("/proc/self/statm");
    double pages = 0;
    file >> pages;
    return pages * static_cast<double>(sysconf(_SC_PAGESIZE));
}

void limit_memory(double bytes) {
    constexpr double beyond_any = 1e17;
    const double limit = address_space() + bytes;
    if (limit < beyond_any) {
        const auto size = static_cast<rlim_t>(limit);
        const rlimit both{size, size};
        setrlimit(RLIMIT_AS, &both);
    }
    const rlimit no_core{0, 0};
    setrlimit(RLIMIT_CORE, &no_core);
}

bool write_all(int pipe, std::span<const char> bytes) {
    while (!bytes.empty()) {
        const ssize_t done = ::write(pipe, bytes.data(), bytes.size());
        if (done < 0 && errno != EINTR) {
            return false;
        }
        bytes = bytes.subspan(static_cast<std::size_t>(std::max<ssize_t>(done, 0)));
    }
    return true;
}

[[noreturn]] void be_the_child(int pipe,
                               double memory,
                               const std::function<void(const ByteSink&)>& write) {
    constexpr int failed = 1;
    for (const int signal : {SIGINT, SIGTERM, SIGSEGV, SIGBUS, SIGABRT, SIGFPE, SIGPIPE}) {
        std::signal(signal, SIG_DFL);
    }
    limit_memory(memory);
    try {
        write([pipe](std::span<const char> bytes) { return write_all(pipe, bytes); });
    } catch (...) {
        _exit(failed);
    }
    _exit(0);  // no destructors, no buffers: they are the parent's
}

}  // namespace

Result<std::unique_ptr<ByteStream>> start_child(const std::string& source,
                                                const std::string& when_broken,
                                                double memory,
                                                const Context& context,
                                                const std::function<void(const ByteSink&)>& write) {
    std::array<int, 2> ends{};
    const pid_t child = pipe(ends.data()) == 0 ? fork() : -1;
    if (child < 0) {
        return refuse(ErrorCode::cannot_read,
                      {.source = source},
                      fmt::format("no process to read it with: {}", std::strerror(errno)));
    }
    if (child == 0) {
        close(ends[0]);
        be_the_child(ends[1], memory, write);
    }
    close(ends[1]);
    return std::make_unique<ChildStream>(child, ends[0], source, when_broken, context);
}

}  // namespace chainmark
