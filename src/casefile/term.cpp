#include <algorithm>
#include <array>
#include <charconv>
#include <cmath>
#include <limits>

#include <fmt/format.h>

#include "chainmark/base/words.hpp"
#include "chainmark/casefile/sections.hpp"

namespace chainmark {
namespace {

const std::string owner = "[[hamiltonian.term]]";

struct NamedMatrix {
    std::string name;
    SiteMatrix (*matrix)(int two_s);
};

const std::array<NamedMatrix, 6> site_operators = {{{"Sx", SiteMatrix::sx},
                                                    {"Sy", SiteMatrix::sy},
                                                    {"Sz", SiteMatrix::sz},
                                                    {"S+", SiteMatrix::raising},
                                                    {"S-", SiteMatrix::lowering},
                                                    {"I", SiteMatrix::identity}}};

std::vector<std::string> operator_names() {
    std::vector<std::string> names;
    for (const NamedMatrix& op : site_operators) {
        names.push_back(op.name);
    }
    return names;
}

/// The exponent of "Sz^2"; 1 without one, nothing where it is no whole number from 1 to 20.
std::optional<int> exponent_of(const std::string& text, std::size_t caret) {
    if (caret == std::string::npos) {
        return 1;
    }
    constexpr int highest = 20;
    int exponent = 0;
    const char* end = text.data() + text.size();
    const auto parsed = std::from_chars(text.data() + caret + 1, end, exponent);
    const bool valid = parsed.ec == std::errc() && parsed.ptr == end;
    return valid && exponent >= 1 && exponent <= highest ? std::optional(exponent) : std::nullopt;
}

std::optional<SiteMatrix> read_operator(Reader& reader, const Node& node, int two_s) {
    const std::string what = "an operator of " + owner;
    const std::string* text = reader.text(node, what, "a text such as \"Sx\" or \"Sz^2\"");
    if (text == nullptr) {
        return std::nullopt;
    }
    const std::size_t caret = text->find('^');
    const std::string name = text->substr(0, caret);
    const auto at = std::find_if(site_operators.begin(),
                                 site_operators.end(),
                                 [&](const NamedMatrix& op) { return op.name == name; });
    if (at == site_operators.end()) {
        reader.report(ErrorCode::unknown_name,
                      node.at,
                      fmt::format("{} is {}", what, describe(node)),
                      suggestion(name, operator_names()));
        return std::nullopt;
    }
    const auto exponent = exponent_of(*text, caret);
    if (!exponent) {
        reader.bad_value(node, what, "a power from 1 to 20, such as Sz^2");
        return std::nullopt;
    }
    const SiteMatrix base = at->matrix(two_s);
    SiteMatrix power = base;
    for (int i = 1; i < *exponent; ++i) {
        power = power * base;
    }
    return power;
}

bool read_operators(
    Reader& reader, const Table& table, const Position& at, int two_s, CaseTerm& term) {
    const std::string form = "a list of operators, such as [\"S+\", \"S-\"]";
    const Entry* entry = reader.need(table, at, owner, "operators", "expected " + form);
    const List* list =
        entry == nullptr ? nullptr : reader.list(entry->value, name_in("operators", owner), form);
    if (list == nullptr) {
        return false;
    }
    for (const Node& node : *list) {
        if (const auto matrix = read_operator(reader, node, two_s)) {
            term.factors.push_back(*matrix);
        }
    }
    return term.factors.size() == list->size();
}

/// `offsets` or `sites`: one whole number a factor.
bool read_places(Reader& reader, const Table& table, const Position& at, CaseTerm& term) {
    const Entry* offsets = find(table, "offsets");
    const Entry* sites = find(table, "sites");
    if ((offsets == nullptr) == (sites == nullptr)) {
        reader.report(
            offsets == nullptr ? ErrorCode::missing_key : ErrorCode::bad_value,
            offsets == nullptr ? at : sites->at,
            fmt::format("{} has {}",
                        owner,
                        offsets == nullptr ? "neither 'offsets' nor 'sites'"
                                           : "both 'offsets' and 'sites'"),
            "give offsets = [0, 1] for a term at every site, or sites = [3, 7] for one placement");
        return false;
    }
    term.fixed = sites != nullptr;
    const Entry& entry = term.fixed ? *sites : *offsets;
    const std::string what = name_in(entry.key, owner);
    const List* list = reader.list(entry.value, what, "a list of whole numbers, one per operator");
    if (list == nullptr) {
        return false;
    }
    constexpr int farthest = 1000000;
    for (const Node& node : *list) {
        if (const auto place = reader.whole(node, "an element of " + what, 0, farthest)) {
            term.offsets.push_back(static_cast<int>(*place));
        }
    }
    if (term.offsets.size() != list->size()) {
        return false;
    }
    if (!term.fixed && *std::min_element(term.offsets.begin(), term.offsets.end()) != 0) {
        reader.report(ErrorCode::bad_value,
                      entry.value.at,
                      fmt::format("{} starts at {}",
                                  what,
                                  *std::min_element(term.offsets.begin(), term.offsets.end())),
                      "the smallest offset is 0: a placement's first site");
        return false;
    }
    return true;
}

bool same_length(Reader& reader, const Position& at, const CaseTerm& term) {
    if (term.factors.size() == term.offsets.size()) {
        return true;
    }
    reader.report(ErrorCode::bad_value,
                  at,
                  fmt::format("{} has {} and {}",
                              owner,
                              counted(term.factors.size(), "operator"),
                              counted(term.offsets.size(), term.fixed ? "site" : "offset")),
                  "expected as many of one as of the other");
    return false;
}

/// A name of [parameters].
std::optional<std::string> read_parameter_name(Reader& reader,
                                               const Node& node,
                                               const std::string& what,
                                               Draft& draft) {
    const std::string* name = reader.text(node, what, "the name of a parameter");
    if (name == nullptr) {
        return std::nullopt;
    }
    const std::vector<std::string>& known = draft.parameters;
    if (std::find(known.begin(), known.end(), *name) == known.end()) {
        reader.report(
            ErrorCode::unknown_name,
            node.at,
            fmt::format("{} is {}, which [parameters] does not have", what, describe(node)),
            known.empty() ? fmt::format("add [parameters] with {} = ...", shown(*name))
                          : suggestion(*name, known));
        return std::nullopt;
    }
    draft.used_parameters.insert(*name);
    return *name;
}

std::optional<std::complex<double>> read_complex(Reader& reader,
                                                 const Node& node,
                                                 const std::string& what) {
    const auto* table = std::get_if<Table>(&node.value);
    if (table == nullptr) {
        return reader.number(node, what);
    }
    reader.only_keys(*table, what, {"re", "im"});
    const std::string form = "a complex number is { re = 0.5, im = -1.0 }";
    const Entry* re = reader.need(*table, node.at, what, "re", form);
    const Entry* im = reader.need(*table, node.at, what, "im", form);
    if (re == nullptr || im == nullptr) {
        return std::nullopt;
    }
    const auto real = reader.number(re->value, "'re' of " + what);
    const auto imaginary = reader.number(im->value, "'im' of " + what);
    if (!real || !imaginary) {
        return std::nullopt;
    }
    return std::complex<double>(*real, *imaginary);
}

std::optional<Coupling> read_numbers(Reader& reader, const Node& node, const std::string& what) {
    const List* list = reader.list(node, what, "a list of couplings, one per placement");
    if (list == nullptr) {
        return std::nullopt;
    }
    std::vector<std::complex<double>> numbers;
    for (const Node& item : *list) {
        if (const auto number = read_complex(reader, item, "an element of " + what)) {
            numbers.push_back(*number);
        }
    }
    return numbers.size() == list->size() ? std::optional<Coupling>(numbers) : std::nullopt;
}

std::optional<Coupling> read_scaled(Reader& reader,
                                    const Table& table,
                                    const std::string& what,
                                    Draft& draft) {
    reader.only_keys(table, what, {"parameter", "factor"});
    const Entry* factor = find(table, "factor");
    const auto scale =
        factor == nullptr ? 1.0 : reader.number(factor->value, "'factor' of " + what);
    const auto name = read_parameter_name(
        reader, find(table, "parameter")->value, "'parameter' of " + what, draft);
    if (!scale || !name) {
        return std::nullopt;
    }
    return ParameterCoupling{*name, *scale};
}

std::optional<std::variant<std::uint64_t, std::string>> read_seed(Reader& reader,
                                                                  const Node& node,
                                                                  const std::string& what,
                                                                  Draft& draft) {
    if (std::holds_alternative<std::string>(node.value)) {
        auto name = read_parameter_name(reader, node, what, draft);
        if (!name) {
            return std::nullopt;
        }
        return std::move(*name);
    }
    const auto seed = reader.whole(node, what, 0, std::numeric_limits<std::int64_t>::max());
    if (!seed) {
        return std::nullopt;
    }
    return static_cast<std::uint64_t>(*seed);
}

std::optional<Coupling> read_uniform(
    Reader& reader, const Table& table, const Position& at, const std::string& what, Draft& draft) {
    reader.only_keys(table, what, {"uniform", "seed"});
    const std::string bounds = "'uniform' of " + what;
    const Node& node = find(table, "uniform")->value;
    const List* list = reader.list(node, bounds, "two numbers [low, high]");
    RandomCoupling random;
    bool complete = list != nullptr;
    if (list != nullptr && list->size() != 2) {
        reader.report(ErrorCode::bad_value,
                      node.at,
                      fmt::format("{} holds {}", bounds, counted(list->size(), "number")),
                      "expected two numbers [low, high]");
        complete = false;
    } else if (list != nullptr) {
        const auto low = reader.number(list->front(), "the lower end of " + bounds);
        const auto high = reader.number(list->back(), "the upper end of " + bounds);
        complete = low && high;
        random.low = low.value_or(0.0);
        random.high = high.value_or(0.0);
        if (complete && (random.low > random.high || !std::isfinite(random.high - random.low))) {
            reader.report(
                ErrorCode::bad_value,
                node.at,
                fmt::format(
                    "{} goes from {} to {}", bounds, real_text(random.low), real_text(random.high)),
                "expected [low, high] with low <= high and a finite difference");
            complete = false;
        }
    }
    const Entry* seed = reader.need(
        table, at, what, "seed", "random couplings need a seed: a number or a parameter");
    const auto value =
        seed == nullptr ? std::nullopt : read_seed(reader, seed->value, "'seed' of " + what, draft);
    if (!complete || !value) {
        return std::nullopt;
    }
    random.seed = *value;
    return random;
}

std::optional<Coupling> read_coupling(Reader& reader, const Node& node, Draft& draft) {
    const std::string what = name_in("coupling", owner);
    const std::string forms =
        "a number, { re, im }, a list of these, { parameter, factor } or { uniform, seed }";
    if (std::holds_alternative<List>(node.value)) {
        return read_numbers(reader, node, what);
    }
    const auto* table = std::get_if<Table>(&node.value);
    if (table != nullptr && find(*table, "parameter") != nullptr) {
        return read_scaled(reader, *table, what, draft);
    }
    if (table != nullptr && find(*table, "uniform") != nullptr) {
        return read_uniform(reader, *table, node.at, what, draft);
    }
    const bool number = std::holds_alternative<std::int64_t>(node.value) ||
                        std::holds_alternative<double>(node.value);
    if (!number && (table == nullptr || table->empty())) {
        reader.wrong_type(node, what, forms);
        return std::nullopt;
    }
    if (table != nullptr && find(*table, "re") == nullptr && find(*table, "im") == nullptr) {
        reader.only_keys(*table, what, {"re", "im", "parameter", "factor", "uniform", "seed"});
        reader.report(ErrorCode::missing_key,
                      node.at,
                      fmt::format("{} has no 're', 'parameter' or 'uniform'", what),
                      "expected " + forms);
        return std::nullopt;
    }
    const auto value = read_complex(reader, node, what);
    return value ? std::optional<Coupling>(std::vector{*value}) : std::nullopt;
}

}  // namespace

void read_term(Reader& reader, const Node& node, Draft& draft) {
    const std::size_t errors_before = reader.error_count();
    const Table* table = reader.table(node, owner, "a table");
    if (table == nullptr) {
        draft.terms_complete = false;
        return;
    }
    reader.only_keys(*table, owner, {"operators", "offsets", "sites", "coupling", "add_conjugate"});
    CaseTerm term;
    term.where = reader.place(node.at);
    const bool operators = read_operators(reader, *table, node.at, draft.result.two_s, term);
    const bool places = read_places(reader, *table, node.at, term);
    if (operators && places) {
        same_length(reader, node.at, term);
    }
    const Entry* coupling =
        reader.need(*table, node.at, owner, "coupling", "a term needs one, such as coupling = 1.0");
    if (coupling != nullptr) {
        if (auto value = read_coupling(reader, coupling->value, draft)) {
            term.coupling = std::move(*value);
        }
    }
    if (const Entry* add_conjugate = find(*table, "add_conjugate")) {
        term.add_conjugate =
            reader.flag(add_conjugate->value, name_in("add_conjugate", owner)).value_or(false);
    }
    if (reader.error_count() > errors_before) {
        draft.terms_complete = false;
        return;
    }
    draft.result.terms.push_back(std::move(term));
    draft.term_at.push_back(node.at);
    draft.coupling_at.push_back(coupling->value.at);
}

}  // namespace chainmark
