#include <algorithm>
#include <cmath>
#include <map>

#include <fmt/format.h>

#include "chainmark/base/words.hpp"
#include "chainmark/casefile/sections.hpp"

namespace chainmark {
namespace {

bool is_infinite(const GridValue& value) {
    return std::isinf(value.value);
}

std::string value_text(double value) {
    return std::isinf(value) ? "\"infinite\"" : fmt::format("{}", value);
}

void check_ring(Reader& reader, const Draft& draft, const GridValue& sites) {
    constexpr int shortest = 3;
    const Case& result = draft.result;
    if (result.boundary != BoundaryKind::ring || is_infinite(sites)) {
        return;
    }
    if (sites.value < shortest) {
        reader.report(ErrorCode::bad_chain,
                      sites.at,
                      "a ring of " + counted(static_cast<std::size_t>(sites.value), "site"),
                      "a ring needs at least 3 sites: write one or two as a chain with boundary = "
                      "\"open\"");
    } else if (result.family != nullptr && result.coincident == Coincident::refuse &&
               sites.value < result.family->smallest_ring) {
        reader.report(ErrorCode::bad_chain,
                      sites.at,
                      fmt::format("on a ring of {} sites bonds of the family '{}' coincide",
                                  sites.value,
                                  result.family->name),
                      fmt::format("take at least {} sites, or say [system] coincident = \"add\" "
                                  "(both count) or \"once\" (each set of sites counts once)",
                                  result.family->smallest_ring));
    }
}

/// Reports the first size at which the family does not exist: the others have the same reason.
void check_family(Reader& reader, const Draft& draft, const WrittenAxis& sites) {
    const Case& result = draft.result;
    for (const GridValue& value : sites.values) {
        if (result.family == nullptr || (!is_infinite(value) && value.value < 1)) {
            continue;
        }
        Chain chain{
            .sites = {}, .boundary = result.boundary, .twist = result.twist, .two_s = result.two_s};
        if (!is_infinite(value)) {
            chain.sites = static_cast<int>(value.value);
        }
        if (const auto obstacle = family_obstacle(*result.family, chain)) {
            reader.report(obstacle->code, value.at, obstacle->found, obstacle->allowed);
            return;
        }
    }
}

/// In a product a value that occurs twice gives the same points twice.
void check_repeats(Reader& reader, const WrittenAxis& axis) {
    std::map<double, int> seen;
    for (const GridValue& value : axis.values) {
        if (++seen[value.value] == 2) {
            reader.report(
                ErrorCode::bad_value,
                value.at,
                fmt::format("'{}' has the value {} twice", axis.name, value_text(value.value)),
                "write every value once");
        }
    }
}

/// In zipped lists only a whole point must not occur twice.
void check_zipped_repeats(Reader& reader, const Draft& draft) {
    std::size_t length = 1;
    for (const WrittenAxis& axis : draft.axes) {
        length = std::max(length, axis.values.size());
    }
    std::map<std::vector<double>, int> seen;
    for (std::size_t i = 0; i < length; ++i) {
        std::vector<double> point;
        for (const WrittenAxis& axis : draft.axes) {
            if (axis.values.size() == length) {
                point.push_back(axis.values[i].value);
            } else if (axis.values.size() > 1) {
                return;  // lists of different length: the grid is refused as a whole
            }
        }
        if (++seen[point] == 2) {
            const auto longest =
                std::find_if(draft.axes.begin(), draft.axes.end(), [&](const WrittenAxis& axis) {
                    return axis.values.size() == length;
                });
            reader.report(
                ErrorCode::bad_value,
                longest->values[i].at,
                fmt::format("the point of number {} in the zipped lists occurs twice", i + 1),
                "write every point once");
        }
    }
}

/// The list of couplings per placement fits one number of placements.
void check_list(Reader& reader,
                const CaseTerm& term,
                const Position& at,
                const Draft& draft,
                const WrittenAxis& sites) {
    const auto* numbers = std::get_if<std::vector<std::complex<double>>>(&term.coupling);
    if (numbers == nullptr || numbers->size() == 1) {
        return;
    }
    const PlacedTerm placed = {
        .factors = term.factors, .offsets = term.offsets, .coupling = {}, .fixed = term.fixed};
    for (const GridValue& value : sites.values) {
        if (is_infinite(value)) {
            continue;
        }
        const Chain chain = {.sites = static_cast<int>(value.value),
                             .boundary = draft.result.boundary,
                             .two_s = draft.result.two_s};
        const int count = placement_count(placed, chain, 1);
        if (numbers->size() != static_cast<std::size_t>(count)) {
            reader.report(ErrorCode::bad_value,
                          at,
                          fmt::format("'coupling' lists {}, but the term has {} on the {}",
                                      counted(numbers->size(), "number"),
                                      counted(static_cast<std::size_t>(count), "placement"),
                                      to_string(chain)),
                          "give one number for all placements, or one per placement");
            return;
        }
    }
}

/// What has no meaning where every site is like every other.
void check_infinite_term(Reader& reader, const CaseTerm& term, const Position& at) {
    const auto* numbers = std::get_if<std::vector<std::complex<double>>>(&term.coupling);
    const char* reason =
        term.fixed                                              ? "fixed 'sites'"
        : std::holds_alternative<RandomCoupling>(term.coupling) ? "random couplings"
        : numbers != nullptr && numbers->size() > 1 ? "a list of couplings per placement"
                                                    : nullptr;
    if (reason != nullptr) {
        reader.report(ErrorCode::bad_value,
                      at,
                      fmt::format("a term with {} cannot stand on the infinite chain", reason),
                      "use offsets and one coupling, or take \"infinite\" out of sites");
    }
}

void check_seed(Reader& reader, const CaseTerm& term, const Draft& draft) {
    const auto* random = std::get_if<RandomCoupling>(&term.coupling);
    const auto* name = random == nullptr ? nullptr : std::get_if<std::string>(&random->seed);
    const WrittenAxis* axis = name == nullptr ? nullptr : find_axis(draft, *name);
    if (axis == nullptr) {
        return;
    }
    constexpr double largest = 9007199254740992.0;  // 2^53: whole numbers below are exact doubles
    for (const GridValue& value : axis->values) {
        if (value.value < 0.0 || value.value >= largest || std::trunc(value.value) != value.value) {
            reader.report(
                ErrorCode::bad_value,
                value.at,
                fmt::format("the seed '{}' has the value {}", *name, real_text(value.value)),
                "a seed is a whole number from 0 to 2^53 - 1");
            return;
        }
    }
}

void check_terms(Reader& reader, const Draft& draft, const WrittenAxis* sites, bool infinite) {
    for (std::size_t i = 0; i < draft.result.terms.size(); ++i) {
        const CaseTerm& term = draft.result.terms[i];
        check_seed(reader, term, draft);
        if (infinite) {
            check_infinite_term(reader, term, draft.term_at[i]);
        }
        if (sites != nullptr) {
            check_list(reader, term, draft.coupling_at[i], draft, *sites);
        }
    }
}

void check_labels(Reader& reader, const Draft& draft) {
    std::map<std::string, int> seen;
    for (std::size_t i = 0; i < draft.result.quantities.size(); ++i) {
        const std::string& label = draft.result.quantities[i].query.label;
        if (++seen[label] > 1) {
            reader.report(ErrorCode::bad_value,
                          draft.quantity_at[i],
                          fmt::format("the label '{}' occurs twice", shown(label)),
                          "add label = \"...\" so that every quantity has its own");
        }
        if (find_axis(draft, label) != nullptr) {
            reader.report(ErrorCode::bad_value,
                          draft.quantity_at[i],
                          fmt::format("'{}' labels a quantity and names a parameter", shown(label)),
                          "take another label");
        }
    }
}

}  // namespace

const WrittenAxis* find_axis(const Draft& draft, const std::string& name) {
    const auto at = std::find_if(draft.axes.begin(),
                                 draft.axes.end(),
                                 [&](const WrittenAxis& axis) { return axis.name == name; });
    return at == draft.axes.end() ? nullptr : &*at;
}

void check_case(Reader& reader, const Draft& draft) {
    const WrittenAxis* sites = find_axis(draft, "sites");
    const bool infinite =
        sites != nullptr && std::any_of(sites->values.begin(), sites->values.end(), is_infinite);
    if (sites != nullptr) {
        for (const GridValue& value : sites->values) {
            check_ring(reader, draft, value);
        }
        check_family(reader, draft, *sites);
    }
    check_quantities(reader, draft);
    check_terms(reader, draft, sites, infinite);
    check_labels(reader, draft);
    if (draft.result.zip) {
        check_zipped_repeats(reader, draft);
        return;
    }
    for (const WrittenAxis& axis : draft.axes) {
        check_repeats(reader, axis);
    }
}

}  // namespace chainmark
