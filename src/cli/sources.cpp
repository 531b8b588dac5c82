#include "chainmark/cli/sources.hpp"

#include <algorithm>
#include <filesystem>

#include "chainmark/base/words.hpp"
#include "chainmark/cli/embedded.hpp"

namespace chainmark::cli {
namespace {

namespace fs = std::filesystem;

constexpr const char* ending = ".toml";

tl::unexpected<Errors> one_error(Error error) {
    return tl::unexpected(Errors{std::move(error)});
}

/// Every .toml in `folder` and the folders below it, sorted. Symbolic links to folders are not
/// followed; what cannot be listed is an error.
Checked<std::vector<std::string>> files_in(const std::string& folder) {
    std::vector<std::string> files;
    std::error_code failed;
    fs::recursive_directory_iterator at(folder, failed);
    while (!failed && at != fs::recursive_directory_iterator()) {
        std::error_code unknown;
        if (at->path().extension() == ending && at->is_regular_file(unknown)) {
            files.push_back(at->path().string());
        }
        at.increment(failed);
    }
    if (failed) {
        return one_error({ErrorCode::cannot_read,
                          {.source = folder},
                          "cannot be listed: " + failed.message(),
                          ""});
    }
    if (files.empty()) {
        return one_error({ErrorCode::cannot_read,
                          {.source = folder},
                          "the folder holds no case",
                          "cases are files with the ending .toml"});
    }
    std::sort(files.begin(), files.end());
    return files;
}

Checked<Case> embedded_case(const std::string& argument, const std::vector<Setting>& settings) {
    std::string name = argument;
    if (name.ends_with(ending)) {
        name.erase(name.size() - std::string(ending).size());
    }
    std::vector<std::string> names;
    for (const EmbeddedCase& embedded : embedded_cases()) {
        if (embedded.name == name) {
            return parse_case(embedded.text, embedded.name, settings);
        }
        names.push_back(embedded.name);
    }
    return one_error({ErrorCode::cannot_read,
                      {.source = argument},
                      "neither a file nor a folder nor an embedded case",
                      names.empty() ? "" : suggestion(name, names)});
}

/// Moves what was found, or the errors, to the end of the lists.
void collect(Checked<Case> found, std::vector<Case>& cases, Errors& errors) {
    if (found) {
        cases.push_back(std::move(*found));
    } else {
        errors.insert(errors.end(), found.error().begin(), found.error().end());
    }
}

}  // namespace

Checked<std::vector<Case>> load_cases(const std::vector<std::string>& arguments,
                                      const std::vector<Setting>& settings) {
    std::vector<Case> cases;
    Errors errors;
    for (const std::string& argument : arguments) {
        std::error_code ignored;
        if (fs::is_directory(argument, ignored)) {
            const Checked<std::vector<std::string>> files = files_in(argument);
            if (!files) {
                errors.insert(errors.end(), files.error().begin(), files.error().end());
                continue;
            }
            for (const std::string& file : *files) {
                collect(read_case(file, settings), cases, errors);
            }
        } else if (fs::exists(argument, ignored)) {
            collect(read_case(argument, settings), cases, errors);
        } else {
            collect(embedded_case(argument, settings), cases, errors);
        }
    }
    if (!errors.empty()) {
        return tl::unexpected(std::move(errors));
    }
    return cases;
}

Checked<std::vector<Setting>> parse_settings(const std::vector<std::string>& texts) {
    std::vector<Setting> settings;
    Errors errors;
    for (const std::string& text : texts) {
        const std::size_t sign = text.find('=');
        if (sign == std::string::npos || sign == 0 || sign + 1 == text.size()) {
            errors.push_back({ErrorCode::bad_option,
                              {.source = "--set"},
                              "'" + text + "' is no KEY=VALUE",
                              "write for example --set sites=12"});
        } else {
            settings.push_back({text.substr(0, sign), text.substr(sign + 1)});
        }
    }
    if (!errors.empty()) {
        return tl::unexpected(std::move(errors));
    }
    return settings;
}

}  // namespace chainmark::cli
