#pragma once

#include <functional>
#include <optional>
#include <vector>

#include "chainmark/fermion/answers.hpp"
#include "chainmark/fermion/ground_mixture.hpp"
#include "chainmark/reference/quantity.hpp"

namespace chainmark::fermion {

/// What an operator does not change: the total Sz, or no more than the parity of the up count.
enum class Keeps { sz, parity, nothing };

/// Answers to queries at one field of a solved chain. The solution and the context must outlive it.
class Point {
public:
    /// `window`: the ground window of the problem.
    Point(const Solution& solution, const Problem& problem, double window, const Context& context);

    /// The query must be one that the route covers.
    Answer answer(const Query& query);

private:
    Answer ground_energy(bool per_site);
    Answer gap();
    Answer sector_gap(const Labels& wanted);
    Answer lowest_levels(std::int64_t count, const Labels& wanted);
    Answer magnetization();
    Answer mean_magnetization();
    Answer local_magnetization(Axis axis);
    Answer susceptibility();
    Answer jump_fields();
    Answer correlation(QuantityId id, const Options& options);
    Answer entropy(const Options& options);
    Answer mode_energies(Parity parity);

    using Measured = std::function<std::vector<Average>(const Mixture&)>;

    /// True where every state of the ground space has a parity of its own, or, for operators that
    /// keep Sz where it is conserved, an up count of its own: operators are then diagonal between
    /// them.
    bool diagonal_between_states(Keeps keeps) const;

    std::optional<Range> range_of(const Measured& measured, Keeps keeps) const;

    /// Averages over the ground space with their range, where it is known.
    Reference averaged(const Measured& measured, Keeps keeps) const;

    /// The class whose modes are asked for; nothing where the ground space holds both.
    std::optional<UpCount> resolve(Parity parity) const;

    int length() const { return solution_.form.length(); }
    bool nondegenerate() const { return ground_.states.size() == 1; }
    Basis basis() const { return solution_.measured() ? Basis::residual : Basis::rounding; }
    Bounded total(Real energy) const;

    /// Adds what is known of the ground space.
    Reference with_ground_space(Reference reference) const;

    const Solution& solution_;
    const Problem& problem_;
    const Context& context_;
    Levels levels_;
    GroundSpace ground_;
    GroundMixture mixture_;
};

}  // namespace chainmark::fermion
