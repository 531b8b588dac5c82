#include "bench/whole.hpp"

#include <cmath>
#include <stdexcept>

#include <fmt/format.h>

#include "bench/timing.hpp"
#include "chainmark/reference/route.hpp"
#include "chainmark/sector/route.hpp"
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
    const auto curve = [&](int temperatures) {
        Batch batch;
        for (const QuantityId id :
             {QuantityId::free_energy, QuantityId::entropy, QuantityId::specific_heat}) {
            batch.queries.push_back({&spec_of(id), {}, spec_of(id).name});
        }
        for (int i = 0; i < temperatures; ++i) {
            batch.problems.push_back(problem);
            batch.problems.back().temperature = 0.01 * (i + 1);
        }
        for (const auto& answers : sector_route().evaluate(batch, all_cores())) {
            for (const Answer& answer : answers) {
                if (!std::holds_alternative<Reference>(answer)) {
                    throw std::logic_error("a temperature has no answer");
                }
            }
        }
    };
    while (state.KeepRunning()) {
        std::size_t levels = 0;
        const std::vector<double> seconds =
            in_turn(1,
                    0.0,
                    {[&] {
                         sector::Solution solution(problem, all_cores());
                         levels = solution.all_levels(problem).size();
                     },
                     [&] { curve(1); },
                     [&] { curve(200); }});
        state.SetIterationTime(seconds[0]);
        state.counters["seconds"] = seconds[0];
        state.counters["levels"] = static_cast<double>(levels);
        state.counters["one_temperature_s"] = seconds[1];
        state.counters["temperatures_s"] = seconds[2];
    }
}

}  // namespace chainmark::bench
