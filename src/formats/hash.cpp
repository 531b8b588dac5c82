#include "chainmark/formats/hash.hpp"

#include <array>
#include <cerrno>
#include <cstdio>
#include <cstring>
#include <memory>
#include <stdexcept>
#include <vector>

#include <fmt/format.h>
#include <openssl/evp.h>

#include "chainmark/formats/byte_stream.hpp"
#include "chainmark/formats/shown.hpp"

namespace chainmark {
namespace {

struct CloseFile {
    void operator()(std::FILE* file) const { static_cast<void>(std::fclose(file)); }
};

void require(bool done) {
    if (!done) {
        throw std::runtime_error("the cryptographic library does not offer SHA-256");
    }
}

}  // namespace

Result<std::string> sha256_of_file(const std::string& path, const Context& context) {
    // Not through a ByteStream, which would unpack a gzip file.
    if (const Result<std::unique_ptr<FileStream>> regular = open_file(path); !regular) {
        return tl::unexpected(regular.error());
    }
    const std::unique_ptr<std::FILE, CloseFile> file(std::fopen(path.c_str(), "rb"));
    const auto cannot = [&]() {
        return refuse(ErrorCode::cannot_read,
                      {.source = path},
                      fmt::format("cannot be read: {}", std::strerror(errno)));
    };
    if (file == nullptr) {
        return cannot();
    }
    const std::unique_ptr<EVP_MD_CTX, void (*)(EVP_MD_CTX*)> digest(EVP_MD_CTX_new(),
                                                                    EVP_MD_CTX_free);
    require(digest != nullptr && EVP_DigestInit_ex(digest.get(), EVP_sha256(), nullptr) == 1);
    std::vector<char> piece(1U << 20);
    std::size_t got = 0;
    while ((got = std::fread(piece.data(), 1, piece.size(), file.get())) > 0) {
        poll(context);
        require(EVP_DigestUpdate(digest.get(), piece.data(), got) == 1);
    }
    if (std::ferror(file.get()) != 0) {
        return cannot();
    }
    std::array<unsigned char, EVP_MAX_MD_SIZE> sum{};
    unsigned size = 0;
    require(EVP_DigestFinal_ex(digest.get(), sum.data(), &size) == 1);
    std::string text;
    for (unsigned i = 0; i < size; ++i) {
        text += fmt::format("{:02x}", sum.at(i));
    }
    return text;
}

}  // namespace chainmark
