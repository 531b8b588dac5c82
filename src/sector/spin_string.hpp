#pragma once

#include <complex>
#include <vector>

#include "chainmark/operators/chain.hpp"
#include "chainmark/reference/quantity.hpp"
#include "chainmark/sector/packing.hpp"

namespace chainmark::sector {

/// weight * Sa_i [prod_{i<k<j} U_k] Sa_j with U = exp(i pi Sa) for whole S and 2 Sa for S = 1/2:
///   exp(i pi Sz)|m> = (-1)^m |m>,   exp(i pi Sx)|m> = (-1)^S |-m>,
///   exp(i pi Sy)|m> = (-1)^(S+m) |-m>.
/// As operator strings it would be a sum of exponentially many. Sites past L-1 of a ring are
/// brought back with the phase of the boundary. Hermitian.
class SpinString {
public:
    SpinString(const Chain& chain, int i, int j, Axis axis, double weight);

    /// Upper bound of the norm.
    double norm() const;

    /// Calls visit(target, <target|A|word>).
    template <class Visit>
    void apply(Word word, Visit&& visit) const {
        visit_from(0, word, Word{0}, weight_, visit);
    }

private:
    /// A matrix of one site with at most two elements in a column: [digit].
    struct Element {
        int to;
        std::complex<double> value;
    };
    struct Factor {
        int site;
        std::vector<std::vector<Element>> columns;
    };

    template <class Visit>
    void visit_from(
        std::size_t at, Word word, Word changed, std::complex<double> value, Visit& visit) const {
        if (at == factors_.size()) {
            visit(changed | (word & ~sites_), value);
            return;
        }
        const Factor& factor = factors_[at];
        const auto digit = static_cast<std::size_t>(packing_.digit(word, factor.site));
        for (const Element& element : factor.columns[digit]) {
            visit_from(at + 1,
                       word,
                       changed | packing_.place(element.to, factor.site),
                       value * element.value,
                       visit);
        }
    }

    Packing packing_;
    std::vector<Factor> factors_;
    Word sites_ = 0;
    std::complex<double> weight_;
    double norm_;
};

}  // namespace chainmark::sector
