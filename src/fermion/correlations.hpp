#pragma once

#include <vector>

#include "chainmark/fermion/ground_space.hpp"

/// Expectation values averaged over a ground space, Tr(P A)/dim, by Wick's theorem for each of its
/// occupation states (they are an orthonormal basis).
namespace chainmark::fermion {

/// The pairs (first + s, second + s) mod L, s = 0 ... count-1.
struct PairFamily {
    int first = 0;
    int second = 0;
    int count = 1;
};

/// Numbers with a common bound on their errors.
struct Averages {
    std::vector<Real> value;
    Real error = 0.0L;
};

/// <Sz_j> for all sites j.
Averages average_sz(const Solution& solution,
                    Levels& levels,
                    const GroundSpace& ground,
                    const Context& context);

/// For each family the mean of <Sz_i Sz_j> over its pairs, with G_ij = <c+_i c_j>
///   <Sz_i Sz_j> = (G_ii - 1/2)(G_jj - 1/2) - |G_ij|^2  for i != j,  1/4 for i = j,
/// averaged over the space; `connected` subtracts <Sz_i><Sz_j>, averages, pair by pair.
Averages average_szsz(const Solution& solution,
                      Levels& levels,
                      const GroundSpace& ground,
                      const std::vector<PairFamily>& families,
                      bool connected,
                      const Context& context);

}  // namespace chainmark::fermion
