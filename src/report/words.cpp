#include "chainmark/report/words.hpp"

#include <fmt/format.h>

#include "chainmark/base/numerics.hpp"
#include "chainmark/base/words.hpp"
#include "chainmark/formats/numbers.hpp"

namespace chainmark {
namespace {

std::string option_text(OptionId option, const Options& given) {
    switch (option) {
        case OptionId::count:
            return fmt::format("count = {}", given.count);
        case OptionId::axis:
            return fmt::format("axis = {}", to_string(given.axis));
        case OptionId::distance:
            return given.distance.empty()
                       ? ""
                       : fmt::format("distance = [{}]", fmt::join(given.distance, ", "));
        case OptionId::pairs: {
            std::vector<std::string> pairs;
            for (const auto& [i, j] : given.pairs) {
                pairs.push_back(fmt::format("[{}, {}]", i, j));
            }
            return pairs.empty() ? "" : fmt::format("pairs = [{}]", join(pairs));
        }
        case OptionId::connected:
            return given.connected ? "connected" : "";
        case OptionId::parity:
            return given.parity == Parity::ground_state
                       ? ""
                       : fmt::format("parity = {}", to_string(given.parity));
        case OptionId::axes:
            return "";
    }
    return "";
}

}  // namespace

std::string boundary_text(const Case& c) {
    if (c.boundary == BoundaryKind::open) {
        return "open";
    }
    if (c.twist == 0.0) {
        return "periodic";
    }
    return c.twist == pi ? "antiperiodic" : "twist " + number_text(c.twist);
}

std::string parameter_text(const std::string& name, double value) {
    return name == "sites" && value == infinite_sites ? "infinite" : number_text(value);
}

std::string options_text(const Query& query) {
    std::vector<std::string> texts;
    for (const OptionId option : query.spec->options) {
        const std::string text = option_text(option, query.options);
        if (!text.empty()) {
            texts.push_back(text);
        }
    }
    return join(texts);
}

}  // namespace chainmark
