#pragma once

#include <benchmark/benchmark.h>

#include "bench/rings.hpp"

namespace chainmark::bench {

/// One product with H in the full Sz = 0 sector: by halves, with stored elements, and with Eigen's
/// compressed rows, beside the bandwidth of a triad in the same minute.
void measure_full_product(benchmark::State& state, const Ring& ring);

/// The sector of the ground state with all symmetries: time and memory of the basis, the stored
/// elements and the products.
void measure_symmetric_sector(benchmark::State& state, const Ring& ring);

}  // namespace chainmark::bench
