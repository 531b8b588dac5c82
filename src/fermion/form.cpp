#include "chainmark/fermion/form.hpp"

#include <algorithm>
#include <cmath>

#include <fmt/format.h>

#include "chainmark/base/numerics.hpp"

namespace chainmark::fermion {
namespace {

bool is_wrap_bond(const OperatorString& string, const Chain& chain) {
    // On fewer than three sites the wrap bond joins the same neighbours as the inner one.
    return chain.is_ring() && chain.length() >= 3 && string.front().site == 0 &&
           string.back().site == chain.length() - 1;
}

bool joins_neighbours(const OperatorString& string) {
    return string.back().site == string.front().site + 1;
}

/// Why a string is not a part of the form; empty where it is.
std::string obstacle(const OperatorString& string, const Chain& chain) {
    const auto ladders = std::count_if(string.begin(), string.end(), [](const SiteFactor& factor) {
        return factor.op != SiteOperator::z;
    });
    if (raises_by(string) != 0) {
        return "does not conserve the number of up spins";
    }
    if (ladders == 0) {
        return string.size() == 1 ? "" : "is an interaction of the fermions";
    }
    if (string.size() != 2) {
        return "is an interaction of the fermions (more than one hop of one fermion)";
    }
    if (joins_neighbours(string) || is_wrap_bond(string, chain)) {
        return "";
    }
    return fmt::format(
        "joins sites that are not neighbours on the {}, so the fermions between them "
        "enter its sign",
        to_string(chain));
}

void enter(const Term& term, ChainForm& form) {
    const OperatorString& string = term.string;
    const SiteFactor& first = string.front();
    if (string.size() == 1) {
        form.onsite[static_cast<std::size_t>(first.site)] = term.coefficient.real();
    } else if (joins_neighbours(string)) {
        if (first.op == SiteOperator::plus) {
            form.hop[static_cast<std::size_t>(first.site)] = term.coefficient;
        }
    } else if (first.op == SiteOperator::minus) {
        form.wrap = term.coefficient;
    }
}

template <class T>
bool all_equal(const std::vector<T>& values) {
    return std::all_of(
        values.begin(), values.end(), [&](const T& value) { return value == values.front(); });
}

FormKind kind_of(const ChainForm& form) {
    constexpr long double rounding = 4 * epsilon;
    if (!all_equal(form.hop) || !all_equal(form.onsite)) {
        return FormKind::general;
    }
    if (form.chain.is_ring() && form.length() >= 3 &&
        form.wrap_deviation() <= rounding * std::abs(form.uniform_hop())) {
        return FormKind::uniform_ring;
    }
    return form.wrap == 0.0 ? FormKind::uniform_open : FormKind::general;
}

}  // namespace

long double ChainForm::wrap_deviation() const {
    using Wide = std::complex<long double>;
    const std::complex<double> exact = std::conj(chain.wrap_phase());
    const bool is_sign = exact.imag() == 0.0;
    const Wide phase =
        is_sign ? Wide(exact.real()) : std::polar(1.0L, static_cast<long double>(chain.twist));
    return std::abs(Wide(wrap) - Wide(uniform_hop()) * phase);
}

tl::expected<ChainForm, std::string> recognise(const Chain& chain, const TermList& terms) {
    if (chain.two_s != 1) {
        return tl::unexpected(std::string("needs spin 1/2"));
    }
    const auto sites = static_cast<std::size_t>(chain.length());
    ChainForm form{.chain = chain,
                   .hop = std::vector<std::complex<double>>(sites - 1),
                   .wrap = 0.0,
                   .onsite = std::vector<double>(sites),
                   .constant = terms.constant};
    for (const Term& term : terms.terms) {
        const std::string why = obstacle(term.string, chain);
        if (!why.empty()) {
            return tl::unexpected(
                fmt::format("no free fermions: the string {} {}", to_string(term.string), why));
        }
        enter(term, form);
    }
    form.kind = kind_of(form);
    return form;
}

}  // namespace chainmark::fermion
