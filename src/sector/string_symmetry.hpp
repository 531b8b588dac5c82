#pragma once

#include <complex>
#include <vector>

#include "chainmark/operators/chain.hpp"
#include "chainmark/operators/term_list.hpp"
#include "chainmark/sector/symmetry.hpp"

namespace chainmark::sector {

/// What the symmetries of a state rho (a ground space, a thermal state) say of the averages
/// <A> = Tr(rho A) of strings: rho is invariant under every symmetry g of H, so <A> = <g A g^-1>;
/// and <A^dagger> is the conjugate of <A>, which is real where H is a real matrix.
class StringSymmetry {
public:
    /// `inversion`: whether rho is invariant under m -> -m; needs a list that is.
    StringSymmetry(const Chain& chain, const Symmetries& symmetries, bool inversion);

    /// <A> = factor <R>, or factor <R>* where `conjugated`, with R the first string among all that
    /// are equivalent to A. `vanishes`: <A> = 0 exactly.
    struct Class {
        OperatorString representative;
        std::complex<double> factor = 1.0;
        bool conjugated = false;
        bool vanishes = false;
    };
    Class classify(const OperatorString& string) const;

    /// The mean of the string over all symmetries: commutes with every one of them.
    std::vector<Term> averaged(const OperatorString& string) const;

private:
    std::vector<Term> images(const OperatorString& string) const;

    Chain chain_;
    Conserved conserved_;
    int step_;
    bool reflection_;
    bool inversion_;
    bool real_;
};

}  // namespace chainmark::sector
