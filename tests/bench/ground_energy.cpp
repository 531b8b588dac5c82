/// bench_ground_energy RING SITES BYTES: prints seconds, energy, bound and the peak memory in bytes
/// of the ground energy with all symmetries. A process of its own, so that the peak is its own.

#include <cstdlib>
#include <stdexcept>

#include <fmt/format.h>

#include "bench/rings.hpp"
#include "bench/timing.hpp"
#include "chainmark/sector/solution.hpp"

namespace chainmark::bench {
namespace {

int run(const Ring& ring, double memory) {
    const Context context = memory > 0.0 ? all_cores(memory) : all_cores();
    sector::GroundEnergy found;
    const double seconds = seconds_of([&] {
        const Problem problem = problem_of(ring);
        found = sector::Solution(problem, context).ground_energy(problem);
    });
    fmt::print("{:.6g} {:.17g} {:.3g} {:.0f}\n",
               seconds,
               found.energy,
               found.bound,
               memory_of_process("VmHWM:"));
    return 0;
}

}  // namespace
}  // namespace chainmark::bench

int main(int argc, char** argv) {
    try {
        if (argc != 4) {
            throw std::invalid_argument("usage: bench_ground_energy RING SITES BYTES");
        }
        return chainmark::bench::run(chainmark::bench::ring_of(argv[1], std::stoi(argv[2])),
                                     std::stod(argv[3]));
    } catch (const std::exception& error) {
        fmt::print(stderr, "{}\n", error.what());
        return 1;
    }
}
