#include "chainmark/sector/bit_terms.hpp"

#include <algorithm>

namespace chainmark::sector {

std::vector<BitTerm> bit_terms(const std::vector<Term>& terms) {
    std::vector<BitTerm> result;
    for (const Term& term : terms) {
        BitTerm bits;
        bits.coefficient = term.coefficient;
        for (const SiteFactor& factor : term.string) {
            const std::uint64_t bit = std::uint64_t{1} << factor.site;
            switch (factor.op) {
                case SiteOperator::z:
                    bits.z |= bit;
                    bits.coefficient /= 2;
                    break;
                case SiteOperator::plus:
                    bits.must_be_down |= bit;
                    break;
                case SiteOperator::minus:
                    bits.must_be_up |= bit;
                    break;
            }
        }
        bits.flip = bits.must_be_up | bits.must_be_down;
        result.push_back(bits);
    }
    std::stable_sort(result.begin(), result.end(), [](const BitTerm& a, const BitTerm& b) {
        return a.flip < b.flip;
    });
    return result;
}

}  // namespace chainmark::sector
