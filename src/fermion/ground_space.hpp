#pragma once

#include <array>
#include <memory>
#include <optional>
#include <string>
#include <vector>

#include "chainmark/fermion/levels.hpp"
#include "chainmark/reference/problem.hpp"
#include "chainmark/reference/value.hpp"

namespace chainmark::fermion {

/// A recognised chain with the modes of both classes: what all fields of a sweep share.
struct Solution {
    ChainForm form;
    std::array<ModeSet, 2> modes;  ///< [UpCount]; on an open chain the second is not filled in

    const ModeSet& of(UpCount up_count) const {
        return modes[form.parity_matters() ? static_cast<std::size_t>(up_count) : 0];
    }
    bool measured() const { return modes[0].measured; }

    /// Largest sum_error of the classes, with the on-site terms' share.
    Real sum_error(Real field) const;
};

Solution solve(const ChainForm& form, const Context& context);

/// All 2^L states in ascending order: the two classes merged. The solution must outlive it.
class Levels {
public:
    Levels(const Solution& solution, double field);

    std::optional<State> next();
    Occupation occupation(const State& state);

    /// Bound on the energy of the n-th state, n = 1 ... 2^L, without the constant of H.
    Real error() const { return error_; }

    /// Sz, and on a uniform ring the momentum.
    Labels labels(const State& state) const;

private:
    const Solution& solution_;
    std::array<ClassLevels, 2> classes_;
    Real error_;
};

/// The levels within the ground window of the lowest.
struct GroundSpace {
    std::vector<State> states;  ///< the lowest first
    std::optional<Real> gap;    ///< first level outside; nothing where there is none
    std::string undecided;      ///< why it is not known which states belong; empty where it is
    Real energy_error = 0.0L;

    const State& lowest() const { return states.front(); }
    bool one_particle_number() const;
    std::optional<std::int64_t> degeneracy() const;

    /// Bound on the sine of the angle between this space and the true one, from the distance of
    /// the solved operator: distance/(gap - errors). 0 where the whole space is the ground space.
    /// Source: C. Davis, W. M. Kahan, SIAM J. Numer. Anal. 7, 1 (1970), sin theta theorem.
    Real tilt(Real distance) const;
};

inline constexpr std::size_t largest_ground_space = std::size_t{1} << 16;

/// Takes states from fresh `levels` until the ground space is complete.
GroundSpace find_ground_space(Levels& levels, double window, const Context& context);

}  // namespace chainmark::fermion
