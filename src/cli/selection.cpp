#include "chainmark/cli/selection.hpp"

#include <algorithm>

#include <fnmatch.h>

#include "chainmark/base/words.hpp"

namespace chainmark::cli {
namespace {

bool matches(const std::string& glob, const std::string& text) {
    return fnmatch(glob.c_str(), text.c_str(), 0) == 0;
}

bool matches(const std::string& glob, const std::string& name, const std::string& label) {
    return glob.find('/') != std::string::npos ? matches(glob, name + '/' + label)
                                               : matches(glob, name) || matches(glob, label);
}

}  // namespace

Result<std::vector<Case>> select_quantities(std::vector<Case> cases, const std::string& glob) {
    std::vector<std::string> all;
    for (Case& c : cases) {
        for (const CaseQuantity& quantity : c.quantities) {
            all.push_back(c.name + '/' + quantity.query.label);
        }
        std::erase_if(c.quantities, [&](const CaseQuantity& quantity) {
            return !matches(glob, c.name, quantity.query.label);
        });
    }
    std::erase_if(cases, [](const Case& c) { return c.quantities.empty(); });
    if (cases.empty()) {
        return tl::unexpected(Error{ErrorCode::bad_option,
                                    {.source = "--only"},
                                    "'" + glob + "' names no quantity of these cases",
                                    "there are: " + join(all)});
    }
    return cases;
}

}  // namespace chainmark::cli
