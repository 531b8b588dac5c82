#pragma once

#include <optional>

#include "chainmark/fermion/answers.hpp"
#include "chainmark/fermion/ground_space.hpp"
#include "chainmark/reference/quantity.hpp"

namespace chainmark::fermion {

/// Answers to queries at one field of a solved chain. The solution and the context must outlive it.
class Point {
public:
    Point(const Solution& solution, const Problem& problem, const Context& context);

    /// The query must be one that the route covers.
    Answer answer(const Query& query);

private:
    Answer ground_energy(bool per_site);
    Answer gap();
    Answer lowest_levels(std::int64_t count);
    Answer magnetization();
    Answer local_magnetization(Axis axis);
    Answer susceptibility();
    Answer jump_fields();
    Answer spin_correlation(const Options& options);
    Answer mode_energies(Parity parity);

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
};

}  // namespace chainmark::fermion
