#pragma once

#include <cstdlib>
#include <filesystem>
#include <fstream>
#include <memory>
#include <sstream>
#include <string>

#include <doctest/doctest.h>
#include <unistd.h>

#include "chainmark/base/context.hpp"
#include "chainmark/base/error.hpp"

namespace chainmark::test {

/// A fresh folder that goes away with its content.
struct Folder {
    std::filesystem::path path;
    Folder() {
        std::string name =
            (std::filesystem::temp_directory_path() / "chainmark_formats_XXXXXX").string();
        path = mkdtemp(name.data());
    }
    Folder(const Folder&) = delete;
    Folder& operator=(const Folder&) = delete;
    ~Folder() {
        std::error_code ignored;
        std::filesystem::permissions(path, std::filesystem::perms::owner_all, ignored);
        std::filesystem::remove_all(path, ignored);
    }
    std::string operator/(const std::string& name) const { return (path / name).string(); }
};

inline std::string put(const std::string& path, std::string_view content) {
    std::ofstream(path, std::ios::binary)
        .write(content.data(), static_cast<std::streamsize>(content.size()));
    return path;
}

inline std::string content(const std::string& path) {
    std::ostringstream text;
    text << std::ifstream(path, std::ios::binary).rdbuf();
    return text.str();
}

/// A context with a memory budget of its own.
inline Context with_memory(double bytes = 256.0 * 1024 * 1024) {
    Context context;
    context.memory = std::make_shared<MemoryBudget>(bytes);
    return context;
}

/// The files that make_files.py writes with NumPy, SciPy and h5py, made once for all tests.
inline const Folder& python_files() {
    static const Folder folder;
    static const int status = std::system(
        (std::string(CHAINMARK_PYTHON) + " " CHAINMARK_MAKE_FILES " " + folder.path.string())
            .c_str());
    REQUIRE(status == 0);
    return folder;
}

/// Checks that a result is an error whose text holds `part`.
template <class T>
void check_refused(const Result<T>& result, const std::string& part) {
    REQUIRE_FALSE(result.has_value());
    const std::string text = to_string(result.error());
    CHECK_MESSAGE(text.find(part) != std::string::npos, text, " lacks ", part);
}

}  // namespace chainmark::test
