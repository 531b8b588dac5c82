#include "chainmark/operators/rotation.hpp"

#include <algorithm>
#include <complex>
#include <map>

#include "chainmark/base/numerics.hpp"
#include "chainmark/operators/site_matrix.hpp"

namespace chainmark {
namespace {

using Wide = std::complex<long double>;

/// [op, S+] of one spin.
SiteExpansion raised(SiteOperator op, int two_s) {
    const SiteMatrix matrix = to_matrix(op, two_s);
    const SiteMatrix plus = SiteMatrix::raising(two_s);
    return expand(matrix * plus - plus * matrix);
}

/// A coefficient of the commutator and the size of what was summed up.
struct Balance {
    Wide value;
    long double weight = 0.0L;
};

using Commutator = std::map<OperatorString, Balance>;

/// Adds [term, sum_j S+_j], which is a sum over the factors of the string: each is replaced by its
/// own commutator. That is traceless, so the string keeps its sites.
void add_commutator(const Term& term,
                    const std::map<SiteOperator, SiteExpansion>& table,
                    Commutator& sum) {
    for (std::size_t i = 0; i < term.string.size(); ++i) {
        OperatorString string = term.string;
        for (const auto& [op, coefficient] : table.at(term.string[i].op).operators) {
            string[i].op = op;
            const Wide value = Wide(term.coefficient) * coefficient;
            Balance& balance = sum[string];
            balance.value += value;
            balance.weight += std::abs(value);
        }
    }
}

}  // namespace

bool is_rotation_invariant(const TermList& list, const Chain& chain) {
    const bool keeps_sz = std::all_of(list.terms.begin(), list.terms.end(), [](const Term& term) {
        return raises_by(term.string) == 0;
    });
    if (!keeps_sz || chain.wrap_phase() != 1.0) {
        return false;
    }
    std::map<SiteOperator, SiteExpansion> table;
    Commutator commutator;
    for (const Term& term : list.terms) {
        for (const SiteFactor& factor : term.string) {
            if (table.count(factor.op) == 0) {
                table.emplace(factor.op, raised(factor.op, chain.two_s));
            }
        }
        add_commutator(term, table, commutator);
    }
    return std::all_of(commutator.begin(), commutator.end(), [](const auto& entry) {
        // Every coefficient is off by at most epsilon / 2 of itself.
        return std::abs(entry.second.value) <= epsilon * entry.second.weight;
    });
}

}  // namespace chainmark
