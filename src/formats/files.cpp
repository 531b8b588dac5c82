#include "chainmark/formats/files.hpp"

#include <cerrno>
#include <cstdio>
#include <cstring>
#include <filesystem>

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
    std::FILE* file = std::fopen(path.c_str(), "wb");
    if (file == nullptr) {
        return refused(path, last_system_error());
    }
    const bool written = std::fwrite(content.data(), 1, content.size(), file) == content.size();
    const std::string why = written ? "" : last_system_error();
    if (std::fclose(file) != 0) {
        return refused(path, last_system_error());
    }
    return written ? Result<void>{} : refused(path, why);
}

}  // namespace chainmark
