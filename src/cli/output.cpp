#include "chainmark/cli/output.hpp"

#include <cerrno>
#include <cstdio>
#include <cstdlib>
#include <cstring>
#include <string_view>

#include <fmt/format.h>
#include <unistd.h>

#include "chainmark/cli/exit_codes.hpp"
#include "chainmark/formats/files.hpp"

namespace chainmark::cli {
namespace {

std::string_view environment(const char* name) {
    const char* value = std::getenv(name);
    return value == nullptr ? "" : value;
}

}  // namespace

void print_errors(const Errors& errors) {
    for (const Error& error : errors) {
        fmt::print(stderr, "{}\n", to_string(error));
    }
}

Result<void> write_output(const std::string& path, const std::string& text) {
    if (path != standard_output) {
        return write_file(path, text);
    }
    const bool written = std::fwrite(text.data(), 1, text.size(), stdout) == text.size();
    if (!written || std::fflush(stdout) != 0) {
        return tl::unexpected(Error{ErrorCode::cannot_write,
                                    {.source = "standard output"},
                                    std::string("cannot be written: ") + std::strerror(errno),
                                    ""});
    }
    return {};
}

bool stdout_shows_colour() {
    const std::string_view terminal = environment("TERM");
    return isatty(STDOUT_FILENO) == 1 && environment("NO_COLOR").empty() && !terminal.empty() &&
           terminal != "dumb";
}

int print_output(const std::string& path, const std::string& text) {
    const Result<void> written = write_output(path, text);
    if (!written) {
        print_errors({written.error()});
    }
    return written ? exit_agree : exit_wrong_input;
}

}  // namespace chainmark::cli
