#include <algorithm>
#include <cmath>

#include <fmt/format.h>

#include "chainmark/base/words.hpp"
#include "chainmark/casefile/sections.hpp"

namespace chainmark {
namespace {

/// The finite sizes of the grid and whether it holds the infinite chain.
struct Sizes {
    std::vector<int> finite;
    bool infinite = false;

    int shortest() const { return *std::min_element(finite.begin(), finite.end()); }
};

Sizes sizes_of(const WrittenAxis* sites) {
    Sizes sizes;
    if (sites == nullptr) {
        return sizes;
    }
    for (const GridValue& value : sites->values) {
        if (std::isinf(value.value)) {
            sizes.infinite = true;
        } else {
            sizes.finite.push_back(static_cast<int>(value.value));
        }
    }
    return sizes;
}

std::string chain_text(int length) {
    return "a chain of " + counted(static_cast<std::size_t>(length), "site");
}

void check_where(Reader& reader, const QuantitySpec& spec, const Position& at, bool infinite) {
    if (infinite && spec.where == Where::finite) {
        reader.report(ErrorCode::bad_value,
                      at,
                      fmt::format("'{}' has no meaning at sites = \"infinite\"", spec.name),
                      spec.on_infinite.empty()
                          ? "take \"infinite\" out of sites, or the quantity out of this case"
                          : fmt::format("ask for '{}'", spec.on_infinite));
    } else if (!infinite && spec.where == Where::infinite) {
        reader.report(ErrorCode::bad_value,
                      at,
                      fmt::format("'{}' exists only for the infinite chain", spec.name),
                      "add \"infinite\" to sites");
    }
}

/// The names of what can be asked for with a temperature, or without one.
std::string names_at(When when) {
    std::vector<std::string> names;
    for (const QuantitySpec& spec : quantities()) {
        if (spec.when == when || spec.when == When::either) {
            names.push_back(spec.name);
        }
    }
    return join(names);
}

void check_when(Reader& reader, const QuantitySpec& spec, const Position& at, bool temperature) {
    if (temperature && spec.when == When::ground_state) {
        reader.report(
            ErrorCode::bad_value,
            at,
            fmt::format("'{}' belongs to the ground state, and the case has a temperature",
                        spec.name),
            "take [system] temperature out of this case; with one there are: " +
                names_at(When::thermal));
    } else if (!temperature && spec.when == When::thermal) {
        reader.report(ErrorCode::bad_value,
                      at,
                      fmt::format("'{}' needs a temperature, and the case has none", spec.name),
                      "add [system] temperature, such as temperature = [0.5, 1.0]; without one "
                      "there are: " +
                          names_at(When::ground_state));
    }
}

/// Sites and distances against the shortest chain.
void check_reach(Reader& reader, const Query& query, const Position& at, int shortest) {
    const Options& options = query.options;
    int farthest = options.block.empty() ? 0 : options.block.back();
    for (const int distance : options.distance) {
        farthest = std::max(farthest, distance);
    }
    for (const auto& [i, j] : options.pairs) {
        farthest = std::max({farthest, i, j});
    }
    const int block = static_cast<int>(options.block.size());
    if (block >= shortest) {
        reader.report(ErrorCode::bad_value,
                      at,
                      fmt::format("'{}' has a block of {} in {}",
                                  query.label,
                                  counted(options.block.size(), "site"),
                                  chain_text(shortest)),
                      shortest == 1 ? "a chain of one site has no proper block"
                                    : fmt::format("a block has 1 to {} sites", shortest - 1));
    } else if (farthest >= shortest) {
        reader.report(
            ErrorCode::bad_value,
            at,
            fmt::format("'{}' reaches to {} in {}", query.label, farthest, chain_text(shortest)),
            fmt::format("sites and distances go from 0 to {}", shortest - 1));
    }
}

void check_count(
    Reader& reader, const Query& query, const Position& at, int shortest, int site_dim) {
    const double levels = std::pow(site_dim, shortest);
    if (query.options.count > levels) {
        reader.report(ErrorCode::bad_value,
                      at,
                      fmt::format("'{}' asks for {} levels, but {} has {:.0f}",
                                  query.label,
                                  query.options.count,
                                  chain_text(shortest),
                                  levels),
                      "take fewer levels or a longer chain");
    }
}

/// A string runs upwards between two different sites, and its U is known for these spins.
void check_string(Reader& reader, const Query& query, const Position& at, int two_s) {
    if (query.spec->id != QuantityId::string_order) {
        return;
    }
    for (const int distance : query.options.distance) {
        if (distance == 0) {
            reader.report(ErrorCode::bad_value,
                          at,
                          fmt::format("'{}' has the distance 0", query.label),
                          "a string joins two different sites: take 1 or more");
        }
    }
    for (const auto& [i, j] : query.options.pairs) {
        if (i >= j) {
            reader.report(ErrorCode::bad_value,
                          at,
                          fmt::format("'{}' has the pair [{}, {}]", query.label, i, j),
                          "a string runs from the lower site to the higher: write [i, j] with i < "
                          "j");
        }
    }
    if (two_s % 2 == 1 && two_s > 1) {
        reader.report(ErrorCode::bad_value,
                      at,
                      fmt::format("'{}' is asked for at spin {}", query.label, spin_text(two_s)),
                      "string_order has a meaning for spin 1/2 and for integer spin");
    }
}

/// A label that no state of the chain can have.
struct WrongLabel {
    std::string found;
    std::string allowed;
};

std::optional<WrongLabel> wrong_sz(const Labels& sector, int length, int two_s) {
    if (!sector.sz) {
        return std::nullopt;
    }
    const int twice = static_cast<int>(2 * *sector.sz);
    const int largest = length * two_s;
    if (std::abs(twice) > largest || (twice - largest) % 2 != 0) {
        return WrongLabel{
            fmt::format("sz = {}", *sector.sz),
            fmt::format(
                "total Sz is {}, {}, ... {}", -largest / 2.0, -largest / 2.0 + 1, largest / 2.0)};
    }
    const int parity = (twice + largest) / 2 % 2 == 0 ? 1 : -1;
    if (sector.parity && *sector.parity != parity) {
        return WrongLabel{fmt::format("sz = {} with parity = {}", *sector.sz, *sector.parity),
                          fmt::format("there parity = (-1)^(sz + L S) = {}; leave it out", parity)};
    }
    return std::nullopt;
}

std::optional<WrongLabel> wrong_momentum(const Labels& sector, int length, const Case& c) {
    if (!sector.momentum) {
        return std::nullopt;
    }
    const int n = *sector.momentum;
    if (c.boundary == BoundaryKind::open) {
        return WrongLabel{"a momentum", "an open chain has none: leave it out"};
    }
    if (2 * n <= -length || 2 * n > length) {
        return WrongLabel{
            fmt::format("momentum = {}", n),
            fmt::format("n of k = 2 pi n/L goes from {} to {}", -((length - 1) / 2), length / 2)};
    }
    if (sector.reflection && c.twist == 0.0 && n != 0 && 2 * n != length) {
        return WrongLabel{fmt::format("momentum = {} with a reflection", n),
                          "reflection turns k into -k: both are known at k = 0 and pi alone"};
    }
    return std::nullopt;
}

std::optional<WrongLabel> wrong_label(const Labels& sector, int length, const Case& c) {
    if (sector.inversion && sector.sz.value_or(0.0) != 0.0) {
        return WrongLabel{fmt::format("sz = {} with an inversion", *sector.sz),
                          "inversion turns Sz into -Sz: both are known at sz = 0 alone"};
    }
    const auto wrong = wrong_sz(sector, length, c.two_s);
    return wrong ? wrong : wrong_momentum(sector, length, c);
}

void check_sector(
    Reader& reader, const Query& query, const Position& at, const Sizes& sizes, const Case& c) {
    if (!query.options.sector) {
        return;
    }
    if (sizes.infinite) {
        reader.report(ErrorCode::bad_value,
                      at,
                      fmt::format("'{}' has a sector, and sites holds \"infinite\"", query.label),
                      "sectors belong to finite chains: take \"infinite\" or the sector out");
        return;
    }
    for (const int length : sizes.finite) {
        if (const auto wrong = wrong_label(*query.options.sector, length, c)) {
            reader.report(ErrorCode::bad_value,
                          at,
                          fmt::format("the sector of '{}' has {} in {} of spin {}",
                                      query.label,
                                      wrong->found,
                                      chain_text(length),
                                      spin_text(c.two_s)),
                          wrong->allowed);
            return;
        }
    }
}

}  // namespace

void check_quantities(Reader& reader, const Draft& draft) {
    const Case& c = draft.result;
    const WrittenAxis* sites = find_axis(draft, "sites");
    const Sizes sizes = sizes_of(sites);
    for (std::size_t i = 0; i < c.quantities.size(); ++i) {
        const Query& query = c.quantities[i].query;
        const Position& extent = draft.extent_at[i];
        check_when(reader, *query.spec, draft.quantity_at[i], draft.has_temperature);
        check_string(reader, query, extent, c.two_s);
        if (sites != nullptr) {
            check_where(reader, *query.spec, draft.quantity_at[i], sizes.infinite);
            check_sector(reader, query, draft.sector_at[i], sizes, c);
        }
        if (!sizes.finite.empty()) {
            check_reach(reader, query, extent, sizes.shortest());
            check_count(reader, query, extent, sizes.shortest(), c.two_s + 1);
        }
    }
}

}  // namespace chainmark
