#include "chainmark/sector/solution.hpp"

#include <algorithm>
#include <cmath>
#include <numeric>

#include "chainmark/base/hermitian_eigen.hpp"
#include "chainmark/base/numerics.hpp"
#include "chainmark/base/parallel.hpp"

namespace chainmark::sector {
namespace {

/// Largest momentum block, and largest sector without momentum, that are solved completely.
constexpr std::size_t largest_momentum_size = 1500;
constexpr double largest_complete_sector = 4096;

/// Sorts levels of several blocks and gives each rank its bound.
template <class Level>
void sort_by_energy(std::vector<Level>& levels) {
    std::stable_sort(levels.begin(), levels.end(), [](const Level& a, const Level& b) {
        return a.energy < b.energy;
    });
    const auto size = static_cast<Eigen::Index>(levels.size());
    Eigen::VectorXd energies(size);
    Eigen::VectorXd bounds(size);
    for (Eigen::Index i = 0; i < size; ++i) {
        energies[i] = levels[static_cast<std::size_t>(i)].energy;
        bounds[i] = levels[static_cast<std::size_t>(i)].bound;
    }
    bounds = rank_bounds(energies, bounds);
    for (Eigen::Index i = 0; i < size; ++i) {
        levels[static_cast<std::size_t>(i)].bound = bounds[i];
    }
}

bool use_momentum(const Symmetries& symmetries, const Chain& chain) {
    // More sites than this have larger blocks in any sector; no need to enumerate them.
    constexpr int longest = 18;
    return symmetries.translation && chain.length() <= longest &&
           largest_momentum_block(symmetries.conserved, chain) <= largest_momentum_size;
}

}  // namespace

Solution::Solution(const Problem& problem, const Context& context)
    : context_(context),
      chain_(problem.chain),
      symmetries_(find_symmetries(problem.chain, *problem.terms)),
      constant_(problem.terms->constant) {
    terms_ = bit_terms(field_outside() ? problem.terms->terms : full_terms(problem).terms);
    for (const SectorLabel& sector : sectors_of(symmetries_.conserved, chain_.length())) {
        blocks_.emplace_back(sector, chain_.length());
    }
}

double Solution::shifted(double energy, double sz, double field, double& bound) const {
    const double zeeman = field_outside() ? -field * sz : 0.0;
    const double result = energy + constant_ + zeeman;
    bound += epsilon * (std::abs(energy) + std::abs(constant_) + std::abs(zeeman));
    return result;
}

BlockLevel Solution::at(std::size_t block, std::size_t level, double field) const {
    const Block& b = blocks_[block];
    double bound = b.bound(level);
    const double energy =
        shifted(b.energy(level), b.sector().value - chain_.length() / 2.0, field, bound);
    return {block, level, energy, bound};
}

void Solution::extend(std::size_t block, std::size_t count) {
    blocks_[block].extend(count, terms_, symmetries_.real, context_);
}

void Solution::extend_all() {
    if (blocks_.front().known() > 0) {
        return;
    }
    // Largest sectors first, each on one thread: the vector work of the Krylov solver is serial.
    std::vector<std::size_t> order(blocks_.size());
    std::iota(order.begin(), order.end(), std::size_t{0});
    std::stable_sort(order.begin(), order.end(), [&](std::size_t a, std::size_t b) {
        const auto middle = [&](std::size_t i) {
            return std::abs(2 * blocks_[i].sector().value - chain_.length());
        };
        return middle(a) < middle(b);
    });
    const BlasThreads single(1);
    Context one = context_;
    one.threads = 1;
    parallel_for(order.size(), context_.threads, [&](std::size_t i) {
        Block& block = blocks_[order[i]];
        block.extend(1, terms_, symmetries_.real, one);
        block.forget_matrix();
    });
}

std::vector<BlockLevel> Solution::known(double field) const {
    std::vector<BlockLevel> levels;
    for (std::size_t b = 0; b < blocks_.size(); ++b) {
        for (std::size_t i = 0; i < blocks_[b].known(); ++i) {
            levels.push_back(at(b, i, field));
        }
    }
    sort_by_energy(levels);
    return levels;
}

Completeness Solution::completeness(std::size_t block) const {
    return blocks_[block].all_known() ? Completeness::proved : Completeness::tested;
}

GroundSpace Solution::ground_space(const Problem& problem) {
    extend_all();
    const double field = problem.field;
    const double window = ground_window(problem);
    GroundSpace ground;
    const BlockLevel lowest = known(field).front();
    // A sector whose last known level lies inside the window may hold more of it, and the first
    // level outside belongs to the answer too (the gap, and the error of the states).
    for (std::size_t b = 0; b < blocks_.size(); ++b) {
        const auto last_is_inside = [&] {
            const BlockLevel last = at(b, blocks_[b].known() - 1, field);
            return last.energy - last.bound <= lowest.energy + window;
        };
        while (!blocks_[b].all_known() && last_is_inside()) {
            extend(b, blocks_[b].known() + 1);
        }
        blocks_[b].forget_matrix();
    }
    for (const BlockLevel& level : known(field)) {
        const double distance = level.energy - lowest.energy - window;
        if (window > 0 && std::abs(distance) <= level.bound + lowest.bound) {
            ground.straddles = true;
        }
        if (distance <= 0) {
            ground.members.push_back(level);
            if (completeness(level.block) == Completeness::tested) {
                ground.complete = Completeness::tested;
            }
        } else {
            ground.next = level;
            break;
        }
    }
    return ground;
}

std::vector<BlockLevel> Solution::lowest(const Problem& problem, std::size_t count) {
    extend_all();
    while (true) {
        std::vector<BlockLevel> levels = known(problem.field);
        if (levels.size() > count) {
            levels.resize(count);
        }
        // Complete once every sector is known beyond the last level of the list.
        const double last = levels.back().energy;
        bool complete = true;
        for (std::size_t b = 0; b < blocks_.size(); ++b) {
            const bool beyond = levels.size() == count &&
                                at(b, blocks_[b].known() - 1, problem.field).energy > last;
            if (!beyond && !blocks_[b].all_known()) {
                extend(b, blocks_[b].known() + 1);
                complete = false;
            }
        }
        if (complete) {
            std::for_each(blocks_.begin(), blocks_.end(), [](Block& b) { b.forget_matrix(); });
            return levels;
        }
    }
}

std::vector<Solution::SzMinimum> Solution::lowest_by_sz() {
    CHAINMARK_EXPECTS(field_outside());
    extend_all();
    std::vector<SzMinimum> result;
    for (std::size_t b = 0; b < blocks_.size(); ++b) {
        const BlockLevel level = at(b, 0, 0.0);
        const double sz = blocks_[b].sector().value - chain_.length() / 2.0;
        result.push_back({sz, level.energy, level.bound});
    }
    return result;
}

bool Solution::can_solve_completely(const Symmetries& symmetries, const Chain& chain) {
    if (use_momentum(symmetries, chain)) {
        return true;
    }
    const double limit =
        symmetries.real ? largest_complete_sector : static_cast<double>(Block::complex_dense_limit);
    return largest_sector(symmetries.conserved, chain.length()) <= limit;
}

std::vector<LabelledLevel> Solution::all_levels(const Problem& problem) {
    const int length = chain_.length();
    if (!all_) {
        all_.emplace();
        if (use_momentum(symmetries_, chain_)) {
            *all_ =
                momentum_levels(chain_, symmetries_.conserved, terms_, symmetries_.real, context_);
        } else {
            for (Block& block : blocks_) {
                block.solve_completely(terms_, symmetries_.real, context_);
                for (std::size_t i = 0; i < block.known(); ++i) {
                    all_->push_back(
                        {block.energy(i), block.bound(i), labels_of(block.sector(), length)});
                }
            }
        }
    }
    std::vector<LabelledLevel> levels = *all_;
    for (LabelledLevel& level : levels) {
        level.energy =
            shifted(level.energy, level.labels.sz.value_or(0.0), problem.field, level.bound);
    }
    sort_by_energy(levels);
    return levels;
}

}  // namespace chainmark::sector
