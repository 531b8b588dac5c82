#include "chainmark/plan/build.hpp"

#include <algorithm>
#include <cmath>
#include <random>

#include <fmt/format.h>

#include "chainmark/base/numerics.hpp"

namespace chainmark {
namespace {

constexpr std::size_t most_points = 100000;
constexpr double largest_size = 1e100;  ///< of a coupling or field; squares stay within doubles

Chain chain_at(const Case& c, const Parameters& point) {
    const double sites = parameter(point, "sites");
    Chain chain{.sites = {}, .boundary = c.boundary, .twist = c.twist, .two_s = c.two_s};
    if (sites != infinite_sites) {
        chain.sites = static_cast<int>(sites);
    }
    return chain;
}

int cell_of(const Case& c) {
    return c.family == nullptr ? 1 : c.family->cell;
}

/// One draw a placement in ascending order: low + (high - low) u, u in [0, 1) with 53 bits, the
/// same on every machine.
std::vector<std::complex<double>> draws(const RandomCoupling& random,
                                        std::uint64_t seed,
                                        int count) {
    std::mt19937_64 generator(seed);
    std::vector<std::complex<double>> couplings;
    for (int i = 0; i < count; ++i) {
        const double u = static_cast<double>(generator() >> 11) * 0x1p-53;
        couplings.emplace_back(random.low + (random.high - random.low) * u);
    }
    return couplings;
}

std::uint64_t seed_at(const RandomCoupling& random, const Parameters& point) {
    if (const auto* name = std::get_if<std::string>(&random.seed)) {
        return static_cast<std::uint64_t>(parameter(point, *name));
    }
    return std::get<std::uint64_t>(random.seed);
}

Error at_term(const CaseTerm& term, std::string found, std::string allowed) {
    return {ErrorCode::bad_chain, term.where, std::move(found), std::move(allowed)};
}

/// A written term with its numbers filled in.
Result<PlacedTerm> placed_term(const CaseTerm& term,
                               const Chain& chain,
                               int cell,
                               const Parameters& point) {
    PlacedTerm placed{.factors = term.factors,
                      .offsets = term.offsets,
                      .coupling = {},
                      .fixed = term.fixed,
                      .add_conjugate = term.add_conjugate,
                      .where = term.where};
    const int count = placement_count(placed, chain, cell);
    if (const auto* numbers = std::get_if<std::vector<std::complex<double>>>(&term.coupling)) {
        if (numbers->size() != 1 && numbers->size() != static_cast<std::size_t>(count)) {
            return tl::unexpected(at_term(
                term,
                fmt::format("{} couplings are given for {} placements", numbers->size(), count),
                fmt::format("give one number, or {} on the {}", count, to_string(chain))));
        }
        placed.coupling = *numbers;
    } else if (const auto* named = std::get_if<ParameterCoupling>(&term.coupling)) {
        placed.coupling = {parameter(point, named->parameter) * named->factor};
    } else {
        const auto& random = std::get<RandomCoupling>(term.coupling);
        placed.coupling = draws(random, seed_at(random, point), std::max(count, 1));
    }
    return placed;
}

/// A string whose coefficient is so large or small that squares of it leave the range of doubles.
std::string extreme_coefficient(const TermList& list) {
    for (const Term& term : list.terms) {
        const double size = std::abs(term.coefficient);
        if (!(size <= largest_size && size >= 1 / largest_size)) {
            return fmt::format("{} has a coefficient of size {}", to_string(term.string), size);
        }
    }
    return std::abs(list.constant) <= largest_size ? "" : "the constant is too large";
}

/// Walks the axes like an odometer, the last one fastest.
std::vector<Parameters> product(const Case& c) {
    std::vector<Parameters> points = {{}};
    for (const GridAxis& axis : c.axes) {
        std::vector<Parameters> longer;
        longer.reserve(points.size() * axis.values.size());
        for (const Parameters& point : points) {
            for (const double value : axis.values) {
                longer.push_back(point);
                longer.back().emplace_back(axis.name, value);
            }
        }
        points = std::move(longer);
    }
    return points;
}

std::vector<Parameters> zipped(const Case& c, std::size_t length) {
    std::vector<Parameters> points(length);
    for (const GridAxis& axis : c.axes) {
        for (std::size_t i = 0; i < length; ++i) {
            points[i].emplace_back(axis.name, axis.values[axis.values.size() == 1 ? 0 : i]);
        }
    }
    return points;
}

Error too_many(const Case& c, double count) {
    const GridAxis& longest =
        *std::max_element(c.axes.begin(), c.axes.end(), [](const GridAxis& a, const GridAxis& b) {
            return a.values.size() < b.values.size();
        });
    return {ErrorCode::grid_too_large,
            longest.where,
            fmt::format("the grid has {:.0f} points, more than {}", count, most_points),
            fmt::format(
                "shorten a list ('{}' has {} values), walk lists together with [grid] combine = "
                "\"zip\", or fix a parameter with --set {}=VALUE",
                longest.name,
                longest.values.size(),
                longest.name)};
}

}  // namespace

double parameter(const Parameters& point, const std::string& name) {
    const auto at = std::find_if(
        point.begin(), point.end(), [&](const auto& entry) { return entry.first == name; });
    CHAINMARK_EXPECTS(at != point.end());
    return at->second;
}

std::string to_string(const Parameters& point) {
    std::string text;
    for (const auto& [name, value] : point) {
        text += text.empty() ? "" : ", ";
        text += value == infinite_sites ? fmt::format("{} = infinite", name)
                                        : fmt::format("{} = {}", name, value);
    }
    return text;
}

Result<std::vector<Parameters>> grid_points(const Case& c) {
    double count = 1.0;
    std::size_t longest = 1;
    for (const GridAxis& axis : c.axes) {
        count *= static_cast<double>(axis.values.size());
        longest = std::max(longest, axis.values.size());
    }
    if (!c.zip) {
        if (count > static_cast<double>(most_points)) {
            return tl::unexpected(too_many(c, count));
        }
        return product(c);
    }
    for (const GridAxis& axis : c.axes) {
        if (axis.values.size() != 1 && axis.values.size() != longest) {
            return tl::unexpected(
                Error{ErrorCode::bad_value,
                      axis.where,
                      fmt::format("'{}' has {} values, but another list has {}",
                                  axis.name,
                                  axis.values.size(),
                                  longest),
                      "lists that are walked together (combine = \"zip\") must be equally long"});
        }
    }
    if (longest > most_points) {
        return tl::unexpected(too_many(c, static_cast<double>(longest)));
    }
    return zipped(c, longest);
}

ProblemBuilder::ProblemBuilder(const Case& c) : case_(c) {
    for (const CaseTerm& term : c.terms) {
        const auto* named = std::get_if<ParameterCoupling>(&term.coupling);
        field_in_terms_ = field_in_terms_ || (named != nullptr && named->parameter == "h");
    }
}

bool ProblemBuilder::has_infinite_chain() const {
    return std::all_of(case_.terms.begin(), case_.terms.end(), [](const CaseTerm& term) {
        const auto* numbers = std::get_if<std::vector<std::complex<double>>>(&term.coupling);
        return !term.fixed && !std::holds_alternative<RandomCoupling>(term.coupling) &&
               (numbers == nullptr || numbers->size() == 1);
    });
}

Error ProblemBuilder::placed(Error error, const Parameters& point) const {
    if (error.where.line == 0 && error.where.source.empty()) {
        error.where = error.code == ErrorCode::not_hermitian && !case_.terms.empty()
                          ? case_.terms.front().where
                          : case_.axis("sites").where;
    }
    error.found += fmt::format(" (at {})", to_string(point));
    return error;
}

Result<TermList> ProblemBuilder::build_list(const Parameters& point) const {
    const Chain chain = chain_at(case_, point);
    const int cell = cell_of(case_);
    std::vector<PlacedTerm> terms;
    if (case_.family != nullptr) {
        std::vector<double> values;
        for (const FamilyParameter& p : case_.family->parameters) {
            values.push_back(parameter(point, p.name));
        }
        Result<std::vector<PlacedTerm>> written = family_terms(*case_.family, values, chain);
        if (!written) {
            return tl::unexpected(written.error());
        }
        terms = std::move(*written);
    }
    for (const CaseTerm& term : case_.terms) {
        Result<PlacedTerm> placed = placed_term(term, chain, cell, point);
        if (!placed) {
            return tl::unexpected(placed.error());
        }
        terms.push_back(std::move(*placed));
    }
    return build_terms(chain, terms, case_.coincident, cell);
}

Result<ProblemBuilder::Shared> ProblemBuilder::terms_at(const Parameters& point) {
    std::vector<double> key;
    for (const auto& [name, value] : point) {
        if (name != "temperature" && (name != "h" || field_in_terms_)) {
            key.push_back(value);
        }
    }
    const auto at = shared_.find(key);
    if (at != shared_.end()) {
        return at->second;
    }
    Result<TermList> list = build_list(point);
    if (!list) {
        return tl::unexpected(placed(list.error(), point));
    }
    const Chain chain = chain_at(case_, point);
    const bool plain_twist = chain.twist == 0.0 || chain.twist == pi;
    if (!plain_twist && !conserves_sz(*list)) {
        return tl::unexpected(
            placed({ErrorCode::bad_chain,
                    case_.system_place,
                    fmt::format("a twist of {} needs a Hamiltonian that conserves Sz", chain.twist),
                    "use \"periodic\" or \"antiperiodic\" here"},
                   point));
    }
    if (const std::string extreme = extreme_coefficient(*list); !extreme.empty()) {
        return tl::unexpected(placed({ErrorCode::bad_value,
                                      case_.system_place,
                                      extreme,
                                      "couplings between 1e-100 and 1e100 in size, or 0"},
                                     point));
    }
    SplitField split = split_uniform_field(*list, chain);
    const Shared shared{std::make_shared<const TermList>(std::move(split.rest)), split.field};
    return shared_.emplace(key, shared).first->second;
}

Result<Problem> ProblemBuilder::build_without_field(const Parameters& point) {
    const Result<Shared> shared = terms_at(point);
    if (!shared) {
        return tl::unexpected(shared.error());
    }
    return Problem{chain_at(case_, point), shared->terms, shared->field};
}

Result<Problem> ProblemBuilder::build(const Parameters& point) {
    Result<Problem> problem = build_without_field(point);
    if (problem && case_.has_temperature()) {
        problem->temperature = parameter(point, "temperature");
    }
    if (problem && case_.family != nullptr) {
        const double h = parameter(point, "h");
        if (h != 0.0 && !(std::abs(h) <= largest_size && std::abs(h) >= 1 / largest_size)) {
            return tl::unexpected(placed({ErrorCode::bad_value,
                                          case_.axis("h").where,
                                          fmt::format("the field h = {} is out of range", h),
                                          "fields between 1e-100 and 1e100 in size, or 0"},
                                         point));
        }
        problem->field += h;
    }
    return problem;
}

Result<Problem> build_problem(const Case& c, const Parameters& point) {
    return ProblemBuilder(c).build(point);
}

}  // namespace chainmark
