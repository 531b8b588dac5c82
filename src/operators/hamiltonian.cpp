#include "chainmark/operators/hamiltonian.hpp"

#include <algorithm>
#include <array>
#include <cmath>
#include <numbers>
#include <set>

#include <fmt/format.h>

namespace chainmark {
namespace {

using Values = std::span<const double>;

constexpr double most_strings = 5e7;  ///< to add up: minutes, and some gigabytes

PlacedTerm bond(SiteMatrix a, SiteMatrix b, double coupling, int distance = 1) {
    return {
        .factors = {std::move(a), std::move(b)}, .offsets = {0, distance}, .coupling = {coupling}};
}

std::vector<PlacedTerm> exchange(
    const Chain& chain, double x, double y, double z, int distance = 1) {
    const int two_s = chain.two_s;
    return {bond(SiteMatrix::sx(two_s), SiteMatrix::sx(two_s), x, distance),
            bond(SiteMatrix::sy(two_s), SiteMatrix::sy(two_s), y, distance),
            bond(SiteMatrix::sz(two_s), SiteMatrix::sz(two_s), z, distance)};
}

std::vector<PlacedTerm> xx_terms(Values v, const Chain& chain) {
    return exchange(chain, v[0], v[0], 0.0);
}

std::vector<PlacedTerm> xy_terms(Values v, const Chain& chain) {
    return exchange(chain, v[0] * (1 + v[1]), v[0] * (1 - v[1]), 0.0);
}

std::vector<PlacedTerm> tfim_terms(Values v, const Chain& chain) {
    return exchange(chain, v[0], 0.0, 0.0);
}

std::vector<PlacedTerm> xxz_terms(Values v, const Chain& chain) {
    return exchange(chain, v[0], v[0], v[0] * v[1]);
}

std::vector<PlacedTerm> heisenberg_terms(Values v, const Chain& chain) {
    return exchange(chain, v[0], v[0], v[0]);
}

std::vector<PlacedTerm> j1j2_terms(Values v, const Chain& chain) {
    std::vector<PlacedTerm> terms = exchange(chain, v[0], v[0], v[0]);
    for (PlacedTerm& term : exchange(chain, v[1], v[1], v[1], 2)) {
        terms.push_back(std::move(term));
    }
    return terms;
}

std::vector<PlacedTerm> dimer_terms(Values v, const Chain& chain) {
    std::vector<PlacedTerm> terms = exchange(chain, 1.0, 1.0, 0.0);
    for (PlacedTerm& term : terms) {
        const std::complex<double> scale = term.coupling.front();
        const int bonds = placement_count(term, chain, 2);
        term.coupling.clear();
        for (int j = 0; j < bonds; ++j) {
            term.coupling.push_back(scale * v[0] * (j % 2 == 0 ? 1 + v[1] : 1 - v[1]));
        }
    }
    return terms;
}

/// (S.S)^2 = sum_ab (Sa Sb) (x) (Sa Sb), since spins of different sites commute.
std::vector<PlacedTerm> squared_exchange(const Chain& chain, double coupling) {
    const std::array<SiteMatrix, 3> spin = {
        SiteMatrix::sx(chain.two_s), SiteMatrix::sy(chain.two_s), SiteMatrix::sz(chain.two_s)};
    std::vector<PlacedTerm> terms;
    for (const SiteMatrix& a : spin) {
        for (const SiteMatrix& b : spin) {
            terms.push_back(bond(a * b, a * b, coupling));
        }
    }
    return terms;
}

std::vector<PlacedTerm> blbq_terms(Values v, const Chain& chain) {
    const double bilinear = v[0] * std::cos(v[1]);
    std::vector<PlacedTerm> terms = exchange(chain, bilinear, bilinear, bilinear);
    for (PlacedTerm& term : squared_exchange(chain, v[0] * std::sin(v[1]))) {
        terms.push_back(std::move(term));
    }
    return terms;
}

/// J / d^2 for sites `distance` bonds apart, d the chord of a ring of circumference L.
double inverse_square_coupling(double coupling, int distance, int length) {
    constexpr long double wide_pi = std::numbers::pi_v<long double>;
    const long double chord = length / wide_pi * std::sin(wide_pi * distance / length);
    return static_cast<double>(coupling / (chord * chord));
}

std::vector<PlacedTerm> inverse_square_terms(Values v, const Chain& chain) {
    CHAINMARK_EXPECTS(!chain.is_infinite() && chain.is_ring());
    const int length = chain.length();
    std::vector<PlacedTerm> terms;
    for (int distance = 1; 2 * distance <= length; ++distance) {
        const double coupling = inverse_square_coupling(v[0], distance, length);
        for (const PlacedTerm& term : exchange(chain, coupling, coupling, coupling, distance)) {
            if (2 * distance < length) {
                terms.push_back(term);
                continue;
            }
            // Each of these pairs would be met from both ends.
            for (int first = 0; first < distance; ++first) {
                terms.push_back(term);
                terms.back().offsets = {first, first + distance};
                terms.back().fixed = true;
            }
        }
    }
    return terms;
}

const FamilyParameter coupling_j = {"J", "coupling"};

const std::array<Family, 9> family_table = {{
    {.name = "xx",
     .formula = "sum_j J (Sx_j Sx_j+1 + Sy_j Sy_j+1) - h sum_j Sz_j",
     .remark = "free fermions with the dispersion J cos k - h; saturated for |h| > |J|",
     .parameters = {coupling_j},
     .terms = xx_terms},
    {.name = "xy",
     .formula = "sum_j J [(1+gamma) Sx_j Sx_j+1 + (1-gamma) Sy_j Sy_j+1] - h sum_j Sz_j",
     .remark = "conserves only the parity of the up count; critical at |h| = |J|",
     .parameters = {coupling_j, {"gamma", "anisotropy"}},
     .terms = xy_terms},
    {.name = "tfim",
     .formula = "sum_j J Sx_j Sx_j+1 - h sum_j Sz_j",
     .remark = "the Ising chain in a transverse field; critical at |h| = |J|/2 in these units",
     .parameters = {coupling_j},
     .terms = tfim_terms},
    {.name = "xxz",
     .formula = "sum_j J (Sx_j Sx_j+1 + Sy_j Sy_j+1 + Delta Sz_j Sz_j+1) - h sum_j Sz_j",
     .remark = "critical for -1 < Delta <= 1 at h = 0 and J > 0",
     .parameters = {coupling_j, {"Delta", "anisotropy"}},
     .terms = xxz_terms},
    {.name = "heisenberg",
     .formula = "sum_j J S_j.S_j+1 - h sum_j Sz_j",
     .remark = "antiferromagnet for J > 0",
     .parameters = {coupling_j},
     .terms = heisenberg_terms},
    {.name = "dimer_xx",
     .formula = "sum_j J [1 + (-1)^j delta] (Sx_j Sx_j+1 + Sy_j Sy_j+1) - h sum_j Sz_j",
     .remark = "on an odd ring the bonds L-1 and 0 are both strong, so there is no translation",
     .parameters = {coupling_j, {"delta", "dimerization"}},
     .terms = dimer_terms,
     .cell = 2},
    {.name = "j1j2",
     .formula = "sum_j J S_j.S_j+1 + J2 S_j.S_j+2 - h sum_j Sz_j",
     .remark = "J2 = J/2 is the Majumdar-Ghosh point; a ring needs five sites",
     .parameters = {coupling_j, {"J2", "next-neighbour coupling"}},
     .terms = j1j2_terms,
     .smallest_ring = 5},
    {.name = "blbq",
     .formula = "sum_j J [cos(theta) S_j.S_j+1 + sin(theta) (S_j.S_j+1)^2] - h sum_j Sz_j",
     .remark = "spin 1; bilinear and biquadratic, tan(theta) = 1/3 with J cos(theta) > 0 is the "
               "AKLT point",
     .parameters = {coupling_j, {"theta", "angle in radians"}},
     .terms = blbq_terms,
     .two_s = 2},
    {.name = "inverse_square",
     .formula = "sum_{i<j} J S_i.S_j / d_ij^2 - h sum_j Sz_j, d_ij = (L/pi) sin(pi (j-i)/L)",
     .remark = "every pair of a periodic ring once, d is the chord; solved by Haldane and Shastry "
               "for spin 1/2 and J > 0",
     .parameters = {coupling_j},
     .terms = inverse_square_terms,
     .periodic_only = true,
     .most_sites = 1000},
}};

int range_of(const PlacedTerm& term) {
    return *std::max_element(term.offsets.begin(), term.offsets.end());
}

std::string sites_text(const std::set<int>& sites) {
    return fmt::format("{{{}}}", fmt::join(sites, ", "));
}

Error short_chain(const PlacedTerm& term, const Chain& chain) {
    if (term.fixed) {
        return {ErrorCode::bad_chain,
                term.where,
                fmt::format("there is no site {} on the {}", range_of(term), to_string(chain)),
                fmt::format("sites are 0 ... {}", chain.length() - 1)};
    }
    const int needed = range_of(term) + 1;
    return {ErrorCode::bad_chain,
            term.where,
            fmt::format("a term reaches over {} sites, more than the {}", needed, to_string(chain)),
            fmt::format("at least {} sites are needed", needed)};
}

Error coinciding(const std::set<int>& sites, const PlacedTerm& term, const Chain& chain) {
    return {ErrorCode::bad_chain,
            term.where,
            fmt::format("on the {} two placements of the same term meet on the sites {}",
                        to_string(chain),
                        sites_text(sites)),
            "authors disagree on what that means: take a longer ring, or say [system] coincident = "
            "\"add\" (both count) or \"once\" (each set of sites counts once)"};
}

/// The sites of the placement that starts at `first`, those past the end of a ring brought back.
std::set<int> sites_of(const PlacedTerm& term, int first, const Chain& chain) {
    std::set<int> sites;
    for (const int offset : term.offsets) {
        const int site = first + offset;
        sites.insert(chain.is_infinite() ? site : site % chain.length());
    }
    return sites;
}

Error too_many_strings(const PlacedTerm& term, const Chain& chain) {
    return {ErrorCode::bad_chain,
            term.where,
            fmt::format("the terms on the {} hold more than {:.0e} operator strings",
                        to_string(chain),
                        most_strings),
            "take a shorter chain, a smaller spin or fewer terms"};
}

/// How many placements there are before one meets the sites of another: on a ring the smallest
/// shift that brings the set of offsets back to itself, elsewhere all of them.
int distinct_placements(const PlacedTerm& term, const Chain& chain, int count) {
    if (term.fixed || chain.is_infinite() || !chain.is_ring()) {
        return count;
    }
    const std::set<int> sites = sites_of(term, 0, chain);
    int smallest = count;
    for (const int site : sites) {
        const int shift = site - *sites.begin();
        if (shift > 0 && shift < smallest && sites_of(term, shift, chain) == sites) {
            smallest = shift;
        }
    }
    return smallest;
}

/// The term as it stands at first site 0, its conjugate with it.
struct WrittenOut {
    Expansion direct;
    Expansion conjugated;  ///< empty without add_conjugate
};

WrittenOut written_out(const PlacedTerm& term, const Chain& chain) {
    std::vector<PlacedMatrix> product;
    for (std::size_t i = 0; i < term.factors.size(); ++i) {
        product.push_back({term.offsets[i], term.factors[i]});
    }
    WrittenOut result{.direct = expand(product, chain.two_s), .conjugated = {}};
    if (term.add_conjugate) {
        result.conjugated = conjugate(result.direct);
    }
    return result;
}

/// The number of placements of a term that count.
Result<int> counted_placements(const PlacedTerm& term,
                               const Chain& chain,
                               Coincident coincident,
                               int cell) {
    CHAINMARK_EXPECTS(term.factors.size() == term.offsets.size() && !term.factors.empty());
    if (!chain.is_infinite() && range_of(term) >= chain.length()) {
        return tl::unexpected(short_chain(term, chain));
    }
    const int count = placement_count(term, chain, cell);
    CHAINMARK_EXPECTS(term.coupling.size() == 1 ||
                      term.coupling.size() == static_cast<std::size_t>(count));
    const int distinct = distinct_placements(term, chain, count);
    if (distinct < count && coincident == Coincident::refuse) {
        return tl::unexpected(coinciding(sites_of(term, distinct, chain), term, chain));
    }
    return coincident == Coincident::add ? count : distinct;
}

}  // namespace

std::span<const Family> families() {
    return family_table;
}

const Family* find_family(std::string_view name) {
    const auto at = std::find_if(
        family_table.begin(), family_table.end(), [&](const Family& f) { return f.name == name; });
    return at == family_table.end() ? nullptr : &*at;
}

std::string family_needs(const Family& family) {
    std::string needs;
    if (family.two_s) {
        needs = "spin " + spin_text(*family.two_s);
    }
    if (family.periodic_only) {
        needs += needs.empty() ? "a periodic ring" : ", a periodic ring";
    }
    if (family.most_sites) {
        needs += fmt::format("{}at most {} sites", needs.empty() ? "" : ", ", *family.most_sites);
    }
    return needs;
}

std::optional<Error> family_obstacle(const Family& family, const Chain& chain) {
    const bool other_spin = family.two_s && *family.two_s != chain.two_s;
    const bool no_ring =
        family.periodic_only && (chain.is_infinite() || !chain.is_ring() || chain.twist != 0.0);
    const bool too_long =
        family.most_sites && !chain.is_infinite() && chain.length() > *family.most_sites;
    if (!other_spin && !no_ring && !too_long) {
        return std::nullopt;
    }
    const std::string spin = chain.two_s == 1 ? " of spin 1/2" : "";  // else it is in the text
    return Error{ErrorCode::bad_chain,
                 {},
                 fmt::format("the family '{}' does not exist on the {}{}",
                             family.name,
                             to_string(chain),
                             other_spin ? spin : ""),
                 "it needs " + family_needs(family)};
}

Result<std::vector<PlacedTerm>> family_terms(const Family& family,
                                             Values values,
                                             const Chain& chain) {
    if (auto obstacle = family_obstacle(family, chain)) {
        return tl::unexpected(std::move(*obstacle));
    }
    return family.terms(values, chain);
}

int placement_count(const PlacedTerm& term, const Chain& chain, int cell) {
    if (term.fixed) {
        return 1;
    }
    if (chain.is_infinite()) {
        return cell;
    }
    return chain.is_ring() ? chain.length() : std::max(0, chain.length() - range_of(term));
}

Result<TermList> build_terms(const Chain& chain,
                             std::span<const PlacedTerm> terms,
                             Coincident coincident,
                             int cell) {
    TermCollector collector(chain, cell);
    double strings = 0.0;
    for (const PlacedTerm& term : terms) {
        const Result<int> count = counted_placements(term, chain, coincident, cell);
        if (!count) {
            return tl::unexpected(count.error());
        }
        const WrittenOut written = written_out(term, chain);
        strings += static_cast<double>(*count) *
                   static_cast<double>(written.direct.size() + written.conjugated.size());
        if (strings > most_strings) {
            return tl::unexpected(too_many_strings(term, chain));
        }
        for (int first = 0; first < *count; ++first) {
            const bool one_for_all = term.coupling.size() == 1;
            const std::complex<double> coupling =
                term.coupling[one_for_all ? 0 : static_cast<std::size_t>(first)];
            collector.add(coupling, written.direct, first);
            collector.add(std::conj(coupling), written.conjugated, first);
        }
    }
    return collector.finish();
}

}  // namespace chainmark
