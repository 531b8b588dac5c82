#include "chainmark/sector/term_maps.hpp"

#include <algorithm>

namespace chainmark::sector {

Term translated(Term term, const Chain& chain, int step, std::complex<double> wrap_phase) {
    for (SiteFactor& factor : term.string) {
        factor.site += step;
        if (factor.site >= chain.length()) {
            factor.site -= chain.length();
            for (int raised = factor.op.raises_by(); raised != 0; raised += raised > 0 ? -1 : 1) {
                term.coefficient *= raised > 0 ? wrap_phase : std::conj(wrap_phase);
            }
        }
    }
    std::sort(term.string.begin(), term.string.end());
    return term;
}

Term reflected(Term term, const Chain& chain) {
    for (SiteFactor& factor : term.string) {
        factor.site = chain.length() - 1 - factor.site;
    }
    std::sort(term.string.begin(), term.string.end());
    return term;
}

Term inverted(Term term, const Chain& chain) {
    for (SiteFactor& factor : term.string) {
        if (!factor.op.is_diagonal()) {
            factor.op.to = static_cast<std::uint8_t>(chain.two_s - factor.op.to);
            factor.op.from = static_cast<std::uint8_t>(chain.two_s - factor.op.from);
        } else if (factor.op.degree % 2 != 0) {
            term.coefficient = -term.coefficient;
        }
    }
    return term;
}

}  // namespace chainmark::sector
