#include <filesystem>
#include <fstream>

#include <sys/stat.h>
#include <unistd.h>

#include "casefile/case_text.hpp"

using namespace chainmark;
using namespace chainmark::test;

namespace {

constexpr std::size_t longest_file = 10 * 1024 * 1024;

/// A folder that is removed at the end.
class Folder {
public:
    Folder() {
        std::string pattern = (std::filesystem::temp_directory_path() / "casefile-XXXXXX").string();
        REQUIRE(mkdtemp(pattern.data()) != nullptr);
        path_ = pattern;
    }
    Folder(const Folder&) = delete;
    Folder& operator=(const Folder&) = delete;
    ~Folder() { std::filesystem::remove_all(path_); }

    std::string write(const std::string& name, const std::string& text) const {
        const std::string path = (path_ / name).string();
        std::ofstream(path, std::ios::binary) << text;
        return path;
    }
    std::string operator/(const std::string& name) const { return (path_ / name).string(); }
    std::string path() const { return path_.string(); }

private:
    std::filesystem::path path_;
};

void check_unreadable(const std::string& path, const std::string& words) {
    const Checked<Case> result = read_case(path, {});
    REQUIRE_FALSE(result.has_value());
    REQUIRE(result.error().size() == 1);
    INFO(listing(result.error()));
    CHECK(result.error()[0].code == ErrorCode::cannot_read);
    CHECK(result.error()[0].where.source == path);
    CHECK(result.error()[0].where.line == 0);
    CHECK(result.error()[0].found.find(words) != std::string::npos);
}

}  // namespace

TEST_CASE("a file is read and named without folder and ending") {
    const Folder folder;
    const Checked<Case> c = read_case(folder.write("xx-ring.v2.toml", small_case), {});
    REQUIRE(c.has_value());
    CHECK(c->name == "xx-ring.v2");
    CHECK(c->source == folder / "xx-ring.v2.toml");
    CHECK(read_case(folder.write("other.txt", small_case), {})->name == "other.txt");
}

TEST_CASE("files that cannot be read say why") {
    const Folder folder;
    check_unreadable(folder / "none.toml", "no such file");
    check_unreadable(folder.path(), "folder");
    check_unreadable(folder.write("zeros.toml", std::string("a\0b", 3)), "not text");
    check_unreadable(folder.write("long.toml", std::string(longest_file + 1, '\n')), "too long");
    const std::string pipe = folder / "pipe.toml";
    REQUIRE(mkfifo(pipe.c_str(), 0600) == 0);
    check_unreadable(pipe, "no ordinary file");
    const std::string secret = folder.write("secret.toml", small_case);
    std::filesystem::permissions(secret, std::filesystem::perms::none);
    if (geteuid() == 0) {
        MESSAGE("permissions do not bind root: not tested");
    } else {
        check_unreadable(secret, "permission");
    }
    const std::string loop = folder / "loop.toml";
    std::filesystem::create_symlink(loop, loop);
    check_unreadable(loop, "cannot be read");
}

TEST_CASE("text that is too long or binary is refused without a file, too") {
    check_only_error(std::string("\0", 1), {ErrorCode::cannot_read, "c.toml", {"not text"}});
    check_only_error(std::string(longest_file + 1, ' '),
                     {ErrorCode::cannot_read, "c.toml", {"too long", "10 MiB"}});
}

TEST_CASE("an empty file says what a case needs") {
    for (const char* text : {"", "  \n\t\n", "# only a remark\n", "\xEF\xBB\xBF"}) {
        check_only_error(text,
                         {ErrorCode::missing_key, "c.toml", {"empty", "format = 1", "sites"}});
    }
}

TEST_CASE("what is no TOML is reported with its place") {
    check_only_error("format = 1\n[system\n",
                     {ErrorCode::bad_syntax, "c.toml:2:8", {"not TOML", "expected ']'"}});
    check_only_error(changed("J = 1.0", "J = 1.0\nJ = 2.0"),
                     {ErrorCode::bad_syntax, "c.toml:7:5", {"cannot redefine", "'J'"}});
    check_only_error("title = \"\xff\"", {ErrorCode::bad_syntax, "c.toml:1:9", {"utf-8"}});
    check_only_error("a = " + std::string(300, '['),
                     {ErrorCode::bad_syntax, "c.toml:1:261", {"nested"}});
}

TEST_CASE("dotted keys of any depth are refused before they are followed") {
    std::string deep = "a";
    for (int i = 0; i < 300000; ++i) {
        deep += ".a";
    }
    const Expected expected = {ErrorCode::bad_syntax, "c.toml:2:1", {"too many parts"}};
    check_only_error("# dots ............................\n" + deep + " = 1", expected);
    check_only_error("x = '''....................'''\n[" + deep + "]", expected);
    check_only_error("x = \"\\\"..................\"\nx = {" + deep + " = 1}", expected);
    const Case c = case_of("title = \"dots ............................\"\n" + small_case);
    CHECK(c.title == "dots ............................");
}

TEST_CASE("the format is required and only format 1 is read") {
    check_only_error(changed("format = 1\n", ""),
                     {ErrorCode::missing_key, "c.toml", {"'format'", "reads format = 1"}});
    check_only_error("format = 2\n[new]\n",
                     {ErrorCode::bad_value, "c.toml:1:10", {"the number 2", "reads format = 1"}});
    check_only_error(
        "format = \"1\"\n",
        {ErrorCode::wrong_type, "c.toml:1:10", {"the text \"1\"", "reads format = 1"}});
}

TEST_CASE("other line ends and a byte order mark are fine") {
    std::string text = "\xEF\xBB\xBF";
    for (const char c : small_case) {
        text += c == '\n' ? "\r\n" : std::string(1, c);
    }
    CHECK(case_of(text).axis("sites").values.size() == 2);
}
