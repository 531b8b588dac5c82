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

/// A recognised chain with the modes of both classes. Where N is conserved all fields of a sweep
/// share it, and the form is without the field; otherwise the field is a part of the form.
struct Solution {
    QuadraticForm form;
    bool conserving = true;
    bool two_classes = true;       ///< the classes have different modes
    Real constants = 0.0L;         ///< sum of |fields| and |constants| of the form
    std::array<ModeSet, 2> modes;  ///< [UpCount]; where both are equal the second is not filled in

    const ModeSet& of(UpCount up_count) const {
        return modes[two_classes ? static_cast<std::size_t>(up_count) : 0];
    }
    bool measured() const { return modes[0].measured; }

    /// The part of a uniform field that the modes do not hold.
    double outer_field(double field) const { return conserving ? field : 0.0; }

    /// Largest sum_error of the classes, with the constants' share.
    Real sum_error(Real outer_field) const;
};

/// The modes of a form that holds the field where N is not conserved.
Solution solve(QuadraticForm form, const Context& context);

/// All 2^L states in ascending order: the two classes merged; or those of one class. The solution
/// must outlive it.
class Levels {
public:
    Levels(const Solution& solution, double field, std::optional<UpCount> only = {});

    std::optional<State> next();

    /// -1 for the labels of filled modes, 1 for the others.
    std::vector<Real> signs(const State& state) const {
        return classes_[static_cast<std::size_t>(state.up_count)].signs(state);
    }

    /// The state as a covariance; the solution must outlive it.
    std::unique_ptr<GaussianState> gaussian(const State& state) const;

    bool conserving() const { return solution_.conserving; }

    /// Energy of the lowest state with the up count of the given one, where that is conserved, or
    /// of its parity, after `skipped` lower ones.
    std::optional<Real> in_sector(const State& state, std::int64_t skipped) const;

    /// Bound on the energy of the n-th state, n = 1 ... 2^L, with the constant of H.
    Real error() const { return error_; }

    /// Sz where it is conserved, else the parity of the up count; on a uniform ring the momentum
    /// (with pairs only where there is no twist).
    Labels labels(const State& state) const;

private:
    const Solution& solution_;
    Real field_;
    std::array<ClassLevels, 2> classes_;
    std::optional<UpCount> only_;
    Real error_;
};

/// The levels within the ground window of the lowest.
struct GroundSpace {
    std::vector<State> states;  ///< the lowest first
    std::optional<Real> gap;    ///< first level outside; nothing where there is none
    /// Least distance of a state of the space to one outside with the same up count, where that is
    /// conserved, or of the same parity; nothing where there is none.
    std::optional<Real> sector_gap;
    std::string undecided;  ///< why it is not known which states belong; empty where it is
    Real energy_error = 0.0L;

    const State& lowest() const { return states.front(); }
    /// Needs a conserved N.
    bool one_particle_number() const;
    std::optional<std::int64_t> degeneracy() const;

    /// Bound on the sine of the angle between this space and the true one, from the distance of
    /// the solved operator, which couples the same sectors: distance/(sector gap - errors).
    /// Source: C. Davis, W. M. Kahan, SIAM J. Numer. Anal. 7, 1 (1970), sin theta theorem.
    Real tilt(Real distance) const;
};

inline constexpr std::size_t largest_ground_space = std::size_t{1} << 16;

/// Takes states from fresh `levels` until the ground space is complete.
GroundSpace find_ground_space(Levels& levels, double window, const Context& context);

}  // namespace chainmark::fermion
