/// bench [--large] [options of Google Benchmark]. Every figure that is to be compared with another
/// is measured in turn with it; `scripts/bench` prints the tables. --large: rings of 34 and 36
/// sites, too, which take minutes and up to 12 GB.

#include <exception>
#include <string_view>

#include <benchmark/benchmark.h>
#include <fmt/format.h>

#include "bench/eigenvalues.hpp"
#include "bench/products.hpp"
#include "bench/stream.hpp"
#include "bench/whole.hpp"

namespace chainmark::bench {
namespace {

template <class Measure>
void add(const std::string& name, const Measure& measure) {
    benchmark::RegisterBenchmark(name.c_str(), measure)
        ->Iterations(1)
        ->UseManualTime()
        ->Unit(benchmark::kMillisecond);
}

void add_ground_energy(const Ring& ring) {
    const double memory = ring.sites == 32 ? 1e9 : 0.0;
    add("ground_energy/" + ring.label(),
        [=](benchmark::State& state) { measure_ground_energy(state, ring, memory); });
}

void add_all(bool large) {
    add("stream", measure_stream);
    for (const int sites : {20, 22, 24, 26}) {
        for (const Ring& ring : {xx(sites), heisenberg(sites)}) {
            add("product/" + ring.label(),
                [=](benchmark::State& state) { measure_full_product(state, ring); });
        }
    }
    for (const int sites : {20, 22, 24, 26, 28, 30, 32}) {
        const Ring ring = heisenberg(sites);
        add("sector/" + ring.label(),
            [=](benchmark::State& state) { measure_symmetric_sector(state, ring); });
    }
    for (const int sites : {20, 22, 24}) {
        for (const Ring& ring : {xx(sites), heisenberg(sites)}) {
            add("ground_state/" + ring.label(),
                [=](benchmark::State& state) { measure_ground_state(state, ring); });
        }
    }
    for (const int sites : {16, 18, 20, 22, 24}) {
        add("four_lowest/" + xx(sites).label(),
            [=](benchmark::State& state) { measure_four_lowest(state, xx(sites)); });
    }
    for (const int sites : {24, 28, 32, 34, 36}) {
        if (sites > 32 && !large) {
            continue;
        }
        for (const Ring& ring : {heisenberg(sites), xxz(sites), xx(sites)}) {
            add_ground_energy(ring);
        }
    }
    add("spectrum/" + xxz(16).label(),
        [](benchmark::State& state) { measure_spectrum(state, xxz(16)); });
}

}  // namespace
}  // namespace chainmark::bench

int main(int argc, char** argv) {
    benchmark::Initialize(&argc, argv);
    const bool large = argc == 2 && std::string_view(argv[1]) == "--large";
    if (argc > 1 && !large) {
        benchmark::ReportUnrecognizedArguments(argc, argv);
        return 1;
    }
    try {
        chainmark::bench::add_all(large);
        benchmark::RunSpecifiedBenchmarks();
    } catch (const std::exception& error) {
        fmt::print(stderr, "bench: {}\n", error.what());
        return 1;
    }
    return 0;
}
