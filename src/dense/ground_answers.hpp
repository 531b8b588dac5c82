#pragma once

#include <set>

#include "chainmark/dense/ground.hpp"
#include "chainmark/dense/observables.hpp"
#include "chainmark/reference/problem.hpp"
#include "chainmark/reference/value.hpp"

namespace chainmark::dense {

/// Answers about levels and the ground space from the spectrum of one problem.
template <class Scalar>
class GroundAnswers {
public:
    GroundAnswers(const Problem& problem, const FullSpectrum<Scalar>& spectrum);

    /// Any quantity of the ground state or of levels, without a sector of the user's.
    Answer operator()(const Query& query) const;

    /// The ground energy.
    const Level& lowest() const { return ground_.levels.front(); }

private:
    Answer of_ground_space(const Query& query) const;
    Reference reference(Value value, std::vector<double> bound) const;
    Answer energy(double factor) const;
    Answer levels(std::size_t count) const;
    Answer gap() const;
    std::set<double> ground_sz() const;
    Answer susceptibility() const;
    Answer jump_fields() const;
    Answer local_magnetization(Axis axis) const;
    Answer entropy(const Options& options) const;
    Answer spin_correlation(const Options& options) const;
    Answer structure_factor(const Options& options) const;
    Average measure(const std::vector<Product>& products) const;
    Answer averages(const std::vector<std::vector<Product>>& sums) const;
    /// An array, with ranges where every element has one.
    Answer array(const std::vector<Average>& averages) const;

    const Problem& problem_;
    const FullSpectrum<Scalar>& spectrum_;
    Ground ground_;
    GroundAverages<Scalar> averages_;
};

extern template class GroundAnswers<double>;
extern template class GroundAnswers<std::complex<double>>;

}  // namespace chainmark::dense
