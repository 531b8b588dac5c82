#pragma once

#include <array>
#include <functional>
#include <optional>
#include <vector>

#include "chainmark/fermion/ball.hpp"
#include "chainmark/reference/problem.hpp"

/// Ground states of uniform chains in ball arithmetic.
namespace chainmark::fermion {

/// sum_j hop (S+_j S-_{j+1} + h.c.) + pair (S+_j S+_{j+1} + h.c.) - field sum_j Sz_j + constant,
/// on a ring or, without pairs, with free ends.
struct UniformCouplings {
    int length = 0;
    bool ring = false;
    bool antiperiodic = false;  ///< the wrap bond has the opposite sign
    double hop = 0.0;
    double pair = 0.0;
    std::array<double, 2> field_parts = {0.0, 0.0};  ///< their sum is the field, exactly
    double constant = 0.0;
    double window = 0.0;  ///< levels as near as this are one ground space
};

/// Nothing where the chain is no such one.
std::optional<UniformCouplings> recognise_uniform(const Problem& problem);

/// What is known of the ground state. Without `unique` there is the energy alone.
struct BallGround {
    Ball energy = {};
    bool unique = false;                    ///< certainly no other level within the window
    Ball gap = {};                          ///< to the next level
    Ball magnetization = {};                ///< (1/L) sum <Sz_j>
    std::function<Ball(int, int)> zz = {};  ///< <Sz_i Sz_j>, i != j
    std::function<Ball(int)> local = {};    ///< <Sz_j>
};

/// Nothing where the precision does not decide signs.
std::optional<BallGround> ground_of_ring(const UniformCouplings& chain);
std::optional<BallGround> ground_of_open_chain(const UniformCouplings& chain);

}  // namespace chainmark::fermion
