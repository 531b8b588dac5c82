#include "bench/stream.hpp"

#include "bench/rings.hpp"
#include "bench/timing.hpp"

namespace chainmark::bench {
namespace {

constexpr std::int64_t length = 20'000'000;

}  // namespace

Stream::Stream() : a_(length), b_(length), c_(length) {
    double* const a = a_.data();
    double* const b = b_.data();
    double* const c = c_.data();
#pragma omp parallel for schedule(static)
    for (std::int64_t i = 0; i < length; ++i) {
        a[i] = 0.0;
        b[i] = 1.0;
        c[i] = 2.0;
    }
}

void Stream::triad(int threads) {
    double* const a = a_.data();
    const double* const b = b_.data();
    const double* const c = c_.data();
#pragma omp parallel for schedule(static) num_threads(threads)
    for (std::int64_t i = 0; i < length; ++i) {
        a[i] = b[i] + 3.0 * c[i];
    }
}

void Stream::read(int threads) {
    const double* const a = a_.data();
    double sum = 0.0;
#pragma omp parallel for simd schedule(static) num_threads(threads) reduction(+ : sum)
    for (std::int64_t i = 0; i < length; ++i) {
        sum += a[i];
    }
    benchmark::DoNotOptimize(sum_ = sum);
}

void measure_stream(benchmark::State& state) {
    Stream stream;
    const int all = all_cores().threads;
    while (state.KeepRunning()) {
        const std::vector<double> seconds = in_turn(5,
                                                    0.05,
                                                    {[&] { stream.triad(1); },
                                                     [&] { stream.triad(all); },
                                                     [&] { stream.read(1); },
                                                     [&] { stream.read(all); }});
        state.SetIterationTime(seconds[1]);
        state.counters["triad_1"] = stream.triad_bytes() / seconds[0] / 1e9;
        state.counters["triad_all"] = stream.triad_bytes() / seconds[1] / 1e9;
        state.counters["read_1"] = stream.read_bytes() / seconds[2] / 1e9;
        state.counters["read_all"] = stream.read_bytes() / seconds[3] / 1e9;
        state.counters["threads"] = all;
    }
}

}  // namespace chainmark::bench
