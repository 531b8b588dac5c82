#include "chainmark/formats/entry_source.hpp"

#include <algorithm>

#include <fmt/format.h>

#include "chainmark/base/words.hpp"
#include "chainmark/formats/array_file.hpp"
#include "chainmark/formats/matrix_market.hpp"
#include "chainmark/formats/shown.hpp"
#include "chainmark/formats/sparse_npz.hpp"

namespace chainmark {
namespace {

/// The one array of a file, where no name says which.
Result<std::string> only_name(const std::string& path, const Context& context) {
    const Result<std::vector<ArrayInfo>> infos = list_arrays(path, context);
    if (!infos) {
        return tl::unexpected(infos.error());
    }
    if (infos->size() != 1) {
        constexpr std::size_t few = 30;  // a list for people
        std::vector<std::string> names;
        for (const ArrayInfo& info : *infos) {
            if (names.size() < few) {
                names.push_back(shown(info.name));
            }
        }
        return refuse(ErrorCode::missing_key,
                      {.source = path},
                      fmt::format("the file holds {}", counted(infos->size(), "array")),
                      "say which one is the matrix: " + join(names));
    }
    return infos->front().name;
}

}  // namespace

void EntrySource::warn(std::string text) {
    if (std::find(warnings_.begin(), warnings_.end(), text) == warnings_.end()) {
        warnings_.push_back(std::move(text));
    }
}

Result<std::unique_ptr<EntrySource>> open_entries(const std::string& path,
                                                  const std::string& name,
                                                  const Context& context) {
    const ArrayFileKind kind = array_file_kind(path);
    if (kind == ArrayFileKind::npy) {
        return open_npy_entries(path);
    }
    if (kind == ArrayFileKind::other) {
        return open_matrix_market(path);
    }
    if (name.empty() && kind == ArrayFileKind::npz && is_sparse_npz(path)) {
        return open_sparse_npz(path, context);
    }
    const Result<std::string> chosen = name.empty() ? only_name(path, context) : name;
    if (!chosen) {
        return tl::unexpected(chosen.error());
    }
    Result<Array> array = read_array(path, *chosen, context);
    if (!array) {
        return tl::unexpected(array.error());
    }
    return entries_of(std::move(*array));
}

}  // namespace chainmark
