#include <filesystem>
#include <fstream>
#include <sstream>

#include <doctest/doctest.h>
#include <unistd.h>

#include "chainmark/formats/files.hpp"

using namespace chainmark;
namespace fs = std::filesystem;

namespace {

/// A fresh folder that goes away with its content.
struct Folder {
    fs::path path;
    Folder() {
        std::string name = (fs::temp_directory_path() / "chainmark_files_XXXXXX").string();
        path = mkdtemp(name.data());
    }
    ~Folder() {
        std::error_code ignored;
        fs::permissions(path, fs::perms::owner_all, ignored);
        fs::remove_all(path, ignored);
    }
    std::string operator/(const std::string& name) const { return (path / name).string(); }
};

std::string content(const std::string& path) {
    std::ostringstream text;
    text << std::ifstream(path).rdbuf();
    return text.str();
}

}  // namespace

TEST_CASE("checking leaves nothing behind and changes nothing") {
    const Folder folder;
    CHECK(check_writable(folder / "new.json").has_value());
    CHECK_FALSE(fs::exists(folder / "new.json"));
    REQUIRE(write_file(folder / "old.json", "kept").has_value());
    CHECK(check_writable(folder / "old.json").has_value());
    CHECK(content(folder / "old.json") == "kept");
}

TEST_CASE("writing replaces") {
    const Folder folder;
    REQUIRE(write_file(folder / "a", "a long first content").has_value());
    REQUIRE(write_file(folder / "a", "short").has_value());
    CHECK(content(folder / "a") == "short");
}

TEST_CASE("what cannot be written is refused with the path and the reason") {
    const Folder folder;
    for (const std::string& path : {std::string(),
                                    folder.path.string(),
                                    folder / "none/x.json",
                                    folder / "",
                                    folder / std::string(300, 'x')}) {
        const Result<void> checked = check_writable(path);
        REQUIRE_FALSE(checked.has_value());
        CHECK(checked.error().code == ErrorCode::cannot_write);
        CHECK(checked.error().where.source == path);
        CHECK(write_file(path, "x").has_value() == false);
    }
    REQUIRE(write_file(folder / "file", "x").has_value());
    CHECK_FALSE(check_writable(folder / "file/x.json").has_value());
}

TEST_CASE("a folder without permission is refused" * doctest::skip(geteuid() == 0)) {
    const Folder folder;
    fs::permissions(folder.path, fs::perms::owner_read | fs::perms::owner_exec);
    CHECK_FALSE(check_writable(folder / "x.json").has_value());
}

TEST_CASE("a full disk is noticed" * doctest::skip(!fs::exists("/dev/full"))) {
    const Result<void> written = write_file("/dev/full", "x");
    REQUIRE_FALSE(written.has_value());
    CHECK(to_string(written.error()).find("No space left") != std::string::npos);
}
