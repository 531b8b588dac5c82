#include "bench/eigenvalues.hpp"

#include <algorithm>
#include <cmath>
#include <stdexcept>

#include <fmt/format.h>

#include "bench/peers.hpp"
#include "bench/timing.hpp"
#include "chainmark/base/numerics.hpp"
#include "chainmark/sector/block.hpp"
#include "chainmark/sector/halves_operator.hpp"
#include "chainmark/sector/lanczos.hpp"

namespace chainmark::bench {
namespace {

using Pair = sector::EigenPair<double>;

constexpr double wanted_residual = 1e-12;

/// The `count` lowest levels of the full sector, all in: basis, operator, searches from random
/// vectors.
std::vector<Pair> ours(const Ring& ring, int count, const Context& context) {
    const sector::SectorHamiltonian h = hamiltonian_of(ring);
    const sector::HalvesBasis basis = full_sector(ring);
    const auto op = sector::make_by_halves<double>(basis, h.terms, context);
    std::vector<Pair> pairs;
    for (int i = 0; i < count; ++i) {
        pairs.push_back(
            sector::lowest_outside<double>(*op, pairs, sector::Aim::vector, {}, context));
    }
    return pairs;
}

/// The lowest level as the route finds it, from its guess of a ring's state.
double guided(const Ring& ring, const Context& context) {
    const sector::SectorHamiltonian h = hamiltonian_of(ring);
    const sector::Sector all{
        .label = {.conserved = sector::Conserved::up_count, .value = ring.sites / 2},
        .group = {.packing = sector::Packing(h.chain)}};
    const auto block = sector::make_block(all, h);
    block->extend(1, sector::Aim::vector, context);
    return block->energy(0);
}

/// Seconds of the solution and the levels by SLEPc; empty where the build has none.
std::vector<double> by_slepc([[maybe_unused]] const Ring& ring, [[maybe_unused]] int count) {
#ifdef CHAINMARK_BENCH_SLEPC
    return numbers_from(
        fmt::format(CHAINMARK_BENCH_SLEPC " {} {} {}", ring.name, ring.sites, count));
#else
    return {};
#endif
}

void require_close(double a, double b, const char* what) {
    if (!(std::abs(a - b) < 1e-11)) {
        throw std::logic_error(fmt::format("{}: {:.15g}, but ours is {:.15g}", what, a, b));
    }
}

/// E1 of the XX ring in Sz = 0, four-fold: one fermion moved over the edge of the filled band, in
/// the grid k = 2 pi (n + 1/2)/L for an even number of fermions and 2 pi n/L for an odd one
/// (E. Lieb, T. Schultz, D. Mattis, Ann. Phys. 16, 407 (1961); quoted from memory).
double second_level(int sites) {
    const double shift = sites % 4 == 0 ? 0.5 : 0.0;
    std::vector<double> energies;
    for (int n = 0; n < sites; ++n) {
        energies.push_back(std::cos(2 * pi * (n + shift) / sites));
    }
    std::sort(energies.begin(), energies.end());
    const auto filled = static_cast<std::size_t>(sites / 2);
    double sum = energies[filled] - energies[filled - 1];
    for (std::size_t i = 0; i < filled; ++i) {
        sum += energies[i];
    }
    return sum;
}

int copies_of(double level, const std::vector<double>& found) {
    return static_cast<int>(std::count_if(
        found.begin(), found.end(), [&](double value) { return std::abs(value - level) < 1e-9; }));
}

}  // namespace

void measure_ground_state(benchmark::State& state, const Ring& ring) {
    const Context context = all_cores();
    const sector::SectorHamiltonian h = hamiltonian_of(ring);
    CsrMatrix csr;
    const double assembly =
        seconds_of([&] { csr = csr_matrix(full_sector(ring), h.packed, context); });
    Pair pair;
    Solved lanczos;
    Solved spectra;
    double guided_energy = 0.0;
    const int rounds = ring.sites < 24 ? 3 : 1;
    while (state.KeepRunning()) {
        const std::vector<double> seconds =
            in_turn(rounds,
                    0.0,
                    {[&] { pair = std::move(ours(ring, 1, context).front()); },
                     [&] { lanczos = plain_lanczos(csr, wanted_residual); },
                     [&] { spectra = by_spectra(csr, 1); },
                     [&] { guided_energy = guided(ring, context); }});
        require_close(guided_energy, pair.value, "the guided search");
        require_close(lanczos.values[0], pair.value, "plain Lanczos");
        require_close(spectra.values[0], pair.value, "Spectra");
        state.SetIterationTime(seconds[0]);
        state.counters["ours_s"] = seconds[0];
        state.counters["ours_residual"] = pair.residual;
        state.counters["guided_s"] = seconds[3];
        state.counters["assembly_s"] = assembly;
        state.counters["lanczos_s"] = seconds[1];
        state.counters["lanczos_products"] = lanczos.products;
        state.counters["spectra_s"] = seconds[2];
        state.counters["spectra_residual"] = spectra.residual;
        state.counters["spectra_products"] = spectra.products;
        state.counters["lanczos/ours"] = seconds[1] / seconds[0];
        state.counters["spectra/ours"] = seconds[2] / seconds[0];
        const std::vector<double> slepc = by_slepc(ring, 1);
        if (!slepc.empty()) {
            require_close(slepc[1], pair.value, "SLEPc");
            state.counters["slepc_s"] = slepc[0];
            state.counters["slepc/ours"] = slepc[0] / seconds[0];
        }
    }
}

void measure_four_lowest(benchmark::State& state, const Ring& ring) {
    const Context context = all_cores();
    const CsrMatrix csr = csr_matrix(full_sector(ring), hamiltonian_of(ring).packed, context);
    const double second = second_level(ring.sites);
    std::vector<double> levels;
    Solved spectra;
    while (state.KeepRunning()) {
        const std::vector<double> seconds =
            in_turn(1,
                    0.0,
                    {[&] {
                         levels.clear();
                         for (const Pair& pair : ours(ring, 4, context)) {
                             levels.push_back(pair.value);
                         }
                     },
                     [&] { spectra = by_spectra(csr, 4); }});
        state.SetIterationTime(seconds[0]);
        state.counters["ours_s"] = seconds[0];
        state.counters["spectra_s"] = seconds[1];
        state.counters["ours_copies"] = copies_of(second, levels);
        state.counters["ours_last"] = levels.back();
        state.counters["spectra_copies"] = copies_of(second, spectra.values);
        state.counters["spectra_last"] = spectra.values.back();
        state.counters["E1"] = second;
        std::vector<double> slepc = by_slepc(ring, 4);
        if (!slepc.empty()) {
            state.counters["slepc_s"] = slepc[0];
            slepc.erase(slepc.begin());
            state.counters["slepc_copies"] = copies_of(second, slepc);
        }
    }
}

}  // namespace chainmark::bench
