#include "chainmark/sector/symmetry.hpp"

#include <algorithm>
#include <cmath>
#include <map>

#include <fmt/format.h>

#include "chainmark/base/numerics.hpp"
#include "chainmark/sector/basis.hpp"

namespace chainmark::sector {
namespace {

using Complex = std::complex<double>;

/// T A T^-1 for one string: every site moves up by one; what leaves the end comes back at site 0
/// with the phase of the boundary.
Term translated(const Term& term, const Chain& chain) {
    Term result = term;
    for (SiteFactor& factor : result.string) {
        if (++factor.site == chain.length()) {
            factor.site = 0;
            if (factor.op == SiteOperator::plus) {
                result.coefficient *= chain.wrap_phase();
            } else if (factor.op == SiteOperator::minus) {
                result.coefficient *= std::conj(chain.wrap_phase());
            }
        }
    }
    std::sort(result.string.begin(), result.string.end());
    return result;
}

std::string broken_translation(const Chain& chain, const TermList& terms) {
    if (!chain.is_ring()) {
        return "the chain is open";
    }
    std::map<OperatorString, Complex> coefficients;
    for (const Term& term : terms.terms) {
        coefficients.emplace(term.string, term.coefficient);
    }
    // A phase exp(i twist) that is not +-1 carries a rounding of its own.
    const double rounding = 8 * epsilon * largest_coupling(terms);
    for (const Term& term : terms.terms) {
        const Term moved = translated(term, chain);
        const auto at = coefficients.find(moved.string);
        if (at == coefficients.end() || std::abs(at->second - moved.coefficient) > rounding) {
            return fmt::format("{} and {} have different coefficients",
                               to_string(term.string),
                               to_string(moved.string));
        }
    }
    return {};
}

std::string line(const char* name, bool present, const std::string& remark) {
    return remark.empty() ? fmt::format("  {:<26}{}\n", name, present ? "yes" : "no")
                          : fmt::format("  {:<26}{:<5}{}\n", name, present ? "yes" : "no", remark);
}

}  // namespace

Symmetries find_symmetries(const Chain& chain, const TermList& terms) {
    Symmetries found;
    found.conserved = Conserved::up_count;
    for (const Term& term : terms.terms) {
        const int change = raises_by(term.string);
        if (change != 0 && found.why_no_sz.empty()) {
            found.why_no_sz = fmt::format("{} changes it", to_string(term.string));
            found.conserved = Conserved::parity;
        }
        if (change % 2 != 0 && found.why_no_parity.empty()) {
            found.why_no_parity = fmt::format("{} changes it", to_string(term.string));
        }
        if (term.coefficient.imag() != 0.0 && found.why_not_real.empty()) {
            found.why_not_real =
                fmt::format("{} has a complex coefficient", to_string(term.string));
        }
    }
    if (!found.why_no_parity.empty()) {
        found.conserved = Conserved::nothing;
    }
    found.real = found.why_not_real.empty();
    found.why_no_translation = broken_translation(chain, terms);
    found.translation = found.why_no_translation.empty();
    return found;
}

std::string describe_symmetries(const Problem& problem) {
    const Chain& chain = problem.chain;
    std::string text = fmt::format("{}\n", to_string(chain));
    if (chain.is_infinite()) {
        return text + "  sectors are for finite chains\n";
    }
    const Symmetries found = find_symmetries(chain, full_terms(problem));
    const bool sz = found.conserved == Conserved::up_count;
    text += line("total Sz", sz, found.why_no_sz);
    text += line("parity of the up count",
                 found.conserved != Conserved::nothing,
                 sz ? "follows from total Sz" : found.why_no_parity);
    text += line("translation by one site",
                 found.translation,
                 found.translation && chain.twist != 0.0 ? "with the phase of the boundary"
                                                         : found.why_no_translation);
    text += line("real matrix", found.real, found.why_not_real);
    const double states = largest_sector(found.conserved, chain.length());
    text += fmt::format("  largest {} sector: {:.0f} of {:.0f} states",
                        sz                                     ? "Sz"
                        : found.conserved == Conserved::parity ? "parity"
                                                               : "(only)",
                        states,
                        std::pow(2.0, chain.length()));
    if (found.translation) {
        text += fmt::format("; about {:.0f} per momentum", std::ceil(states / chain.length()));
    }
    return text + "\n";
}

}  // namespace chainmark::sector
