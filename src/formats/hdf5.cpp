#include "chainmark/formats/hdf5.hpp"

#include <algorithm>

#include <fmt/format.h>
#include <nlohmann/json.hpp>

#include "chainmark/base/words.hpp"
#include "chainmark/formats/hdf5_child.hpp"
#include "chainmark/formats/npy.hpp"
#include "chainmark/formats/shown.hpp"

namespace chainmark {
namespace {

#ifdef CHAINMARK_HAS_HDF5

/// What the library needs for itself beside the buffers.
constexpr double library_memory = 256.0 * 1024 * 1024;

Result<std::unique_ptr<ByteStream>> start(const std::string& path,
                                          const std::string& source,
                                          const Context& context,
                                          const std::function<void(const ByteSink&)>& write) {
    if (const Result<std::unique_ptr<FileStream>> regular = open_file(path); !regular) {
        return tl::unexpected(regular.error());
    }
    return start_child(source,
                       "the HDF5 library cannot read this file",
                       library_memory + MemoryShare(context).limit(),
                       context,
                       write);
}

/// Everything the stream has, up to a size that no message of the child exceeds.
Result<std::string> read_all(ByteStream& stream) {
    constexpr std::size_t largest = 1U << 26;
    constexpr std::size_t piece = 1U << 16;
    std::string all;
    while (all.size() < largest) {
        const std::size_t before = all.size();
        all.resize(before + piece);
        Result<std::size_t> got = stream.read(std::span(all).subspan(before));
        if (!got) {
            return tl::unexpected(got.error());
        }
        all.resize(before + *got);
        if (*got < piece) {
            return all;
        }
    }
    return refuse(ErrorCode::bad_syntax,
                  {.source = stream.source()},
                  "the names of the data sets take over 64 MiB",
                  "fewer data sets");
}

Error error_of(const nlohmann::json& message, const std::string& source) {
    return {static_cast<ErrorCode>(message.value("code", 0)),
            {.source = source},
            message.value("found", ""),
            message.value("allowed", "")};
}

tl::unexpected<Error> no_message(const std::string& source) {
    return refuse(ErrorCode::bad_syntax, {.source = source}, "the file cannot be read as HDF5");
}

#else

tl::unexpected<Error> no_library(const std::string& path) {
    return refuse(
        ErrorCode::cannot_read,
        {.source = path},
        "this build does not read HDF5",
        "install libhdf5-dev, configure and build again; or save the arrays with np.savez");
}

#endif

}  // namespace

#ifdef CHAINMARK_HAS_HDF5

bool has_hdf5() {
    return true;
}

Result<std::vector<ArrayInfo>> list_hdf5(const std::string& path, const Context& context) {
    const auto stream =
        start(path, path, context, [&](const ByteSink& sink) { write_hdf5_list(path, sink); });
    if (!stream) {
        return tl::unexpected(stream.error());
    }
    const Result<std::string> text = read_all(**stream);
    if (!text) {
        return tl::unexpected(text.error());
    }
    const nlohmann::json list = nlohmann::json::parse(*text, nullptr, false);
    if (list.is_object()) {
        return tl::unexpected(error_of(list, path));
    }
    if (!list.is_array()) {
        return no_message(path);
    }
    std::vector<ArrayInfo> result;
    for (const nlohmann::json& entry : list) {
        result.push_back({entry.at("name").get<std::string>(),
                          entry.at("type").get<std::string>(),
                          entry.at("shape").get<ArrayShape>(),
                          entry.at("readable").get<bool>()});
    }
    std::sort(result.begin(), result.end(), [](const ArrayInfo& a, const ArrayInfo& b) {
        return a.name < b.name;
    });
    return result;
}

Result<Array> read_hdf5(const std::string& path, const std::string& name, const Context& context) {
    const std::string source = path + ":" + name;
    const double buffers = MemoryShare(context).limit();
    const auto stream = start(path, source, context, [&](const ByteSink& sink) {
        write_hdf5_array(path, name, buffers, sink);
    });
    if (!stream) {
        return tl::unexpected(stream.error());
    }
    char kind = 0;
    Result<std::size_t> got = (*stream)->read({&kind, 1});
    if (!got) {
        return tl::unexpected(got.error());
    }
    if (*got == 1 && kind == 'A') {
        Result<Array> array = read_npy(**stream, context);
        // after the last element the child may still have died
        Result<std::size_t> end = array ? (*stream)->read({&kind, 1}) : got;
        if (!end) {
            return tl::unexpected(end.error());
        }
        return array;
    }
    const Result<std::string> text = read_all(**stream);
    if (!text) {
        return tl::unexpected(text.error());
    }
    const nlohmann::json message = nlohmann::json::parse(*text, nullptr, false);
    if (!message.is_object()) {
        return no_message(source);
    }
    return tl::unexpected(error_of(message, source));
}

#else

bool has_hdf5() {
    return false;
}

Result<std::vector<ArrayInfo>> list_hdf5(const std::string& path, const Context& /*context*/) {
    return no_library(path);
}

Result<Array> read_hdf5(const std::string& path,
                        const std::string& /*name*/,
                        const Context& /*context*/) {
    return no_library(path);
}

#endif

}  // namespace chainmark
