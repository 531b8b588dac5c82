#include "chainmark/fermion/majorana.hpp"

#include <algorithm>

namespace chainmark::fermion {
namespace {

/// Appends own * B^turned for the site's own factor (absent: 1) and B = i g_{2j} g_{2j+1}.
void append_site(MajoranaString& product, int site, const PauliFactor* own, bool turned) {
    const int even = 2 * site;
    const int odd = even + 1;
    const auto append = [&](int turns, std::initializer_list<int> indices) {
        product.quarter_turns = (product.quarter_turns + turns) % 4;
        product.indices.insert(product.indices.end(), indices);
    };
    if (own == nullptr) {
        if (turned) {
            append(1, {even, odd});
        }
    } else if (own->axis == Axis::x) {
        turned ? append(1, {odd}) : append(0, {even});
    } else if (own->axis == Axis::y) {
        turned ? append(3, {even}) : append(0, {odd});
    } else {
        turned ? append(2, {}) : append(3, {even, odd});  // sz = -B
    }
}

/// Site by site: the string K of every sx or sy at a higher site stands to the right of what a site
/// has of its own, and factors of even degree commute with those of other sites.
MajoranaString product_over(const PauliString& string, int first, int end, bool times_parity) {
    auto turns = std::count_if(string.begin(), string.end(), [](const PauliFactor& factor) {
        return factor.axis != Axis::z;
    });
    MajoranaString product;
    auto own = string.begin();
    for (int site = first; site < end; ++site) {
        const bool here = own != string.end() && own->site == site;
        if (here && own->axis != Axis::z) {
            --turns;
        }
        append_site(product, site, here ? &*own : nullptr, (turns % 2 != 0) != times_parity);
        if (here) {
            ++own;
        }
    }
    return product;
}

}  // namespace

std::complex<double> MajoranaString::phase() const {
    constexpr std::complex<double> powers[] = {{1, 0}, {0, 1}, {-1, 0}, {0, -1}};
    return powers[quarter_turns];
}

MajoranaString majorana_string(const PauliString& string) {
    const auto ladders = std::count_if(string.begin(), string.end(), [](const PauliFactor& factor) {
        return factor.axis != Axis::z;
    });
    if (string.empty()) {
        return {};
    }
    return product_over(
        string, ladders % 2 == 0 ? string.front().site : 0, string.back().site + 1, false);
}

MajoranaString majorana_string_times_parity(const PauliString& string, int sites) {
    return product_over(string, 0, sites, true);
}

std::vector<PauliTerm> pauli_terms(const OperatorString& string) {
    std::vector<PauliTerm> terms = {{1.0, {}}};
    for (const SiteFactor& factor : string) {
        const std::size_t count = terms.size();
        for (std::size_t i = 0; i < count; ++i) {
            terms[i].coefficient /= 2;
            if (factor.op == SiteOperator::z) {
                terms[i].string.push_back({factor.site, Axis::z});
                continue;
            }
            PauliTerm other = terms[i];
            other.coefficient *=
                std::complex<double>(0.0, factor.op == SiteOperator::plus ? 1.0 : -1.0);
            other.string.push_back({factor.site, Axis::y});
            terms[i].string.push_back({factor.site, Axis::x});
            terms.push_back(std::move(other));
        }
    }
    return terms;
}

}  // namespace chainmark::fermion
