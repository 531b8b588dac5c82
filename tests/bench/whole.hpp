#pragma once

#include <benchmark/benchmark.h>

#include "bench/rings.hpp"

namespace chainmark::bench {

/// Ground energy with all symmetries in a process of its own: seconds all in, peak memory, bound,
/// and error against the Bethe equations. `memory`: bytes allowed; 0: what is free.
void measure_ground_energy(benchmark::State& state, const Ring& ring, double memory);

/// All 2^L levels, and free energy, entropy and specific heat at one and at 200 temperatures, each
/// with a solution of its own.
void measure_spectrum(benchmark::State& state, const Ring& ring);

}  // namespace chainmark::bench
