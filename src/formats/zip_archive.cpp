#include "chainmark/formats/zip_archive.hpp"

#include <algorithm>
#include <unordered_map>

#include <fmt/format.h>
#include <zip.h>

#include "chainmark/formats/shown.hpp"

namespace chainmark {

struct ZipArchive::Open {
    std::string path;
    zip_t* archive = nullptr;
    std::vector<Member> members;
    std::unordered_map<std::string, std::size_t> index;

    Open() = default;
    Open(const Open&) = delete;
    Open& operator=(const Open&) = delete;
    ~Open() {
        if (archive != nullptr) {
            zip_discard(archive);
        }
    }
};

namespace {

constexpr zip_int64_t most_members = 100000;
// Deflate packs at most 258 bytes into 2 bits.
constexpr double largest_ratio = 1032;

std::string error_text(int code) {
    zip_error_t error;
    zip_error_init_with_code(&error, code);
    std::string text = zip_error_strerror(&error);
    zip_error_fini(&error);
    return text;
}

Result<ZipArchive::Member> member_at(zip_t* archive, const std::string& path, zip_uint64_t i) {
    zip_stat_t status;
    zip_stat_init(&status);
    constexpr zip_uint64_t needed = ZIP_STAT_NAME | ZIP_STAT_SIZE | ZIP_STAT_COMP_SIZE |
                                    ZIP_STAT_COMP_METHOD | ZIP_STAT_ENCRYPTION_METHOD;
    if (zip_stat_index(archive, i, 0, &status) != 0 || (status.valid & needed) != needed) {
        return refuse(ErrorCode::bad_syntax,
                      {.source = path},
                      fmt::format("member {} of the archive has no valid entry", i + 1),
                      "a complete file");
    }
    const bool known = status.comp_method == ZIP_CM_STORE || status.comp_method == ZIP_CM_DEFLATE;
    if (status.encryption_method != ZIP_EM_NONE || !known) {
        return refuse(ErrorCode::bad_syntax,
                      {.source = path},
                      fmt::format("member {} is {}",
                                  shown(status.name),
                                  known ? "encrypted" : "packed by another method than deflate"),
                      "an archive from np.savez or np.savez_compressed");
    }
    const double possible = status.comp_method == ZIP_CM_STORE
                                ? static_cast<double>(status.comp_size)
                                : largest_ratio * (static_cast<double>(status.comp_size) + 16);
    if (static_cast<double>(status.size) > possible ||
        (status.comp_method == ZIP_CM_STORE && status.size != status.comp_size)) {
        return refuse(ErrorCode::bad_syntax,
                      {.source = path},
                      fmt::format("member {} claims to unpack from {} bytes to {}",
                                  shown(status.name),
                                  status.comp_size,
                                  status.size),
                      "a complete file with true sizes");
    }
    return ZipArchive::Member{status.name, static_cast<std::int64_t>(status.size)};
}

/// A member while it is unpacked.
class MemberStream : public ByteStream {
public:
    MemberStream(std::shared_ptr<const void> keep,
                 zip_file_t* file,
                 std::string source,
                 std::int64_t size)
        : keep_(std::move(keep)), file_(file), source_(std::move(source)), size_(size) {}
    MemberStream(const MemberStream&) = delete;
    MemberStream& operator=(const MemberStream&) = delete;
    ~MemberStream() override { static_cast<void>(zip_fclose(file_)); }

    Result<std::size_t> read(std::span<char> to) override {
        const auto left = static_cast<std::size_t>(size_ - done_);
        const std::size_t wanted = std::min(to.size(), left);
        std::size_t got = 0;
        while (got < wanted) {
            const zip_int64_t now = zip_fread(file_, to.data() + got, wanted - got);
            if (now <= 0) {
                return wrong(now);
            }
            got += static_cast<std::size_t>(now);
        }
        done_ += static_cast<std::int64_t>(got);
        if (done_ == size_ && !checked_) {
            checked_ = true;
            char more = 0;  // the end is where the library compares the checksum
            const zip_int64_t end = zip_fread(file_, &more, 1);
            if (end != 0) {
                return end > 0 ? wrong(0) : wrong(end);
            }
        }
        return got;
    }

    std::optional<std::int64_t> size() const override { return size_; }
    const std::string& source() const override { return source_; }

private:
    tl::unexpected<Error> wrong(zip_int64_t result) const {
        return refuse(ErrorCode::bad_syntax,
                      {.source = source_},
                      result < 0 ? fmt::format("cannot be unpacked: {}", zip_file_strerror(file_))
                                 : "does not unpack to the size that the archive claims",
                      "a complete file");
    }

    std::shared_ptr<const void> keep_;
    zip_file_t* file_;
    std::string source_;
    std::int64_t size_;
    std::int64_t done_ = 0;
    bool checked_ = false;
};

}  // namespace

Result<ZipArchive> ZipArchive::open(const std::string& path) {
    if (const Result<std::unique_ptr<FileStream>> regular = open_file(path); !regular) {
        return tl::unexpected(regular.error());
    }
    auto open = std::make_shared<Open>();
    open->path = path;
    int code = 0;
    open->archive = zip_open(path.c_str(), ZIP_RDONLY, &code);
    if (open->archive == nullptr) {
        return refuse(ErrorCode::bad_syntax,
                      {.source = path},
                      "is no zip archive that can be read: " + error_text(code),
                      "a complete file from np.savez");
    }
    const zip_int64_t count = zip_get_num_entries(open->archive, 0);
    if (count < 0 || count > most_members) {
        return refuse(ErrorCode::bad_syntax,
                      {.source = path},
                      fmt::format("the archive has {} members", count),
                      fmt::format("at most {}", most_members));
    }
    for (zip_int64_t i = 0; i < count; ++i) {
        Result<Member> member = member_at(open->archive, path, static_cast<zip_uint64_t>(i));
        if (!member) {
            return tl::unexpected(member.error());
        }
        if (!open->index.emplace(member->name, open->members.size()).second) {
            return refuse(ErrorCode::bad_syntax,
                          {.source = path},
                          fmt::format("the archive has two members {}", shown(member->name)),
                          "each name once");
        }
        open->members.push_back(std::move(*member));
    }
    return ZipArchive(std::move(open));
}

const std::string& ZipArchive::source() const {
    return open_->path;
}

const std::vector<ZipArchive::Member>& ZipArchive::members() const {
    return open_->members;
}

std::size_t ZipArchive::find(const std::string& name) const {
    const auto found = open_->index.find(name);
    return found == open_->index.end() ? members().size() : found->second;
}

Result<std::unique_ptr<ByteStream>> ZipArchive::stream(std::size_t member) const {
    const Member& wanted = open_->members.at(member);
    const std::string source = open_->path + ":" + wanted.name;
    zip_file_t* file = zip_fopen_index(open_->archive, member, 0);
    if (file == nullptr) {
        return refuse(ErrorCode::bad_syntax,
                      {.source = source},
                      fmt::format("cannot be unpacked: {}", zip_strerror(open_->archive)),
                      "a complete file");
    }
    return std::make_unique<MemberStream>(open_, file, source, wanted.size);
}

}  // namespace chainmark
