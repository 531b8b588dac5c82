#include "chainmark/operators/term_list.hpp"

#include <algorithm>
#include <cmath>

#include <fmt/format.h>

#include "chainmark/base/numerics.hpp"

namespace chainmark {
namespace {

using Complex = std::complex<double>;
using Wide = std::complex<long double>;

bool has_ladder(const OperatorString& string) {
    return std::any_of(string.begin(), string.end(), [](const SiteFactor& factor) {
        return factor.op != SiteOperator::z;
    });
}

/// sum_i coefficient_i string_i, the running expansion of a product.
using Expansion = std::vector<Term>;

/// Multiplies an expansion over other sites by the site operator `matrix` on `site`.
Expansion times(const Expansion& left, int site, const SiteMatrix& matrix) {
    const auto& [dd, du, ud, uu] = matrix.entries;
    const Complex identity = (dd + uu) / 2.0;
    const Complex z = uu - dd;
    Expansion product;
    for (const Term& term : left) {
        const auto append = [&](SiteOperator op, Complex factor) {
            if (factor != 0.0) {
                Term longer = term;
                longer.string.push_back({site, op});
                longer.coefficient *= factor;
                product.push_back(std::move(longer));
            }
        };
        if (identity != 0.0) {
            product.push_back({term.string, term.coefficient * identity});
        }
        append(SiteOperator::z, z);
        append(SiteOperator::plus, ud);
        append(SiteOperator::minus, du);
    }
    return product;
}

/// "0.5", "0.5+0.2j"
std::string coefficient_text(Wide wide) {
    const Complex x(wide);
    return x.imag() == 0.0 ? fmt::format("{}", x.real() + 0.0)
                           : fmt::format("{}{:+}j", x.real() + 0.0, x.imag());
}

SiteMatrix adjoint(const SiteMatrix& matrix) {
    const auto& [dd, du, ud, uu] = matrix.entries;
    return {{std::conj(dd), std::conj(ud), std::conj(du), std::conj(uu)}};
}

}  // namespace

OperatorString conjugate(const OperatorString& string) {
    OperatorString result = string;
    for (SiteFactor& factor : result) {
        if (factor.op == SiteOperator::plus) {
            factor.op = SiteOperator::minus;
        } else if (factor.op == SiteOperator::minus) {
            factor.op = SiteOperator::plus;
        }
    }
    return result;
}

int raises_by(const OperatorString& string) {
    int change = 0;
    for (const SiteFactor& factor : string) {
        change += factor.op == SiteOperator::plus ? 1 : factor.op == SiteOperator::minus ? -1 : 0;
    }
    return change;
}

std::string to_string(const OperatorString& string) {
    if (string.empty()) {
        return "I";
    }
    std::string text;
    for (const SiteFactor& factor : string) {
        const char* name = factor.op == SiteOperator::z      ? "Sz"
                           : factor.op == SiteOperator::plus ? "S+"
                                                             : "S-";
        text += fmt::format("{}{}_{}", text.empty() ? "" : " ", name, factor.site);
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

SiteMatrix SiteMatrix::identity() {
    return {{1.0, 0.0, 0.0, 1.0}};
}
SiteMatrix SiteMatrix::sx() {
    return {{0.0, 0.5, 0.5, 0.0}};
}
// Sy = (S+ - S-)/(2i): <u|Sy|d> = -i/2.
SiteMatrix SiteMatrix::sy() {
    return {{0.0, Complex(0, 0.5), Complex(0, -0.5), 0.0}};
}
SiteMatrix SiteMatrix::sz() {
    return {{-0.5, 0.0, 0.0, 0.5}};
}
SiteMatrix SiteMatrix::raising() {
    return {{0.0, 0.0, 1.0, 0.0}};
}
SiteMatrix SiteMatrix::lowering() {
    return {{0.0, 1.0, 0.0, 0.0}};
}

SiteMatrix operator*(const SiteMatrix& a, const SiteMatrix& b) {
    SiteMatrix c;
    for (std::size_t row = 0; row < 2; ++row) {
        for (std::size_t column = 0; column < 2; ++column) {
            c.entries[2 * row + column] = a.entries[2 * row] * b.entries[column] +
                                          a.entries[2 * row + 1] * b.entries[2 + column];
        }
    }
    return c;
}

void TermCollector::add(Complex coefficient, const std::vector<PlacedMatrix>& product) {
    // Operators of different sites commute, so the product may be gathered site by site.
    std::map<int, SiteMatrix> sites;
    const Complex phase = chain_.wrap_phase();
    for (const PlacedMatrix& factor : product) {
        int site = factor.site;
        SiteMatrix matrix = factor.matrix;
        if (!chain_.is_infinite() && site >= chain_.length()) {
            CHAINMARK_EXPECTS(chain_.is_ring() && site < 2 * chain_.length());
            site -= chain_.length();
            matrix.entries[1] *= std::conj(phase);  // S-
            matrix.entries[2] *= phase;             // S+
        }
        const auto [at, fresh] = sites.emplace(site, matrix);
        if (!fresh) {
            at->second = at->second * matrix;
        }
    }
    Expansion expansion = {{{}, coefficient}};
    for (const auto& [site, matrix] : sites) {
        expansion = times(expansion, site, matrix);
    }
    for (Term& term : expansion) {
        if (chain_.is_infinite() && !term.string.empty()) {
            const int shift = term.string.front().site / cell_ * cell_;
            for (SiteFactor& factor : term.string) {
                factor.site -= shift;
            }
        }
        Sum& sum = sums_[term.string];
        sum.value += Wide(term.coefficient);
        sum.weight += std::abs(Wide(term.coefficient));
    }
}

void TermCollector::add_conjugate(Complex coefficient, const std::vector<PlacedMatrix>& product) {
    std::vector<PlacedMatrix> reversed;
    for (auto factor = product.rbegin(); factor != product.rend(); ++factor) {
        reversed.push_back({factor->site, adjoint(factor->matrix)});
    }
    add(std::conj(coefficient), reversed);
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
                            to_string(string),
                            coefficient_text(sum.value),
                            to_string(conjugate(string)),
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
