#include "chainmark/sector/momentum.hpp"

#include <algorithm>
#include <bit>
#include <cmath>
#include <mutex>

#include <Eigen/Core>

#include "chainmark/base/hermitian_eigen.hpp"
#include "chainmark/base/numerics.hpp"
#include "chainmark/base/parallel.hpp"

namespace chainmark::sector {
namespace {

using Complex = std::complex<double>;
using Orbit = Orbits::Orbit;

/// Every site moves up by one, site L-1 to 0.
std::uint64_t rotated(std::uint64_t state, int length) {
    const std::uint64_t mask = (std::uint64_t{1} << length) - 1;
    return ((state << 1) & mask) | (state >> (length - 1));
}

/// state = (translation by `steps`) of `representative`, in which `carried` up spins went around
/// the end of the ring.
struct Reduced {
    std::uint64_t representative;
    int steps;
    int carried;
};

Reduced reduce(std::uint64_t state, int length) {
    // Walk on from the state; the smallest image, m steps on, is the representative, so the state
    // is L - m steps on from it.
    Reduced best{state, 0, 0};
    std::uint64_t image = state;
    int around = 0;
    for (int step = 1; step < length; ++step) {
        around += static_cast<int>(image >> (length - 1));
        image = rotated(image, length);
        if (image < best.representative) {
            best = {image, step, around};
        }
    }
    if (best.steps > 0) {
        best.steps = length - best.steps;
        best.carried = std::popcount(state) - best.carried;
    }
    return best;
}

struct MomentumBlock {
    Eigen::MatrixXcd matrix;
    /// Largest sum over a column of |contributions|, before they cancel: the scale of rounding.
    double weight = 0.0;
};

class BlockBuilder {
public:
    BlockBuilder(const Chain& chain, const std::vector<BitTerm>& terms)
        : chain_(chain), terms_(terms) {}

    MomentumBlock build(const SectorLabel& sector, const std::vector<Orbit>& orbits, int n) const {
        const int length = chain_.length();
        const double k = (2 * pi * n + chain_.twist * sector.value) / length;
        const auto size = static_cast<Eigen::Index>(orbits.size());
        MomentumBlock block{Eigen::MatrixXcd::Zero(size, size)};
        for (Eigen::Index column = 0; column < size; ++column) {
            double weight = 0.0;
            const Orbit& a = orbits[static_cast<std::size_t>(column)];
            for (const BitTerm& term : terms_) {
                if (!term.acts_on(a.representative)) {
                    continue;
                }
                const Reduced to = reduce(a.representative ^ term.flip, length);
                const auto at = std::lower_bound(
                    orbits.begin(), orbits.end(), to.representative, [](const Orbit& o, auto r) {
                        return o.representative < r;
                    });
                if (at == orbits.end() || at->representative != to.representative) {
                    continue;  // that orbit carries no state of this momentum
                }
                // T^l |b> = exp(-i twist carried) |s>, so |s> = exp(+i twist carried) T^l |b>.
                const Complex phase = std::polar(1.0, chain_.twist * to.carried - k * to.steps);
                const Complex contribution = term.amplitude(a.representative) * phase *
                                             std::sqrt(static_cast<double>(a.period) / at->period);
                block.matrix(at - orbits.begin(), column) += contribution;
                weight += std::abs(contribution);
            }
            block.weight = std::max(block.weight, weight);
        }
        return block;
    }

private:
    const Chain& chain_;
    const std::vector<BitTerm>& terms_;
};

/// Eigenvalues with bounds from measured residuals.
std::vector<LabelledLevel> solved(const MomentumBlock& block) {
    const HermitianEigen<Complex> solution = hermitian_eigen(block.matrix);
    const Eigen::Index size = block.matrix.rows();
    // Every contribution carries a few roundings (its phase and root, the sums, the product).
    const double noise = 16 * epsilon * block.weight;
    const Eigen::VectorXd residuals =
        (block.matrix * solution.vectors - solution.vectors * solution.values.asDiagonal())
            .colwise()
            .norm()
            .transpose()
            .array() +
        noise;
    const Eigen::VectorXd bounds = cluster_bounds(solution.values, residuals);
    std::vector<LabelledLevel> levels;
    for (Eigen::Index i = 0; i < size; ++i) {
        levels.push_back({solution.values[i], bounds[i], {}});
    }
    return levels;
}

}  // namespace

Orbits::Orbits(SectorLabel sector, const Chain& chain) : sector_(sector), chain_(chain) {
    const int length = chain.length();
    const SectorBasis basis(sector, length);
    for (const std::uint64_t state : basis.states()) {
        std::uint64_t image = state;
        int period = 0;
        do {
            image = rotated(image, length);
            ++period;
        } while (image > state);
        if (image == state) {
            orbits_.push_back({state, period});
        }
    }
}

std::vector<Orbit> Orbits::with_momentum(int n) const {
    // Over one period N_up period / L up spins go around, so T^period |s> has the phase
    // exp(-i twist N_up period / L). Where only the parity is conserved the twist is 0 or pi, and
    // twist (N_up - N) is a multiple of 2 pi that moves n.
    const bool half_turn = chain_.twist == pi && sector_.conserved == Conserved::parity;
    std::vector<Orbit> result;
    for (const Orbit& orbit : orbits_) {
        const int up = std::popcount(orbit.representative);
        const int moved = half_turn ? n - (up - sector_.value) / 2 : n;
        if (moved * orbit.period % chain_.length() == 0) {
            result.push_back(orbit);
        }
    }
    return result;
}

std::size_t Orbits::largest_block() const {
    return orbits_.size();
}

std::size_t largest_momentum_block(Conserved conserved, const Chain& chain) {
    std::size_t largest = 0;
    for (const SectorLabel& sector : sectors_of(conserved, chain.length())) {
        largest = std::max(largest, Orbits(sector, chain).largest_block());
    }
    return largest;
}

std::vector<LabelledLevel> momentum_levels(const Chain& chain,
                                           Conserved conserved,
                                           const std::vector<BitTerm>& terms,
                                           bool real,
                                           const Context& context) {
    const int length = chain.length();
    // Complex conjugation takes k to -k, which is n to -n only without a twist.
    const bool mirror = real && chain.twist == 0.0;
    struct Job {
        SectorLabel sector;
        std::vector<Orbit> orbits;
        int n;
    };
    std::vector<Job> jobs;
    for (const SectorLabel& sector : sectors_of(conserved, length)) {
        const Orbits orbits(sector, chain);
        for (int n = mirror ? 0 : -((length - 1) / 2); n <= length / 2; ++n) {
            jobs.push_back({sector, orbits.with_momentum(n), n});
        }
    }
    std::erase_if(jobs, [](const Job& job) { return job.orbits.empty(); });
    std::stable_sort(jobs.begin(), jobs.end(), [](const Job& a, const Job& b) {
        return a.orbits.size() > b.orbits.size();
    });
    const BlockBuilder builder(chain, terms);
    std::vector<LabelledLevel> levels;
    std::mutex mutex;
    const BlasThreads single(1);
    parallel_for(jobs.size(), context.threads, [&](std::size_t j) {
        poll(context);
        const Job& job = jobs[j];
        std::vector<LabelledLevel> found = solved(builder.build(job.sector, job.orbits, job.n));
        const std::lock_guard lock(mutex);
        const bool mirrored = mirror && job.n > 0 && 2 * job.n != length;
        for (LabelledLevel& level : found) {
            level.labels = labels_of(job.sector, length);
            level.labels.momentum = job.n;
            levels.push_back(level);
            if (mirrored) {
                level.labels.momentum = -job.n;
                levels.push_back(level);
            }
        }
    });
    return levels;
}

}  // namespace chainmark::sector
