#include "chainmark/formats/hash.hpp"
#include "formats/support.hpp"

using namespace chainmark;
using namespace chainmark::test;

// exact: the examples of FIPS 180-4's companion "Secure Hashing" pages for "abc" and for a million
// times "a"; of the empty message, as sha256sum of coreutils prints it for /dev/null's content.
TEST_CASE("SHA-256 of files") {
    const Folder folder;
    const auto hash = [&](const std::string& text) {
        return sha256_of_file(put(folder / "x", text), with_memory()).value();
    };
    CHECK(hash("abc") == "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad");
    CHECK(hash("") == "e3b0c44298fc1c149afbf4c8996fb92427ae41e4649b934ca495991b7852b855");
    CHECK(hash(std::string(1000000, 'a')) ==
          "cdc76e5c9914fb9281a1c7e284d73e67f1809a48a497200e046d39ccc7112cd0");
    check_refused(sha256_of_file(folder / "none", with_memory()), "cannot be read");
    check_refused(sha256_of_file("/dev/zero", with_memory()), "a device");
}

TEST_CASE("a gzip file's hash is that of the packed bytes") {
    // the two bytes that a gzip file starts with, and no valid rest: nothing is unpacked
    const Folder folder;
    const std::string path = put(folder / "x.gz", "\x1f\x8b and nothing");
    const std::string sum = folder / "sum";
    REQUIRE(std::system(("sha256sum " + path + " > " + sum).c_str()) == 0);
    CHECK(sha256_of_file(path, with_memory()).value() == content(sum).substr(0, 64));
}
