#include "chainmark/operators/term_list.hpp"

#include <algorithm>
#include <cmath>
#include <map>
#include <optional>

#include <fmt/format.h>

namespace chainmark {
namespace {

using Complex = std::complex<double>;

bool has_ladder(const OperatorString& string) {
    return std::any_of(string.begin(), string.end(), [](const SiteFactor& factor) {
        return !factor.op.is_diagonal();
    });
}

}  // namespace

OperatorString conjugate(const OperatorString& string) {
    OperatorString result = string;
    for (SiteFactor& factor : result) {
        factor.op = conjugate(factor.op);
    }
    return result;
}

int raises_by(const OperatorString& string) {
    int change = 0;
    for (const SiteFactor& factor : string) {
        change += factor.op.raises_by();
    }
    return change;
}

std::string to_string(const OperatorString& string, int two_s) {
    if (string.empty()) {
        return "I";
    }
    std::string text;
    for (const SiteFactor& factor : string) {
        text += fmt::format(
            "{}{}_{}", text.empty() ? "" : " ", to_string(factor.op, two_s), factor.site);
    }
    return text;
}

double largest_coupling(const TermList& list) {
    double largest = 0.0;
    for (const Term& term : list.terms) {
        largest = std::max(largest, std::abs(term.coefficient) * (has_ladder(term.string) ? 2 : 1));
    }
    return largest;
}

bool is_real(const TermList& list) {
    return std::all_of(list.terms.begin(), list.terms.end(), [](const Term& term) {
        return term.coefficient.imag() == 0.0;
    });
}

TermList with_field(const TermList& list, double field, int length) {
    if (field == 0.0) {
        return list;
    }
    std::map<OperatorString, Complex> sums;
    for (const Term& term : list.terms) {
        sums.emplace(term.string, term.coefficient);
    }
    for (int site = 0; site < length; ++site) {
        sums[{{site, SiteOperator::z}}] -= field;
    }
    TermList result{.constant = list.constant, .terms = {}, .cell = list.cell};
    for (auto& [string, coefficient] : sums) {
        if (coefficient != 0.0) {
            result.terms.push_back({string, coefficient});
        }
    }
    return result;
}

SplitField split_uniform_field(const TermList& list, const Chain& chain) {
    const auto is_field = [](const Term& term) {
        return term.string.size() == 1 && term.string.front().op == SiteOperator::z;
    };
    const int sites = chain.is_infinite() ? list.cell : chain.length();
    std::optional<double> common;
    int carriers = 0;
    for (const Term& term : list.terms) {
        if (is_field(term)) {
            const double coefficient = term.coefficient.real();
            if (common.value_or(coefficient) != coefficient) {
                return {0.0, list};
            }
            common = coefficient;
            ++carriers;
        }
    }
    if (!common || carriers != sites) {
        return {0.0, list};
    }
    SplitField split{.field = -*common, .rest = list};
    std::erase_if(split.rest.terms, is_field);
    return split;
}

}  // namespace chainmark
