#pragma once

#include <benchmark/benchmark.h>

#include "bench/rings.hpp"

namespace chainmark::bench {

/// The ground state of the full Sz = 0 sector to a residual of 1e-12: ours beside a plain Lanczos
/// recurrence, Spectra, and SLEPc on as many processes as cores where it was found.
void measure_ground_state(benchmark::State& state, const Ring& ring);

/// The four lowest levels of the XX ring in the Sz = 0 sector, whose second level is four-fold:
/// how many copies of it ours and the others report.
void measure_four_lowest(benchmark::State& state, const Ring& ring);

}  // namespace chainmark::bench
