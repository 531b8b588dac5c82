#include "chainmark/casefile/case.hpp"

#include <algorithm>
#include <cerrno>
#include <cstring>
#include <filesystem>
#include <fstream>
#include <optional>
#include <system_error>

#include <fmt/format.h>

#include "chainmark/casefile/sections.hpp"

namespace chainmark {
namespace {

std::string name_of(const std::string& source) {
    const std::filesystem::path path(source);
    return (path.extension() == ".toml" ? path.stem() : path.filename()).string();
}

void read_sections(Reader& reader, const Table& root, Draft& draft) {
    reader.only_keys(root, "the case", top_level_keys());
    read_title(reader, root, draft);
    read_system(reader, root, draft);
    read_hamiltonian(reader, root, draft);
    read_grid_section(reader, root, draft);
    read_tolerance_section(reader, root, draft);
    read_quantities(reader, root, draft);
    read_routes(reader, root, draft);
    check_case(reader, draft);
}

/// The axes in written order.
void finish_axes(const Reader& reader, Draft& draft) {
    std::stable_sort(draft.axes.begin(),
                     draft.axes.end(),
                     [](const WrittenAxis& a, const WrittenAxis& b) { return a.key < b.key; });
    for (const WrittenAxis& written : draft.axes) {
        GridAxis axis = {written.name, {}, reader.place(written.at)};
        for (const GridValue& value : written.values) {
            axis.values.push_back(value.value);
        }
        draft.result.axes.push_back(std::move(axis));
    }
}

Error cannot_read(const std::string& path, const std::string& found, const std::string& allowed) {
    return {ErrorCode::cannot_read, {path, 0, 0}, found, allowed};
}

/// Why `path` is no file that can be read; empty where it may be one.
std::optional<Error> refuse_path(const std::string& path) {
    std::error_code code;
    const std::filesystem::file_status status = std::filesystem::status(path, code);
    switch (status.type()) {
        case std::filesystem::file_type::not_found:
            return cannot_read(path, "there is no such file", "");
        case std::filesystem::file_type::directory:
            return cannot_read(path, "this is a folder", "expected a case file");
        case std::filesystem::file_type::regular:
            return std::nullopt;
        case std::filesystem::file_type::none:
            return cannot_read(path, "cannot be read: " + code.message(), "");
        default:
            return cannot_read(path, "this is no ordinary file", "expected a case file");
    }
}

Result<std::string> read_file(const std::string& path) {
    if (auto error = refuse_path(path)) {
        return tl::unexpected(std::move(*error));
    }
    errno = 0;
    std::ifstream file(path, std::ios::binary);
    if (!file) {
        const bool denied = errno == EACCES;
        return tl::unexpected(
            denied
                ? cannot_read(path, "there is no permission to read this file", "")
                : cannot_read(path, fmt::format("cannot be read: {}", std::strerror(errno)), ""));
    }
    // One byte more than allowed is enough to see that a file is too long.
    std::string text(longest_file + 1, '\0');
    file.read(text.data(), static_cast<std::streamsize>(text.size()));
    if (file.bad()) {
        return tl::unexpected(cannot_read(path, "reading broke off", ""));
    }
    text.resize(static_cast<std::size_t>(file.gcount()));
    if (text.size() > longest_file) {
        return tl::unexpected(too_long(path));
    }
    return text;
}

}  // namespace

const GridAxis& Case::axis(const std::string& name_wanted) const {
    const auto at = std::find_if(
        axes.begin(), axes.end(), [&](const GridAxis& axis) { return axis.name == name_wanted; });
    CHAINMARK_EXPECTS(at != axes.end());
    return *at;
}

bool Case::has_temperature() const {
    return std::any_of(
        axes.begin(), axes.end(), [](const GridAxis& axis) { return axis.name == "temperature"; });
}

Checked<Case> parse_case(const std::string& text,
                         const std::string& source,
                         const std::vector<Setting>& settings) {
    const Result<Document> document = read_document(text, source, settings);
    if (!document) {
        return tl::unexpected(Errors{document.error()});
    }
    Reader reader(source, settings);
    const Table& root = std::get<Table>(document->root.value);
    Draft draft;
    draft.result.source = source;
    draft.result.name = name_of(source);
    if (read_format(reader, root)) {
        read_sections(reader, root, draft);
    }
    Errors errors = reader.errors();
    errors.insert(errors.end(), document->setting_errors.begin(), document->setting_errors.end());
    if (!errors.empty()) {
        return tl::unexpected(std::move(errors));
    }
    finish_axes(reader, draft);
    draft.result.effective = effective_text(document->root);
    return std::move(draft.result);
}

Checked<Case> read_case(const std::string& path, const std::vector<Setting>& settings) {
    const Result<std::string> text = read_file(path);
    if (!text) {
        return tl::unexpected(Errors{text.error()});
    }
    return parse_case(*text, path, settings);
}

}  // namespace chainmark
