#include "chainmark/operators/term_collector.hpp"

#include <algorithm>
#include <cmath>
#include <cstdlib>
#include <map>

#include <fmt/format.h>

#include "chainmark/base/numerics.hpp"

namespace chainmark {
namespace {

using Complex = std::complex<double>;
using Wide = std::complex<long double>;

/// Multiplies an expansion over other sites by the site operator `factor` on `site`.
Expansion times(const Expansion& left, int site, const SiteExpansion& factor) {
    Expansion product;
    for (const WideTerm& term : left) {
        if (factor.identity != Wide(0)) {
            product.push_back({term.string, term.coefficient * factor.identity});
        }
        for (const auto& [op, coefficient] : factor.operators) {
            WideTerm longer = term;
            longer.string.push_back({site, op});
            longer.coefficient *= coefficient;
            product.push_back(std::move(longer));
        }
    }
    return product;
}

/// "0.5", "0.5+0.2j"
std::string coefficient_text(Wide wide) {
    const Complex x(wide);
    return x.imag() == 0.0 ? fmt::format("{}", x.real() + 0.0)
                           : fmt::format("{}{:+}j", x.real() + 0.0, x.imag());
}

}  // namespace

Expansion expand(const std::vector<PlacedMatrix>& product, int two_s) {
    // Operators of different sites commute, so the product may be gathered site by site.
    std::map<int, SiteMatrix> sites;
    for (const PlacedMatrix& factor : product) {
        CHAINMARK_EXPECTS(factor.matrix.dim() == static_cast<std::size_t>(two_s) + 1);
        const auto [at, fresh] = sites.emplace(factor.site, factor.matrix);
        if (!fresh) {
            at->second = at->second * factor.matrix;
        }
    }
    Expansion expansion = {{{}, 1.0L}};
    for (const auto& [site, matrix] : sites) {
        expansion = times(expansion, site, expand(matrix));
    }
    return expansion;
}

Expansion conjugate(const Expansion& expansion) {
    Expansion result;
    for (const WideTerm& term : expansion) {
        result.push_back({conjugate(term.string), std::conj(term.coefficient)});
    }
    return result;
}

Wide TermCollector::place(OperatorString& string, int shift) const {
    if (string.empty()) {
        return 1.0L;
    }
    for (SiteFactor& factor : string) {
        factor.site += shift;
    }
    if (chain_.is_infinite()) {
        const int whole_cells = string.front().site / cell_ * cell_;
        for (SiteFactor& factor : string) {
            factor.site -= whole_cells;
        }
        return 1.0L;
    }
    const int length = chain_.length();
    if (string.back().site < length) {
        return 1.0L;
    }
    CHAINMARK_EXPECTS(chain_.is_ring() && string.back().site < 2 * length &&
                      string.back().site - string.front().site < length);
    int raised = 0;
    for (SiteFactor& factor : string) {
        if (factor.site >= length) {
            factor.site -= length;
            raised += factor.op.raises_by();
        }
    }
    std::sort(string.begin(), string.end());
    const Wide step(raised > 0 ? chain_.wrap_phase() : std::conj(chain_.wrap_phase()));
    Wide phase = 1.0L;
    for (int i = 0; i < std::abs(raised); ++i) {
        phase *= step;
    }
    return phase;
}

void TermCollector::add(Complex coefficient, const Expansion& expansion, int shift) {
    for (const WideTerm& term : expansion) {
        OperatorString string = term.string;
        const Wide phase = place(string, shift);
        const Wide value = Wide(coefficient) * term.coefficient * phase;
        Sum& sum = sums_[std::move(string)];
        sum.value += value;
        sum.weight += std::abs(value);
    }
}

void TermCollector::add(Complex coefficient, const std::vector<PlacedMatrix>& product) {
    add(coefficient, expand(product, chain_.two_s));
}

void TermCollector::add_conjugate(Complex coefficient, const std::vector<PlacedMatrix>& product) {
    add(std::conj(coefficient), conjugate(expand(product, chain_.two_s)));
}

Result<TermList> TermCollector::finish() const {
    constexpr long double hermitian = 16 * epsilon;  // of the couplings that were written
    constexpr long double cancelled = 0x1p-58L;      // of the sum itself
    TermList list;
    list.cell = cell_;
    for (const auto& [string, sum] : sums_) {
        const auto partner = sums_.find(conjugate(string));
        const Wide mirrored = partner == sums_.end() ? Wide(0) : std::conj(partner->second.value);
        if (std::abs(sum.value - mirrored) > hermitian * sum.weight) {
            return tl::unexpected(Error{
                ErrorCode::not_hermitian,
                {},
                fmt::format("the Hamiltonian is not Hermitian: {} has the coefficient {}, but its "
                            "conjugate {} has {}",
                            to_string(string, chain_.two_s),
                            coefficient_text(sum.value),
                            to_string(conjugate(string), chain_.two_s),
                            coefficient_text(std::conj(mirrored))),
                "add the missing term, or set add_conjugate = true"});
        }
        // The two halves of a conjugate pair are averaged so that H is Hermitian to the last bit.
        const Wide mean = (sum.value + mirrored) / 2.0L;
        const long double noise = cancelled * sum.weight;
        const auto rounded = [noise](long double part) {
            return std::abs(part) <= noise ? 0.0 : static_cast<double>(part);
        };
        const Complex value(rounded(mean.real()), rounded(mean.imag()));
        if (string.empty()) {
            list.constant = value.real();
        } else if (value != 0.0) {
            list.terms.push_back({string, value});
        }
    }
    return list;
}

}  // namespace chainmark
