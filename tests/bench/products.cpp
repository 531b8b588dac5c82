#include "bench/products.hpp"

#include <bit>
#include <cmath>
#include <stdexcept>

#include "bench/csr.hpp"
#include "bench/stream.hpp"
#include "bench/timing.hpp"
#include "chainmark/base/parallel.hpp"
#include "chainmark/sector/halves_operator.hpp"
#include "chainmark/sector/lanczos.hpp"
#include "chainmark/sector/orbit_operator.hpp"
#include "chainmark/sector/start_vector.hpp"

namespace chainmark::bench {
namespace {

using sector::OrbitBasis;
using sector::OrbitRows;
using Operator = sector::LinearOperator<double>;

/// Off-diagonal elements of all rows.
double count_elements(const OrbitRows<double>& rows) {
    double count = 0.0;
    sector::for_each_row(
        rows,
        0,
        rows.basis().dim(),
        [&](std::int64_t /*row*/, const std::uint32_t* /*columns*/, const std::uint32_t*, int n) {
            count += n;
        });
    return count;
}

/// Least traffic of a product with stored elements (see `make_stored`): the elements, two bytes
/// for a row's length, its diagonal, x and y.
double stored_traffic(const OrbitRows<double>& rows, double elements) {
    const auto bits = std::bit_width(static_cast<std::uint64_t>(rows.basis().dim() - 1)) +
                      std::bit_width(rows.coefficients().size() - 1);
    const double per_row = 2.0 + 16.0 + (rows.op().diagonal().empty() ? 0.0 : 8.0);
    return elements * (bits <= 32 ? 4.0 : 8.0) + per_row * static_cast<double>(rows.basis().dim());
}

void check_equal(const BigVector<double>& a, const BigVector<double>& b) {
    double largest = 0.0;
    for (std::size_t i = 0; i < a.size(); ++i) {
        largest = std::max(largest, std::abs(a[i] - b[i]));
    }
    // Rows of up to L elements between numbers below 1.
    if (!(largest < 1e-13)) {
        throw std::logic_error("two products with the same matrix differ by " +
                               std::to_string(largest));
    }
}

BigVector<double> start_vector(std::int64_t dim) {
    BigVector<double> x(static_cast<std::size_t>(dim));
    for (std::size_t i = 0; i < x.size(); ++i) {
        x[i] = std::sin(static_cast<double>(i));
    }
    return x;
}

Task product(const Operator& op, const BigVector<double>& x, BigVector<double>& y) {
    return [&] { op.multiply(x.data(), y.data(), 1.0, 0.0); };
}

}  // namespace

void measure_full_product(benchmark::State& state, const Ring& ring) {
    const Context context = all_cores();
    const sector::SectorHamiltonian h = hamiltonian_of(ring);
    const sector::HalvesBasis basis = full_sector(ring);
    const OrbitBasis words(sector::Group{basis.packing()},
                           {.conserved = basis.conserved(), .value = basis.value()},
                           context);
    const OrbitRows<double> rows(words, h.packed);
    const auto halves = sector::make_by_halves<double>(basis, h.terms, context);
    const auto stored = sector::make_stored(rows, context);
    const CsrMatrix csr = csr_matrix(basis, h.packed, context);
    const BigVector<double> x = start_vector(basis.dim());
    BigVector<double> y(x.size());
    BigVector<double> z(x.size());
    multiply(csr, x.data(), z.data());
    for (const Operator* op : {halves.get(), stored.get()}) {
        op->multiply(x.data(), y.data(), 1.0, 0.0);
        check_equal(y, z);
    }
    Stream stream;
    while (state.KeepRunning()) {
        const std::vector<double> seconds = in_turn(5,
                                                    0.02,
                                                    {[&] { stream.triad(context.threads); },
                                                     product(*halves, x, y),
                                                     product(*stored, x, y),
                                                     [&] { multiply(csr, x.data(), y.data()); }});
        const double triad = stream.triad_bytes() / seconds[0];
        const double vectors = 16.0 * static_cast<double>(basis.dim());
        const double moved_stored = stored_traffic(rows, count_elements(rows));
        state.SetIterationTime(seconds[1]);
        state.counters["states"] = static_cast<double>(basis.dim());
        state.counters["halves_s"] = seconds[1];
        state.counters["stored_s"] = seconds[2];
        state.counters["csr_s"] = seconds[3];
        state.counters["csr/halves"] = seconds[3] / seconds[1];
        state.counters["csr/stored"] = seconds[3] / seconds[2];
        // What a plain product must move, per second of ours, in units of the triad.
        state.counters["halves_as_csr"] = csr_bytes(csr) / seconds[1] / triad;
        state.counters["csr_traffic"] = csr_bytes(csr) / seconds[3] / triad;
        state.counters["stored_traffic"] = moved_stored / seconds[2] / triad;
        state.counters["halves_traffic"] = vectors / seconds[1] / triad;
        state.counters["csr_bytes"] = csr_bytes(csr);
        state.counters["stored_bytes"] = moved_stored;
        state.counters["halves_bytes"] = vectors;
    }
}

void measure_symmetric_sector(benchmark::State& state, const Ring& ring) {
    const Context context = all_cores();
    const sector::SectorHamiltonian h = hamiltonian_of(ring);
    const sector::Sector ground = ground_sector(h);
    const double before = memory_of_process("VmRSS:");
    std::optional<OrbitBasis> basis;
    const double enumerate =
        seconds_of([&] { basis.emplace(ground.group, ground.label, context); });
    const double after_basis = memory_of_process("VmRSS:");
    const OrbitRows<double> rows(*basis, h.packed);
    std::unique_ptr<Operator> stored;
    const double build = seconds_of([&] { stored = sector::make_stored(rows, context); });
    const double after_elements = memory_of_process("VmRSS:");
    const auto computed = sector::make_matrix_free(rows, context);
    const auto dim = static_cast<double>(basis->dim());
    const double elements = count_elements(rows);
    const sector::StartVector guess_of_word(h, h.sign_rotation.value());
    const sector::StartFiller<double> guess = [&](double* x) {
        parallel_for(static_cast<std::size_t>(basis->dim()), context.threads, [&](std::size_t i) {
            x[i] = guess_of_word.amplitude(basis->word(static_cast<std::int64_t>(i)));
        });
    };
    const BigVector<double> x = start_vector(basis->dim());
    BigVector<double> y(x.size());
    BigVector<double> z(x.size());
    stored->multiply(x.data(), y.data(), 1.0, 0.0);
    computed->multiply(x.data(), z.data(), 1.0, 0.0);
    check_equal(y, z);
    while (state.KeepRunning()) {
        const std::vector<double> seconds =
            in_turn(3, 0.02, {product(*stored, x, y), product(*computed, x, y)});
        state.SetIterationTime(seconds[0]);
        state.counters["states"] = dim;
        state.counters["elements"] = elements;
        state.counters["enumerate_s"] = enumerate;
        state.counters["build_s"] = build;
        state.counters["stored_s"] = seconds[0];
        state.counters["solve_s"] = seconds_of([&] {
            sector::lowest_outside<double>(*stored, {}, sector::Aim::value, guess, context);
        });
        state.counters["stored_ns_per_state"] = seconds[0] / dim * 1e9;
        state.counters["stored_ns"] = seconds[0] / elements * 1e9;
        state.counters["computed_ns"] = seconds[1] / elements * 1e9;
        state.counters["basis_bytes_per_state"] = (after_basis - before) / dim;
        state.counters["stored_bytes_per_state"] = (after_elements - after_basis) / dim;
    }
}

}  // namespace chainmark::bench
