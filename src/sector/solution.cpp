#include "chainmark/sector/solution.hpp"

#include <algorithm>
#include <cmath>
#include <limits>
#include <map>
#include <set>

#include <fmt/format.h>

#include "chainmark/base/error.hpp"
#include "chainmark/base/hermitian_eigen.hpp"
#include "chainmark/base/numerics.hpp"
#include "chainmark/base/parallel.hpp"

namespace chainmark::sector {
namespace {

constexpr double infinity = std::numeric_limits<double>::infinity();

/// Blocks up to this size are solved side by side, one thread each; larger ones one after the other
/// on all threads.
constexpr double side_by_side = 20000;

/// Sorts levels of several sectors and gives each rank its bound.
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

/// energy + constant - field sz; adds the rounding of the sum to `bound`.
double shifted(double energy, double constant, double zeeman, double& bound) {
    bound += epsilon * (std::abs(energy) + std::abs(constant) + std::abs(zeeman));
    return energy + constant + zeeman;
}

}  // namespace

Solution::Solution(const Problem& problem, const Context& context, bool use_inversion)
    : context_(context), chain_(problem.chain), constant_(problem.terms->constant) {
    // Where Sz is conserved without the field, it is conserved with it.
    Symmetries found = find_symmetries(chain_, *problem.terms);
    TermList list = *problem.terms;
    if (found.conserved != Conserved::up_count) {
        list = full_terms(problem);
        found = find_symmetries(chain_, list);
    }
    if (!use_inversion) {
        found.inversion = false;
        found.why_no_inversion = "not used here";
    }
    hamiltonian_ = std::make_unique<SectorHamiltonian>(chain_, found, list.terms);
    sectors_ = sectors_of(chain_, symmetries());
    blocks_.resize(sectors_.size());
    for (std::size_t i = 0; i < sectors_.size(); ++i) {
        if (sectors_[i].twin == i) {
            blocks_[i] = make_block(sectors_[i], *hamiltonian_);
        }
    }
    minima_.resize(static_cast<std::size_t>(values().back()) + 1);
}

Labels Solution::labels(std::size_t sector) const {
    return labels_of(chain_, symmetries(), sectors_[sector]);
}

std::vector<int> Solution::values() const {
    std::vector<int> result;
    for (const Sector& sector : sectors_) {
        if (result.empty() || result.back() != sector.label.value) {
            result.push_back(sector.label.value);
        }
    }
    return result;
}

std::vector<std::size_t> Solution::sectors_with(int value) const {
    std::vector<std::size_t> result;
    for (std::size_t i = 0; i < sectors_.size(); ++i) {
        if (sectors_[i].label.value == value) {
            result.push_back(i);
        }
    }
    return result;
}

SectorLevel Solution::at(std::size_t sector, std::size_t level, double field) const {
    const Block& block = block_of(sector);
    double bound = block.bound(level);
    const double zeeman = field_outside() ? -field * sz_of(sectors_[sector].label.value) : 0.0;
    const double energy = shifted(block.energy(level), constant_, zeeman, bound);
    return {sector, level, energy, bound};
}

Completeness Solution::completeness(const Problem& problem, double energy, const Accept& accept) {
    const auto proved_for = [&](std::size_t sector) {
        const int value = sectors_[sector].label.value;
        const double zeeman = field_outside() ? -problem.field * sz_of(value) : 0.0;
        Block& block = *blocks_[sectors_[sector].twin];
        if (block.all_known()) {
            return true;
        }
        if (hamiltonian_->sign_rotation) {
            // The lowest level of the value is single, so all others lie above it.
            const std::optional<SectorLevel>& lowest = minima_[static_cast<std::size_t>(value)];
            if (lowest && lowest->energy - lowest->bound + zeeman > energy) {
                return true;
            }
            const bool only_the_lowest =
                block.known() > 0 && energy - zeeman - constant_ < block.energy(0) + block.bound(0);
            if (only_the_lowest && holds_positive_state(*hamiltonian_->sign_rotation,
                                                        sectors_[sectors_[sector].twin])) {
                return true;
            }
        }
        const double without_field = energy - zeeman - constant_;
        block.count_up_to(without_field, context_);
        return block.counted_up_to(without_field);
    };
    for (std::size_t sector = 0; sector < sectors_.size(); ++sector) {
        if (accept(sector) && block_of(sector).dim() > 0 && !proved_for(sector)) {
            return Completeness::tested;
        }
    }
    return Completeness::proved;
}

/// Makes `beyond_known` more levels known in each of the sectors (twins once).
void Solution::extend(const std::vector<std::size_t>& sectors, std::size_t beyond_known, Aim aim) {
    std::set<std::size_t> twins;
    for (const std::size_t sector : sectors) {
        twins.insert(sectors_[sector].twin);
    }
    std::vector<Block*> small;
    std::vector<Block*> large;
    for (const std::size_t twin : twins) {
        if (blocks_[twin]->dim() > 0) {
            (blocks_[twin]->dim() <= side_by_side ? small : large).push_back(blocks_[twin].get());
        }
    }
    std::stable_sort(small.begin(), small.end(), [](const Block* a, const Block* b) {
        return a->dim() > b->dim();
    });
    const auto solve = [&](Block& block, const Context& context) {
        block.extend(block.known() + beyond_known, aim, context);
    };
    {
        const BlasThreads single(1);
        Context one = context_;
        one.threads = 1;
        parallel_for(small.size(), context_.threads, [&](std::size_t i) {
            poll(context_);
            solve(*small[i], one);
        });
    }
    for (Block* block : large) {
        solve(*block, context_);
        block->forget_operator();
    }
}

SectorLevel Solution::minimum(int value) {
    std::optional<SectorLevel>& known = minima_[static_cast<std::size_t>(value)];
    if (known) {
        return *known;
    }
    std::vector<std::size_t> candidates;
    for (const std::size_t sector : sectors_with(value)) {
        const bool can_hold =
            !hamiltonian_->sign_rotation ||
            holds_positive_state(*hamiltonian_->sign_rotation, sectors_[sectors_[sector].twin]);
        if (can_hold && block_of(sector).known() == 0) {
            candidates.push_back(sector);
        }
    }
    extend(candidates, 1, Aim::value);
    for (const std::size_t sector : sectors_with(value)) {
        if (block_of(sector).known() > 0) {
            const SectorLevel level = at(sector, 0, 0.0);
            if (!known || level.energy < known->energy) {
                known = level;
            }
        }
    }
    return *known;
}

double Solution::floor_of(int value) const {
    const std::optional<SectorLevel>& known = minima_[static_cast<std::size_t>(value)];
    if (known) {
        return known->energy - known->bound;
    }
    if (!field_outside()) {
        return -infinity;
    }
    double floor = lower_bound_of(*hamiltonian_, value) + constant_;
    floor -= 2 * epsilon * std::abs(constant_);
    // Every multiplet that reaches this Sz reaches every smaller one of the same sign.
    if (symmetries().rotation) {
        for (std::size_t other = 0; other < minima_.size(); ++other) {
            const bool inside = std::abs(sz_of(static_cast<int>(other))) <= std::abs(sz_of(value));
            if (minima_[other] && inside) {
                floor = std::max(floor, minima_[other]->energy - minima_[other]->bound);
            }
        }
    }
    return floor;
}

namespace {

/// "Sz = 3, 4, 5" or "Sz = 3 ... 9".
std::string list_of_sz(std::vector<double> values) {
    std::sort(values.begin(), values.end());
    if (values.size() > 3 &&
        values.back() - values.front() == static_cast<double>(values.size() - 1)) {
        return fmt::format("Sz = {} ... {}", values.front(), values.back());
    }
    return fmt::format("Sz = {}", fmt::join(values, ", "));
}

}  // namespace

GroundEnergy Solution::ground_energy(const Problem& problem) {
    const double field = field_outside() ? problem.field : 0.0;
    const auto zeeman = [&](int value) { return field_outside() ? -field * sz_of(value) : 0.0; };
    std::vector<int> order = values();
    if (field_outside()) {  // the middle first, where its level is lowest as a rule
        std::stable_sort(order.begin(), order.end(), [&](int a, int b) {
            return std::pair(std::abs(sz_of(a)), -sz_of(a) * field) <
                   std::pair(std::abs(sz_of(b)), -sz_of(b) * field);
        });
    }
    GroundEnergy ground;
    ground.energy = infinity;
    std::map<Excluded, std::vector<double>> left_out;
    std::vector<double> by_bound;
    double lowest_possible = infinity;
    std::size_t lowest_sector = 0;
    for (const int value : order) {
        const Excluded reason = excluded(*hamiltonian_, value, field);
        if (reason != Excluded::no) {
            left_out[reason].push_back(sz_of(value));
            continue;
        }
        if (floor_of(value) + zeeman(value) > ground.energy + ground.bound) {
            by_bound.push_back(sz_of(value));
            continue;
        }
        const SectorLevel level = minimum(value);
        double bound = level.bound;
        const double energy = shifted(level.energy, 0.0, zeeman(value), bound);
        lowest_possible = std::min(lowest_possible, energy - bound);
        if (energy < ground.energy) {
            ground.energy = energy;
            ground.bound = bound;
            lowest_sector = level.sector;
        }
    }
    ground.bound = std::max(ground.bound, ground.energy - lowest_possible);
    // One level alone: what could be missing is a lower one.
    ground.complete = hamiltonian_->sign_rotation || block_of(lowest_sector).all_known()
                          ? Completeness::proved
                          : Completeness::tested;
    const auto report = [&](const std::vector<double>& skipped, const char* proof) {
        if (!skipped.empty()) {
            ground.skipped.push_back({list_of_sz(skipped), proof});
        }
    };
    report(left_out[Excluded::by_inversion],
           "spin inversion: Sz and -Sz have the same levels without the field");
    report(left_out[Excluded::by_spin],
           "total spin is conserved: every multiplet has a state of the smallest |Sz|");
    report(left_out[Excluded::by_positivity],
           "reflection positivity: no Sz has a level below the lowest one at Sz = 0");
    report(by_bound, "Gershgorin: all their levels lie above one that was found");
    if (hamiltonian_->sign_rotation && sectors_with(order.front()).size() > 1) {
        ground.skipped.push_back(
            {"other momenta, reflections and inversions of each Sz",
             "Perron-Frobenius: after a rotation of single spins about z all off-diagonal elements "
             "are zero or negative and connect all states of an Sz, so its lowest level is single "
             "and has the symmetries of the positive state"});
    }
    return ground;
}

// One loop with its exits: what it decides by is local to it.
// NOLINTNEXTLINE(readability-function-cognitive-complexity)
std::vector<SectorLevel> Solution::lowest(const Problem& problem,
                                          std::size_t count,
                                          const Accept& accept) {
    const double field = problem.field;
    std::vector<std::size_t> pool;
    for (std::size_t i = 0; i < sectors_.size(); ++i) {
        if (accept(i) && block_of(i).dim() > 0) {
            pool.push_back(i);
        }
    }
    // No level of a sector can be lower than this.
    const auto floor = [&](std::size_t sector) {
        const Block& block = block_of(sector);
        const int value = sectors_[sector].label.value;
        if (block.known() > 0) {
            const SectorLevel last = at(sector, block.known() - 1, field);
            return block.all_known() ? infinity : last.energy - last.bound;
        }
        return floor_of(value) + (field_outside() ? -field * sz_of(value) : 0.0);
    };
    while (true) {
        std::vector<SectorLevel> levels;
        for (const std::size_t sector : pool) {
            for (std::size_t i = 0; i < block_of(sector).known(); ++i) {
                levels.push_back(at(sector, i, field));
            }
        }
        sort_by_energy(levels);
        const bool enough = levels.size() >= count;
        const double last =
            enough && count > 0 ? levels[count - 1].energy + levels[count - 1].bound : infinity;
        // A sector belongs to the round if it can hold a level below the last of the list; while
        // the list is short, those with the lowest floor do. Where the lowest level of an Sz is
        // not known, finding it comes first: it is a floor for all sectors of that Sz.
        double nearest = infinity;
        for (const std::size_t sector : pool) {
            nearest = std::min(nearest, floor(sector));
        }
        std::vector<std::size_t> round;
        std::optional<int> unknown;
        for (const std::size_t sector : pool) {
            const double lower = floor(sector);
            if (lower == infinity || lower > (enough ? last : nearest)) {
                continue;
            }
            const int value = sectors_[sector].label.value;
            if (field_outside() && !minima_[static_cast<std::size_t>(value)]) {
                const bool nearer = !unknown || std::abs(sz_of(value)) < std::abs(sz_of(*unknown));
                unknown = nearer ? value : unknown;
            } else {
                round.push_back(sector);
            }
        }
        if (unknown) {
            minimum(*unknown);
            continue;
        }
        if (round.empty()) {
            if (enough) {
                levels.resize(count);
            }
            return levels;
        }
        extend(round, 1, Aim::vector);
    }
}

GroundSpace Solution::ground_space(const Problem& problem) {
    const double window = ground_window(problem);
    GroundSpace ground;
    const auto everything = [](std::size_t) { return true; };
    // One level more than the window holds: grow the list until its last level is outside.
    std::size_t count = 2;
    std::vector<SectorLevel> levels;
    while (true) {
        levels = lowest(problem, count, everything);
        const bool all = levels.size() < count;
        if (all || levels.back().energy - levels.front().energy > window) {
            break;
        }
        count *= 2;
    }
    for (const SectorLevel& level : levels) {
        const double distance = level.energy - levels.front().energy - window;
        if (window > 0 && std::abs(distance) <= level.bound + levels.front().bound) {
            ground.straddles = true;
        }
        if (distance <= 0) {
            ground.members.push_back(level);
        } else {
            ground.next = level;
            break;
        }
    }
    ground.complete = completeness(problem, ground.members.back().energy, everything);
    return ground;
}

std::vector<Solution::SzMinimum> Solution::lowest_by_sz() {
    CHAINMARK_EXPECTS(field_outside());
    std::vector<SzMinimum> result;
    for (const int value : values()) {
        const SectorLevel level = minimum(value);
        result.push_back({sz_of(value), level.energy, level.bound});
    }
    return result;
}

void Solution::for_each_solved_block(const Visit& visit) {
    std::vector<std::size_t> order;
    for (std::size_t i = 0; i < blocks_.size(); ++i) {
        if (blocks_[i] && blocks_[i]->dim() > 0) {
            order.push_back(i);
        }
    }
    std::stable_sort(order.begin(), order.end(), [&](std::size_t a, std::size_t b) {
        return blocks_[a]->dim() > blocks_[b]->dim();
    });
    const auto solve = [&](std::size_t twin, const Context& context) {
        poll(context_);
        blocks_[twin]->solve_completely(context);
        visit(twin, *blocks_[twin], context);
        blocks_[twin]->forget();
    };
    // Large blocks one by one with a threaded LAPACK, then the others side by side.
    constexpr double threaded = 2500;
    const auto first_small = std::find_if(
        order.begin(), order.end(), [&](std::size_t i) { return blocks_[i]->dim() < threaded; });
    {
        const BlasThreads all(context_.threads);
        for (auto twin = order.begin(); twin != first_small; ++twin) {
            solve(*twin, context_);
        }
    }
    const BlasThreads single(1);
    Context one = context_;
    one.threads = 1;
    const auto start = static_cast<std::size_t>(first_small - order.begin());
    parallel_for(order.size() - start, context_.threads, [&](std::size_t i) {
        solve(order[start + i], one);
    });
    all_solved_ = true;
}

std::vector<LabelledLevel> Solution::all_levels(const Problem& problem) {
    if (!all_solved_) {
        for_each_solved_block([](std::size_t, const Block&, const Context&) {});
    }
    std::vector<LabelledLevel> levels;
    for (std::size_t i = 0; i < sectors_.size(); ++i) {
        const Labels of_sector = labels(i);
        for (std::size_t k = 0; k < block_of(i).known(); ++k) {
            const SectorLevel level = at(i, k, problem.field);
            levels.push_back({level.energy, level.bound, of_sector});
        }
    }
    sort_by_energy(levels);
    return levels;
}

}  // namespace chainmark::sector
