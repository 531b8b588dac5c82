#pragma once

#include <benchmark/benchmark.h>

#include "chainmark/base/big_vector.hpp"

namespace chainmark::bench {

/// Memory bandwidth: passes over three arrays of 160 MB, much more than the caches hold.
class Stream {
public:
    Stream();

    /// a = b + 3 c
    void triad(int threads);
    /// The sum of a, kept so that it is computed.
    void read(int threads);

    /// Bytes of one pass as STREAM counts them: without the lines that are read before they are
    /// written (J. D. McCalpin, IEEE TCCA Newsletter, December 1995; quoted from memory).
    double triad_bytes() const { return 24.0 * static_cast<double>(a_.size()); }
    double read_bytes() const { return 8.0 * static_cast<double>(a_.size()); }

private:
    BigVector<double> a_;
    BigVector<double> b_;
    BigVector<double> c_;
    double sum_ = 0.0;
};

/// GB/s of triad and reading on one thread and on all.
void measure_stream(benchmark::State& state);

}  // namespace chainmark::bench
