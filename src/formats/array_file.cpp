#include "chainmark/formats/array_file.hpp"

#include <algorithm>
#include <array>
#include <optional>

#include <fmt/format.h>

#include "chainmark/base/words.hpp"
#include "chainmark/formats/npy.hpp"
#include "chainmark/formats/shown.hpp"
#include "chainmark/formats/zip_archive.hpp"

namespace chainmark {
namespace {

constexpr std::string_view npy_end = ".npy";

tl::unexpected<Error> not_an_array_file(const std::string& path) {
    if (const Result<std::unique_ptr<FileStream>> file = open_file(path); !file) {
        return tl::unexpected(file.error());
    }
    return refuse(ErrorCode::bad_syntax,
                  {.source = path},
                  "the first bytes are those of no array file",
                  "NPY, NPZ or HDF5");
}

ArrayInfo info_of(std::string name, const NpyHeader& header) {
    return {std::move(name), header.descr, header.shape, header.kind != 'S'};
}

bool is_array_name(std::string_view name) {
    return name.size() > npy_end.size() && name.substr(name.size() - npy_end.size()) == npy_end;
}

/// An element type that is no number is something to list, not a broken file.
Result<ArrayInfo> member_info(ByteStream& stream, const std::string& name) {
    const Result<NpyHeader> header = read_npy_header(stream);
    if (header) {
        return info_of(name, *header);
    }
    if (header.error().code == ErrorCode::wrong_type) {
        return ArrayInfo{name, header.error().found, {}, false};
    }
    return tl::unexpected(header.error());
}

Result<std::vector<ArrayInfo>> list_npz(const std::string& path) {
    const Result<ZipArchive> archive = ZipArchive::open(path);
    if (!archive) {
        return tl::unexpected(archive.error());
    }
    std::vector<ArrayInfo> result;
    for (std::size_t i = 0; i < archive->members().size(); ++i) {
        const std::string& file = archive->members()[i].name;
        if (!is_array_name(file)) {
            continue;
        }
        const Result<std::unique_ptr<ByteStream>> stream = archive->stream(i);
        if (!stream) {
            return tl::unexpected(stream.error());
        }
        Result<ArrayInfo> info =
            member_info(**stream, file.substr(0, file.size() - npy_end.size()));
        if (!info) {
            return tl::unexpected(info.error());
        }
        result.push_back(std::move(*info));
    }
    std::sort(result.begin(), result.end(), [](const ArrayInfo& a, const ArrayInfo& b) {
        return a.name < b.name;
    });
    return result;
}

Result<std::vector<ArrayInfo>> list_npy(const std::string& path) {
    const Result<std::unique_ptr<FileStream>> stream = open_file(path);
    if (!stream) {
        return tl::unexpected(stream.error());
    }
    Result<ArrayInfo> info = member_info(**stream, "");
    if (!info) {
        return tl::unexpected(info.error());
    }
    return std::vector<ArrayInfo>{std::move(*info)};
}

Result<Array> read_member(const ZipArchive& archive,
                          const std::string& name,
                          const Context& context) {
    const Result<std::unique_ptr<ByteStream>> stream =
        archive.stream(archive.find(name + std::string(npy_end)));
    if (!stream) {
        return tl::unexpected(stream.error());
    }
    return read_npy(**stream, context);
}

Result<Array> read_npy_file(const std::string& path, const Context& context) {
    const Result<std::unique_ptr<FileStream>> stream = open_file(path);
    if (!stream) {
        return tl::unexpected(stream.error());
    }
    return read_npy(**stream, context);
}

/// The arrays of these names, which the file has.
Result<Arrays> read_named(const std::string& path,
                          const std::vector<std::string>& names,
                          const Context& context) {
    const ArrayFileKind kind = array_file_kind(path);
    std::optional<ZipArchive> archive;
    if (kind == ArrayFileKind::npz) {
        Result<ZipArchive> opened = ZipArchive::open(path);
        if (!opened) {
            return tl::unexpected(opened.error());
        }
        archive = std::move(*opened);
    }
    Arrays result;
    for (const std::string& name : names) {
        Result<Array> array = archive                      ? read_member(*archive, name, context)
                              : kind == ArrayFileKind::npy ? read_npy_file(path, context)
                                                           : read_hdf5(path, name, context);
        if (!array) {
            return tl::unexpected(array.error());
        }
        result.emplace(name, std::move(*array));
    }
    return result;
}

Result<std::vector<std::string>> names_in(const std::string& path, const Context& context) {
    const Result<std::vector<ArrayInfo>> infos = list_arrays(path, context);
    if (!infos) {
        return tl::unexpected(infos.error());
    }
    std::vector<std::string> names;
    for (const ArrayInfo& info : *infos) {
        names.push_back(info.name);
    }
    return names;
}

}  // namespace

ArrayFileKind array_file_kind(const std::string& path) {
    const Result<std::unique_ptr<FileStream>> file = open_file(path);
    std::array<char, 8> start{};
    const Result<std::size_t> got = file ? (*file)->read(start) : Result<std::size_t>(0);
    const std::string_view bytes(start.data(), got.value_or(0));
    if (bytes.substr(0, 6) == "\x93NUMPY") {
        return ArrayFileKind::npy;
    }
    if (bytes.substr(0, 4) == "PK\x03\x04" || bytes.substr(0, 4) == "PK\x05\x06") {
        return ArrayFileKind::npz;
    }
    return bytes == "\x89HDF\r\n\x1a\n" ? ArrayFileKind::hdf5 : ArrayFileKind::other;
}

Result<std::vector<ArrayInfo>> list_arrays(const std::string& path, const Context& context) {
    switch (array_file_kind(path)) {
        case ArrayFileKind::npy:
            return list_npy(path);
        case ArrayFileKind::npz:
            return list_npz(path);
        case ArrayFileKind::hdf5:
            return list_hdf5(path, context);
        case ArrayFileKind::other:
            break;
    }
    return not_an_array_file(path);
}

Result<Array> read_array(const std::string& path, const std::string& name, const Context& context) {
    Result<std::vector<std::string>> names = names_in(path, context);
    if (!names) {
        return tl::unexpected(names.error());
    }
    if (std::find(names->begin(), names->end(), name) == names->end()) {
        constexpr std::size_t few = 30;  // a list for people
        names->resize(std::min(names->size(), few));
        return refuse(ErrorCode::missing_key,
                      {.source = path},
                      fmt::format("there is no array {}", shown(name)),
                      suggestion(name, *names));
    }
    Result<Arrays> arrays = read_named(path, {name}, context);
    if (!arrays) {
        return tl::unexpected(arrays.error());
    }
    return std::move(arrays->begin()->second);
}

Result<Arrays> read_arrays(const std::string& path, const Context& context) {
    const Result<std::vector<std::string>> names = names_in(path, context);
    if (!names) {
        return tl::unexpected(names.error());
    }
    return read_named(path, *names, context);
}

}  // namespace chainmark
