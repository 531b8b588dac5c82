#include "chainmark/report/words.hpp"

#include <fmt/format.h>

#include "chainmark/base/numerics.hpp"
#include "chainmark/base/words.hpp"
#include "chainmark/formats/numbers.hpp"

namespace chainmark {
namespace {

/// "{ sz = 1, momentum = 0 }": as in the case file.
std::string labels_text(const Labels& labels) {
    std::vector<std::string> texts;
    const auto add = [&](const char* name, const auto& label) {
        if (label) {
            texts.push_back(fmt::format("{} = {}", name, *label));
        }
    };
    add("sz", labels.sz);
    add("momentum", labels.momentum);
    add("parity", labels.parity);
    add("reflection", labels.reflection);
    add("inversion", labels.inversion);
    return fmt::format("{{ {} }}", join(texts));
}

/// The number of sites of a block at the chain's beginning, the sites themselves of another.
std::string block_text(const std::vector<int>& sites) {
    const bool leading = sites.back() == static_cast<int>(sites.size()) - 1;
    return leading ? std::to_string(sites.size()) : fmt::format("[{}]", fmt::join(sites, ", "));
}

std::string option_text(OptionId option, const Options& given) {
    switch (option) {
        case OptionId::count:
            return fmt::format("count = {}", given.count);
        case OptionId::sector:
            return given.sector ? fmt::format("sector = {}", labels_text(*given.sector)) : "";
        case OptionId::axis:
            return fmt::format("axis = {}", to_string(given.axis));
        case OptionId::axes:
            return given.axes == Axes::zz ? "" : fmt::format("axes = {}", to_string(given.axes));
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
        case OptionId::block:
            return given.block.empty() ? "" : "block = " + block_text(given.block);
        case OptionId::order:
            return given.order == 1 ? "" : fmt::format("order = {}", given.order);
        case OptionId::log:
            return given.log2 ? "log = 2" : "";
        case OptionId::parity:
            return given.parity == Parity::ground_state
                       ? ""
                       : fmt::format("parity = {}", to_string(given.parity));
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
