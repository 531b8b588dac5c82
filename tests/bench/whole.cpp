#include "bench/whole.hpp"

#include <cmath>

#include <fmt/format.h>

#include "bench/timing.hpp"
#include "chainmark/sector/solution.hpp"
#include "published/bethe.hpp"

namespace chainmark::bench {

void measure_ground_energy(benchmark::State& state, const Ring& ring, double memory) {
    const double exact = test::bethe_lowest(ring.sites, ring.sites / 2, ring.delta);
    while (state.KeepRunning()) {
        const std::vector<double> found = numbers_from(fmt::format(
            CHAINMARK_BENCH_GROUND_ENERGY " {} {} {:.0f}", ring.name, ring.sites, memory));
        state.SetIterationTime(found.at(0));
        state.counters["seconds"] = found.at(0);
        state.counters["error"] = std::abs(found.at(1) - exact);
        state.counters["bound"] = found.at(2);
        state.counters["peak_bytes"] = found.at(3);
        state.counters["allowed_bytes"] = memory;
    }
}

void measure_spectrum(benchmark::State& state, const Ring& ring) {
    const Problem problem = problem_of(ring);
    while (state.KeepRunning()) {
        std::size_t levels = 0;
        const double seconds = seconds_of([&] {
            sector::Solution solution(problem, all_cores());
            levels = solution.all_levels(problem).size();
        });
        state.SetIterationTime(seconds);
        state.counters["seconds"] = seconds;
        state.counters["levels"] = static_cast<double>(levels);
    }
}

}  // namespace chainmark::bench
