#include "chainmark/fermion/finite_reach.hpp"

#include <algorithm>
#include <cmath>

#include <fmt/format.h>

#include "chainmark/fermion/entropy.hpp"

namespace chainmark::fermion {
namespace {

constexpr int longest_string = 2000;     ///< sites: determinants of this size
constexpr int largest_any_factor = 300;  ///< structure factors with Sx or Sy where sites differ
constexpr int largest_factor = 2000;
constexpr int largest_zz_factor = 20000;  ///< L^2 terms

bool homogeneous(const QuadraticForm& form) {
    return form.kind == FormKind::uniform_ring;
}

/// Sites between the ends of the longest string, either way round.
int string_sites(int i, int j, int length) {
    const int r = std::abs(j - i) % length;
    return std::min(r, length - r);
}

int longest_of(const Options& options, int length) {
    int longest = 0;
    for (const int r : options.distance) {
        longest = std::max(longest, string_sites(0, r, length));
    }
    for (const auto& [i, j] : options.pairs) {
        longest = std::max(longest, string_sites(i, j, length));
    }
    return longest;
}

bool has_strings(const Query& query) {
    return query.spec->id == QuantityId::string_order ? query.options.axis != Axis::z
                                                      : query.options.axes != Axes::zz;
}

std::string pair_refusal(const Query& query, const QuadraticForm& form) {
    const int length = form.length();
    const Options& options = query.options;
    const auto outside = [&](int site) { return site < 0 || site >= length; };
    for (const int r : options.distance) {
        if (outside(r)) {
            return fmt::format("distance {} does not fit: 0 ... {} do", r, length - 1);
        }
    }
    for (const auto& [i, j] : options.pairs) {
        if (outside(i) || outside(j)) {
            return fmt::format("pair [{}, {}] does not fit: sites are 0 ... {}", i, j, length - 1);
        }
    }
    if (longest_of(options, length) > longest_string) {
        return fmt::format("strings over more than {} sites are not covered", longest_string);
    }
    const bool turns = query.spec->id == QuantityId::string_order && options.axis != Axis::z &&
                       form.chain.is_ring() && form.chain.wrap_phase().imag() != 0.0 &&
                       !homogeneous(form) && !options.distance.empty();
    return turns ? "strings of Sx or Sy through the wrap bond of a twisted ring whose sites differ "
                   "are not covered"
                 : "";
}

std::string factor_refusal(const Query& query, const QuadraticForm& form) {
    const int most = !has_strings(query) ? largest_zz_factor
                     : homogeneous(form) ? largest_factor
                                         : largest_any_factor;
    return form.length() <= most ? ""
                                 : fmt::format("structure factors need at most {} sites", most);
}

std::string entropy_refusal(const Query& query, const QuadraticForm& form) {
    if (query.options.sector) {
        return "entropies of a sector's lowest state are not covered by this route";
    }
    const auto sites = entropy_sites(query.options.block, form.length());
    if (!sites) {
        return "the sites of the block, or all others, must be consecutive: the spins of separate "
               "intervals are not the fermions of these sites";
    }
    const int span =
        homogeneous(form) ? static_cast<int>(sites->size()) : sites->back() - sites->front() + 1;
    return span <= longest_string ? ""
                                  : fmt::format("entropies need at most {} sites", longest_string);
}

}  // namespace

std::string average_refusal(const Query& query, const QuadraticForm& form) {
    switch (query.spec->id) {
        case QuantityId::spin_correlation:
        case QuantityId::string_order:
            return pair_refusal(query, form);
        case QuantityId::structure_factor:
            return factor_refusal(query, form);
        case QuantityId::entanglement_entropy:
            return entropy_refusal(query, form);
        default:
            return "";
    }
}

AverageCost average_cost(const Query& query, const QuadraticForm& form, bool thermal) {
    constexpr double seconds_per_string = 2e-6;
    constexpr double seconds_per_cubed_site = 2e-10;
    constexpr double bytes_per_squared_site = 64;
    const double sites = form.length();
    const double copies = homogeneous(form) ? 1.0 : sites;
    const double projected = thermal && form.parity_matters() ? sites : 0.0;
    double strings = 0.0;
    double cubes = 0.0;
    double width = 0.0;
    const auto add = [&](double count, double length) {
        width = std::max({width, length, projected});
        strings += count;
        cubes += count * (std::pow(length, 3) + std::pow(projected, 3));
    };
    switch (query.spec->id) {
        case QuantityId::spin_correlation:
        case QuantityId::string_order: {
            const double length =
                has_strings(query) ? longest_of(query.options, form.length()) : 1.0;
            add(copies * static_cast<double>(query.options.distance.size()) +
                    static_cast<double>(query.options.pairs.size()),
                length);
            break;
        }
        case QuantityId::structure_factor:
            add(copies * sites, has_strings(query) ? sites / 3 : 1.0);
            strings += sites * sites / 100;
            break;
        case QuantityId::entanglement_entropy:
            add(1.0, 3 * std::min(static_cast<double>(query.options.block.size()), sites / 2));
            break;
        default:
            return {};
    }
    const bool complex_circle = thermal && form.parity_matters();
    const double stored = homogeneous(form) ? width : sites;
    return {strings * seconds_per_string + cubes * seconds_per_cubed_site,
            bytes_per_squared_site * stored * stored * (complex_circle ? 20.0 : 1.0)};
}

}  // namespace chainmark::fermion
