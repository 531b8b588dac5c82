#include "chainmark/sector/string_symmetry.hpp"

#include <cmath>

#include "chainmark/sector/observable.hpp"
#include "chainmark/sector/term_maps.hpp"

namespace chainmark::sector {
namespace {

/// Phases of maps differ from 1 by more than this or not at all but for rounding: they are products
/// of signs and of the boundary's phase exp(i twist), where a twist below it is no matter.
constexpr double same_phase = 1e-9;

}  // namespace

StringSymmetry::StringSymmetry(const Chain& chain, const Symmetries& symmetries, bool inversion)
    : chain_(chain),
      conserved_(symmetries.conserved),
      step_(symmetries.step),
      reflection_(symmetries.reflection),
      inversion_(inversion && symmetries.inversion),
      real_(symmetries.real) {}

std::vector<Term> StringSymmetry::images(const OperatorString& string) const {
    std::vector<Term> result = {{string, 1.0}};
    if (inversion_) {
        result.push_back(inverted(result.front(), chain_));
    }
    if (reflection_) {
        for (std::size_t i = 0, n = result.size(); i < n; ++i) {
            result.push_back(reflected(result[i], chain_));
        }
    }
    if (step_ != 0) {
        const std::size_t n = result.size();
        for (int shift = step_; shift < chain_.length(); shift += step_) {
            for (std::size_t i = 0; i < n; ++i) {
                result.push_back(translated(result[i], chain_, shift, chain_.wrap_phase()));
            }
        }
    }
    return result;
}

StringSymmetry::Class StringSymmetry::classify(const OperatorString& string) const {
    Class found{string};
    const int raised = raises_by(string);
    if ((conserved_ == Conserved::up_count && raised != 0) ||
        (conserved_ == Conserved::parity && raised % 2 != 0)) {
        found.vanishes = true;
        return found;
    }
    for (const Term& image : images(string)) {
        const OperatorString adjoint = conjugate(image.string);
        const bool itself = image.string == string || (real_ && adjoint == string);
        if (itself && std::abs(image.coefficient - 1.0) > same_phase) {
            found.vanishes = true;
        }
        if (image.string < found.representative) {
            found = {image.string, image.coefficient, false, found.vanishes};
        }
        if (adjoint < found.representative) {
            found = {adjoint, image.coefficient, true, found.vanishes};
        }
    }
    return found;
}

std::vector<Term> StringSymmetry::averaged(const OperatorString& string) const {
    const std::vector<Term> all = images(string);
    StringSum mean;
    for (const Term& image : all) {
        mean[image.string] += image.coefficient / static_cast<double>(all.size());
    }
    return terms_of(mean);
}

}  // namespace chainmark::sector
