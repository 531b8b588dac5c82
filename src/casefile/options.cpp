#include <algorithm>
#include <array>
#include <cmath>

#include <fmt/format.h>

#include "chainmark/base/words.hpp"
#include "chainmark/casefile/sections.hpp"

namespace chainmark {
namespace {

const std::string owner = "[[quantity]]";
constexpr int farthest = 1000000;

std::optional<int> read_place(Reader& reader, const Node& node, const std::string& what) {
    const auto place = reader.whole(node, what, 0, farthest);
    return place ? std::optional(static_cast<int>(*place)) : std::nullopt;
}

void read_distance(Reader& reader, const Node& node, Options& options) {
    const std::string what = name_in("distance", owner);
    if (!std::holds_alternative<List>(node.value)) {
        if (const auto distance = read_place(reader, node, what)) {
            options.distance = {*distance};
        }
        return;
    }
    const List* list = reader.list(node, what, "a whole number or a list of them");
    if (list == nullptr) {
        return;
    }
    for (const Node& item : *list) {
        if (const auto distance = read_place(reader, item, "an element of " + what)) {
            options.distance.push_back(*distance);
        }
    }
}

void read_pairs(Reader& reader, const Node& node, Options& options) {
    const std::string what = name_in("pairs", owner);
    const std::string form = "pairs of sites, such as [[0, 3], [1, 5]]";
    const List* list = reader.list(node, what, form);
    if (list == nullptr) {
        return;
    }
    for (const Node& item : *list) {
        const List* pair = reader.list(item, "an element of " + what, "two sites [i, j]");
        if (pair == nullptr) {
            continue;
        }
        if (pair->size() != 2) {
            reader.report(
                ErrorCode::bad_value,
                item.at,
                fmt::format("an element of {} holds {}", what, counted(pair->size(), "site")),
                "expected two sites [i, j]");
            continue;
        }
        const auto first = read_place(reader, pair->front(), "a site of " + what);
        const auto second = read_place(reader, pair->back(), "a site of " + what);
        if (first && second) {
            options.pairs.emplace_back(*first, *second);
        }
    }
}

void read_block(Reader& reader, const Node& node, Options& options) {
    const std::string what = name_in("block", owner);
    std::vector<int>& block = options.block;
    if (std::holds_alternative<std::int64_t>(node.value)) {
        const auto sites = reader.whole(node, what, 1, farthest);
        for (int site = 0; site < sites.value_or(0); ++site) {
            block.push_back(site);
        }
        return;
    }
    const List* list =
        reader.list(node, what, "a number of sites, or a list of sites such as [0, 2, 3]");
    if (list == nullptr) {
        return;
    }
    for (const Node& item : *list) {
        if (const auto site = read_place(reader, item, "a site of " + what)) {
            block.push_back(*site);
        }
    }
    std::sort(block.begin(), block.end());
    const auto twice = std::adjacent_find(block.begin(), block.end());
    if (twice != block.end()) {
        reader.report(ErrorCode::bad_value,
                      node.at,
                      fmt::format("{} names site {} twice", what, *twice),
                      "expected every site once");
    }
}

/// A total Sz: a multiple of 1/2.
std::optional<double> read_sz(Reader& reader, const Node& node, const std::string& what) {
    const auto sz = reader.number(node, what);
    if (sz && (std::abs(*sz) > farthest || std::trunc(2 * *sz) != 2 * *sz)) {
        reader.bad_value(node, what, "a whole number or a half, such as 0, 1 or 0.5");
        return std::nullopt;
    }
    return sz;
}

std::optional<int> read_sign(Reader& reader, const Node& node, const std::string& what) {
    const auto sign = reader.whole(node, what, -1, 1);
    if (sign == 0) {
        reader.bad_value(node, what, "1 or -1");
        return std::nullopt;
    }
    return sign ? std::optional(static_cast<int>(*sign)) : std::nullopt;
}

void read_sector(Reader& reader, const Node& node, Options& options) {
    const std::string what = name_in("sector", owner);
    const std::vector<std::string> keys = {"sz", "momentum", "parity", "reflection", "inversion"};
    const std::string form =
        "a table such as { sz = 1, momentum = 0 } with one or more of " + join(keys);
    const Table* table = reader.table(node, what, form);
    if (table == nullptr) {
        return;
    }
    reader.only_keys(*table, what, keys);
    if (table->empty()) {
        reader.bad_value(node, what, form);
    }
    Labels labels;
    const auto read = [&](const std::string& key, auto& label, const auto& read_label) {
        if (const Entry* entry = find(*table, key)) {
            label = read_label(reader, entry->value, fmt::format("'{}' of {}", key, what));
        }
    };
    const auto read_momentum = [](Reader& r, const Node& value, const std::string& name) {
        const auto n = r.whole(value, name, -farthest, farthest);
        return n ? std::optional(static_cast<int>(*n)) : std::nullopt;
    };
    read("sz", labels.sz, read_sz);
    read("momentum", labels.momentum, read_momentum);
    read("parity", labels.parity, read_sign);
    read("reflection", labels.reflection, read_sign);
    read("inversion", labels.inversion, read_sign);
    options.sector = labels;
}

/// The element of `all` whose word in the case format is written.
template <class T, std::size_t N>
void read_word(Reader& reader,
               const Node& node,
               const std::string& what,
               const std::array<T, N>& all,
               T& target) {
    std::vector<std::string> words;
    for (const T element : all) {
        words.push_back(to_string(element));
    }
    if (const auto chosen = reader.choice(node, what, words)) {
        target = all.at(*chosen);
    }
}

}  // namespace

void read_option(Reader& reader, OptionId option, const Node& node, Options& options) {
    const std::string what = name_in(to_string(option), owner);
    constexpr int largest_order = 1000;
    switch (option) {
        case OptionId::count:
            options.count =
                static_cast<int>(reader.whole(node, what, 1, farthest).value_or(options.count));
            break;
        case OptionId::sector:
            read_sector(reader, node, options);
            break;
        case OptionId::axis:
            read_word(reader, node, what, std::array{Axis::x, Axis::y, Axis::z}, options.axis);
            break;
        case OptionId::axes:
            read_word(reader,
                      node,
                      what,
                      std::array{Axes::xx, Axes::yy, Axes::zz, Axes::plus_minus, Axes::dot},
                      options.axes);
            break;
        case OptionId::distance:
            read_distance(reader, node, options);
            break;
        case OptionId::pairs:
            read_pairs(reader, node, options);
            break;
        case OptionId::connected:
            options.connected = reader.flag(node, what).value_or(false);
            break;
        case OptionId::block:
            read_block(reader, node, options);
            break;
        case OptionId::order:
            options.order = static_cast<int>(
                reader.whole(node, what, 1, largest_order).value_or(options.order));
            break;
        case OptionId::log:
            options.log2 = true;
            if (reader.whole(node, what, 1, farthest).value_or(2) != 2) {
                reader.bad_value(node, what, "2, for bits; leave it out for nats");
            }
            break;
        case OptionId::parity:
            read_word(reader, node, what, std::array{Parity::even, Parity::odd}, options.parity);
            break;
    }
}

}  // namespace chainmark
