#include <algorithm>

#include <fmt/format.h>

#include "chainmark/base/words.hpp"
#include "chainmark/casefile/sections.hpp"

namespace chainmark {
namespace {

const std::string owner = "[[quantity]]";

bool takes(const QuantitySpec& spec, OptionId option) {
    return std::find(spec.options.begin(), spec.options.end(), option) != spec.options.end();
}

/// `count` and `block` where they are taken, and exactly one of `distance` and `pairs`.
void require_options(Reader& reader,
                     const Table& table,
                     const Position& at,
                     const QuantitySpec& spec) {
    const std::string name = fmt::format("the quantity '{}'", spec.name);
    if (takes(spec, OptionId::count)) {
        reader.need(table, at, name, "count", "say how many, such as count = 4");
    }
    if (takes(spec, OptionId::block)) {
        reader.need(
            table, at, name, "block", "say which sites, such as block = 4 for the sites 0 ... 3");
    }
    if (!takes(spec, OptionId::distance)) {
        return;
    }
    const Entry* distance = find(table, "distance");
    const Entry* pairs = find(table, "pairs");
    if (distance == nullptr && pairs == nullptr) {
        reader.report(ErrorCode::missing_key,
                      at,
                      name + " has neither 'distance' nor 'pairs'",
                      "say which, such as distance = [1, 2] or pairs = [[0, 3]]");
    } else if (distance != nullptr && pairs != nullptr) {
        reader.report(ErrorCode::bad_value,
                      std::max(distance->at, pairs->at),
                      name + " has both 'distance' and 'pairs'",
                      "expected one of them: ask for two quantities with different labels");
    }
}

const QuantitySpec* read_name(Reader& reader, const Table& table, const Position& at) {
    std::vector<std::string> names;
    for (const QuantitySpec& spec : quantities()) {
        names.push_back(spec.name);
    }
    const Entry* name = reader.need(
        table, at, owner, "name", "say what is wanted, such as name = \"ground_energy\"");
    if (name == nullptr) {
        return nullptr;
    }
    const auto chosen = reader.choice(name->value, name_in("name", owner), names);
    return chosen ? find_quantity(names[*chosen]) : nullptr;
}

/// A label heads columns and keys, so it must be one line and not empty.
void read_label(Reader& reader, const Table& table, std::string& label) {
    const Entry* entry = find(table, "label");
    if (entry == nullptr) {
        return;
    }
    const std::string what = name_in("label", owner);
    const std::string* text = reader.text(entry->value, what, "a text");
    if (text == nullptr) {
        return;
    }
    const bool printable = std::none_of(text->begin(), text->end(), [](char c) {
        return static_cast<unsigned char>(c) < 0x20 || c == 0x7F;
    });
    if (text->empty() || !printable) {
        reader.bad_value(entry->value, what, "a text of one line that is not empty");
        return;
    }
    label = *text;
}

void read_own_tolerance(Reader& reader,
                        const Table& table,
                        const Tolerance& of_case,
                        CaseQuantity& quantity) {
    const Entry* entry = find(table, "tolerance");
    if (entry == nullptr) {
        return;
    }
    const std::string what = name_in("tolerance", owner);
    if (const Table* own = reader.table(entry->value, what, "{ absolute = ..., relative = ... }")) {
        quantity.tolerance = of_case;
        read_tolerance(reader, *own, what, *quantity.tolerance);
    }
}

Position extent_position(const Table& table, const Position& at) {
    for (const char* key : {"distance", "pairs", "count", "block"}) {
        if (const Entry* entry = find(table, key)) {
            return entry->value.at;
        }
    }
    return at;
}

void read_quantity(Reader& reader, const Node& node, Draft& draft) {
    const Table* table = reader.table(node, owner, "a table");
    const QuantitySpec* spec = table == nullptr ? nullptr : read_name(reader, *table, node.at);
    if (spec == nullptr) {
        return;
    }
    std::vector<std::string> keys = {"name", "label", "tolerance"};
    CaseQuantity quantity;
    quantity.query.spec = spec;
    quantity.query.label = spec->name;
    quantity.where = reader.place(node.at);
    for (const OptionId option : spec->options) {
        keys.push_back(to_string(option));
        if (const Entry* entry = find(*table, to_string(option))) {
            read_option(reader, option, entry->value, quantity.query.options);
        }
    }
    reader.only_keys(*table, fmt::format("the quantity '{}'", spec->name), keys);
    require_options(reader, *table, node.at, *spec);
    read_label(reader, *table, quantity.query.label);
    read_own_tolerance(reader, *table, draft.result.tolerance, quantity);
    draft.result.quantities.push_back(std::move(quantity));
    draft.quantity_at.push_back(node.at);
    draft.extent_at.push_back(extent_position(*table, node.at));
    const Entry* sector = find(*table, "sector");
    draft.sector_at.push_back(sector == nullptr ? node.at : sector->value.at);
}

}  // namespace

void read_quantities(Reader& reader, const Table& root, Draft& draft) {
    const Entry* entry = reader.need(
        root, {}, "the case", "quantity", "ask for something: [[quantity]] with a name");
    if (entry == nullptr) {
        return;
    }
    const List* list = reader.list(entry->value, "'quantity'", "tables written as [[quantity]]");
    if (list == nullptr) {
        return;
    }
    for (const Node& node : *list) {
        read_quantity(reader, node, draft);
    }
}

}  // namespace chainmark
