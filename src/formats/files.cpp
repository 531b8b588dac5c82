#include "chainmark/formats/files.hpp"

#include <algorithm>
#include <cerrno>
#include <cstdio>
#include <cstring>
#include <filesystem>

#include <fcntl.h>
#include <fmt/format.h>
#include <sys/stat.h>
#include <unistd.h>

namespace chainmark {
namespace {

namespace fs = std::filesystem;

tl::unexpected<Error> refused(const std::string& path, const std::string& why) {
    return tl::unexpected(Error{ErrorCode::cannot_write,
                                {.source = path},
                                "cannot be written: " + why,
                                "name a file in a folder that exists and may be written"});
}

std::string last_system_error() {
    return std::strerror(errno);
}

bool write_all(int file, std::string_view content) {
    while (!content.empty()) {
        const ssize_t done = write(file, content.data(), content.size());
        if (done < 0 && errno != EINTR) {
            return false;
        }
        content.remove_prefix(static_cast<std::size_t>(std::max<ssize_t>(done, 0)));
    }
    return true;
}

/// For what cannot be replaced: devices, and files in folders that take no new ones.
Result<void> write_in_place(const std::string& path, std::string_view content) {
    constexpr mode_t usual = 0666;  // less what the umask takes away
    const int file = open(path.c_str(), O_WRONLY | O_CREAT | O_TRUNC | O_CLOEXEC, usual);
    if (file < 0) {
        return refused(path, last_system_error());
    }
    const bool written = write_all(file, content);
    const std::string why = written ? "" : last_system_error();
    if (close(file) != 0 && written) {
        return refused(path, last_system_error());
    }
    return written ? Result<void>{} : refused(path, why);
}

}  // namespace

Result<void> check_writable(const std::string& path) {
    std::error_code ignored;
    if (fs::is_directory(path, ignored)) {
        return refused(path, "it is a folder");
    }
    if (fs::exists(path, ignored)) {
        return access(path.c_str(), W_OK) == 0 ? Result<void>{}
                                               : refused(path, last_system_error());
    }
    const fs::path file = path;
    if (!file.has_filename()) {
        return refused(path, "it names no file");
    }
    const fs::path folder = file.has_parent_path() ? file.parent_path() : fs::path(".");
    if (access(folder.c_str(), W_OK | X_OK) != 0) {
        return refused(path, folder.string() + ": " + last_system_error());
    }
    if (!fs::is_directory(folder, ignored)) {
        return refused(path, folder.string() + " is no folder");
    }
    const long longest = pathconf(folder.c_str(), _PC_NAME_MAX);
    if (longest > 0 && file.filename().native().size() > static_cast<std::size_t>(longest)) {
        return refused(path, std::strerror(ENAMETOOLONG));
    }
    return {};
}

Result<void> write_file(const std::string& path, std::string_view content) {
    std::error_code ignored;
    const fs::file_status status = fs::status(path, ignored);
    if (fs::exists(status) && access(path.c_str(), W_OK) != 0) {
        return refused(path, last_system_error());
    }
    const bool in_place = (fs::exists(status) && !fs::is_regular_file(status)) ||
                          (!fs::exists(status) && fs::is_symlink(path, ignored));
    if (in_place) {
        return write_in_place(path, content);
    }
    const fs::path target = fs::exists(status) ? fs::canonical(path, ignored) : fs::path(path);
    const std::string beside = fmt::format("{}.{}.tmp", target.native(), getpid());
    constexpr mode_t usual = 0666;  // less what the umask takes away
    const int file = open(beside.c_str(), O_WRONLY | O_CREAT | O_EXCL | O_CLOEXEC, usual);
    if (file < 0) {
        return write_in_place(path, content);  // a folder that takes no new files
    }
    bool done = write_all(file, content) && fsync(file) == 0;
    if (done && fs::exists(status)) {
        done = fchmod(file, static_cast<mode_t>(status.permissions())) == 0;
    }
    std::string why = done ? "" : last_system_error();
    close(file);
    if (done && std::rename(beside.c_str(), target.c_str()) != 0) {
        why = last_system_error();
        done = false;
    }
    if (!done) {
        unlink(beside.c_str());
        return refused(path, why);
    }
    return {};
}

}  // namespace chainmark
