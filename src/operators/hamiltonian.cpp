#include "chainmark/operators/hamiltonian.hpp"

#include <algorithm>
#include <array>
#include <numeric>
#include <set>

#include <fmt/format.h>

namespace chainmark {
namespace {

using Values = std::span<const double>;

PlacedTerm bond(SiteMatrix a, SiteMatrix b, double coupling, int distance = 1) {
    return {.factors = {a, b}, .offsets = {0, distance}, .coupling = {coupling}};
}

std::vector<PlacedTerm> exchange(double x, double y, double z, int distance = 1) {
    return {bond(SiteMatrix::sx(), SiteMatrix::sx(), x, distance),
            bond(SiteMatrix::sy(), SiteMatrix::sy(), y, distance),
            bond(SiteMatrix::sz(), SiteMatrix::sz(), z, distance)};
}

std::vector<PlacedTerm> xx_terms(Values v, const Chain&) {
    return exchange(v[0], v[0], 0.0);
}

std::vector<PlacedTerm> xy_terms(Values v, const Chain&) {
    return exchange(v[0] * (1 + v[1]), v[0] * (1 - v[1]), 0.0);
}

std::vector<PlacedTerm> tfim_terms(Values v, const Chain&) {
    return exchange(v[0], 0.0, 0.0);
}

std::vector<PlacedTerm> xxz_terms(Values v, const Chain&) {
    return exchange(v[0], v[0], v[0] * v[1]);
}

std::vector<PlacedTerm> heisenberg_terms(Values v, const Chain&) {
    return exchange(v[0], v[0], v[0]);
}

std::vector<PlacedTerm> j1j2_terms(Values v, const Chain&) {
    std::vector<PlacedTerm> terms = exchange(v[0], v[0], v[0]);
    for (PlacedTerm& term : exchange(v[1], v[1], v[1], 2)) {
        terms.push_back(std::move(term));
    }
    return terms;
}

std::vector<PlacedTerm> dimer_terms(Values v, const Chain& chain) {
    std::vector<PlacedTerm> terms = exchange(1.0, 1.0, 0.0);
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

const FamilyParameter coupling_j = {"J", "coupling"};

const std::array<Family, 7> family_table = {{
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

/// One placement of a term.
struct Placement {
    std::vector<PlacedMatrix> product;
    std::set<int> sites;  ///< with those past the end of a ring brought back
};

Placement placed_at(const PlacedTerm& term, int first, const Chain& chain) {
    Placement placement;
    for (std::size_t i = 0; i < term.factors.size(); ++i) {
        const int site = first + term.offsets[i];
        placement.product.push_back({site, term.factors[i]});
        placement.sites.insert(chain.is_infinite() ? site : site % chain.length());
    }
    return placement;
}

void collect(const PlacedTerm& term,
             std::complex<double> coupling,
             const Placement& placement,
             TermCollector& collector) {
    collector.add(coupling, placement.product);
    if (term.add_conjugate) {
        collector.add_conjugate(coupling, placement.product);
    }
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
    for (const PlacedTerm& term : terms) {
        CHAINMARK_EXPECTS(term.factors.size() == term.offsets.size() && !term.factors.empty());
        if (!chain.is_infinite() && range_of(term) >= chain.length()) {
            return tl::unexpected(short_chain(term, chain));
        }
        const int count = placement_count(term, chain, cell);
        const bool one_for_all = term.coupling.size() == 1;
        CHAINMARK_EXPECTS(one_for_all || term.coupling.size() == static_cast<std::size_t>(count));
        std::set<std::set<int>> seen;
        for (int first = 0; first < count; ++first) {
            const Placement placement = placed_at(term, first, chain);
            const bool meets = !seen.insert(placement.sites).second;
            if (meets && coincident == Coincident::refuse) {
                return tl::unexpected(coinciding(placement.sites, term, chain));
            }
            if (!meets || coincident == Coincident::add) {
                const std::size_t index = one_for_all ? 0 : static_cast<std::size_t>(first);
                collect(term, term.coupling[index], placement, collector);
            }
        }
    }
    return collector.finish();
}

}  // namespace chainmark
