#include "chainmark/sector/route.hpp"

#include <algorithm>
#include <cmath>
#include <set>
#include <stdexcept>

#include <fmt/format.h>

#include "chainmark/base/numerics.hpp"
#include "chainmark/sector/observable.hpp"
#include "chainmark/sector/solution.hpp"

namespace chainmark {
namespace {

using namespace sector;

constexpr int largest_length = 62;  // configurations are 64-bit integers

bool covers(QuantityId id) {
    switch (id) {
        case QuantityId::mode_energies:
        case QuantityId::fermi_momentum:
        case QuantityId::phase:
            return false;
        default:
            return true;
    }
}

/// Jumps of the ground state's total Sz in a uniform field.
struct Staircase {
    std::vector<double> fields;
    std::vector<double> bounds;
    std::vector<double> sz;  ///< one more than fields
};

/// The lower convex hull of (Sz, E): in the field h the ground state minimizes E - h Sz, so the
/// corners are the Sz that become ground states and the slopes between them the fields. Fields that
/// lie within `window` of the next are one jump.
Staircase staircase(const std::vector<Solution::SzMinimum>& lowest, double window) {
    const auto slope = [](const auto& a, const auto& b) {
        return (b.energy - a.energy) / (b.sz - a.sz);
    };
    std::vector<Solution::SzMinimum> hull;
    for (const auto& point : lowest) {
        while (hull.size() >= 2 &&
               slope(hull[hull.size() - 2], hull.back()) >= slope(hull.back(), point)) {
            hull.pop_back();
        }
        hull.push_back(point);
    }
    Staircase result;
    result.sz.push_back(hull.front().sz);
    for (std::size_t from = 0; from + 1 < hull.size();) {
        std::size_t to = from + 1;
        while (to + 1 < hull.size() &&
               slope(hull[to], hull[to + 1]) - slope(hull[to - 1], hull[to]) <= window) {
            ++to;
        }
        const double step = hull[to].sz - hull[from].sz;
        const double field = slope(hull[from], hull[to]);
        result.fields.push_back(field);
        result.bounds.push_back((hull[to].bound + hull[from].bound) / step +
                                2 * epsilon * std::abs(field));
        result.sz.push_back(hull[to].sz);
        from = to;
    }
    return result;
}

class Evaluator {
public:
    Evaluator(const Problem& problem, Solution& solution)
        : problem_(problem), solution_(solution) {}

    Answer operator()(const Query& query) {
        switch (query.spec->id) {
            case QuantityId::levels:
                return levels(static_cast<std::size_t>(query.options.count));
            case QuantityId::spectrum:
                return all_levels(std::numeric_limits<std::size_t>::max());
            case QuantityId::jump_fields:
                return jump_fields();
            default:
                break;
        }
        const GroundSpace ground = solution_.ground_space(problem_);
        if (query.spec->id == QuantityId::ground_energy) {
            return energy(ground, 1.0);
        }
        if (query.spec->id == QuantityId::ground_energy_per_site) {
            return energy(ground, 1.0 / length());
        }
        if (ground.straddles) {
            return Undecided{"a level's error bound reaches over the edge of the ground space"};
        }
        switch (query.spec->id) {
            case QuantityId::gap:
                return gap(ground);
            case QuantityId::susceptibility:
                return susceptibility(ground);
            case QuantityId::magnetization:
                return magnetization(ground);
            case QuantityId::local_magnetization:
                return ground_averages(solution_, ground, local_spins(query.options.axis));
            default:
                return spin_correlation(ground, query.options);
        }
    }

private:
    int length() const { return problem_.chain.length(); }

    static Reference plain(Value value, double bound) {
        Reference result;
        result.value = std::move(value);
        result.bound = {bound};
        result.basis = Basis::residual;
        return result;
    }

    static Reference with_degeneracy(Reference result, const GroundSpace& ground) {
        result.complete = ground.complete;
        if (!ground.straddles) {
            result.degeneracy = static_cast<std::int64_t>(ground.members.size());
        }
        return result;
    }

    Answer energy(const GroundSpace& ground, double factor) const {
        const double value = ground.lowest().energy * factor;
        const double bound = ground.lowest().bound * factor + epsilon * std::abs(value);
        return with_degeneracy(plain(Value::number(value), bound), ground);
    }

    Answer gap(const GroundSpace& ground) const {
        if (!ground.next) {
            return with_degeneracy(plain(Value::status(Special::undefined), 0.0), ground);
        }
        const double value = ground.next->energy - ground.lowest().energy;
        const double bound = ground.next->bound + ground.lowest().bound + epsilon * value;
        return with_degeneracy(plain(Value::number(value), bound), ground);
    }

    Answer susceptibility(const GroundSpace& ground) const {
        std::set<std::size_t> sectors;
        for (const BlockLevel& member : ground.members) {
            sectors.insert(member.block);
        }
        Reference result =
            plain(sectors.size() > 1 ? Value::status(Special::jump) : Value::number(0.0), 0.0);
        result.basis = Basis::exact;
        return with_degeneracy(std::move(result), ground);
    }

    Answer magnetization(const GroundSpace& ground) const {
        Reference result = ground_averages(solution_, ground, {mean_sz(length())});
        result.value = Value::number(result.value.real_at(0));
        return result;
    }

    std::vector<Observable> local_spins(Axis axis) const {
        std::vector<Observable> observables;
        for (int site = 0; site < length(); ++site) {
            observables.push_back(local_spin(axis, site, 1.0));
        }
        return observables;
    }

    using Pairs = std::vector<std::pair<int, int>>;

    /// The pairs of sites whose mean is one entry of the answer.
    std::vector<Pairs> entries_of(const Options& options) const {
        std::vector<Pairs> entries;
        for (const auto& pair : options.pairs) {
            entries.push_back({pair});
        }
        for (const int r : options.distance) {
            const int first_sites = problem_.chain.is_ring() ? length() : length() - r;
            entries.emplace_back();
            for (int i = 0; i < first_sites; ++i) {
                entries.back().emplace_back(i, (i + r) % length());
            }
        }
        return entries;
    }

    Answer spin_correlation(const GroundSpace& ground, const Options& options) const {
        const std::vector<Pairs> entries = entries_of(options);
        std::vector<Observable> observables;
        for (const Pairs& pairs : entries) {
            observables.push_back(mean_zz(pairs));
        }
        Reference result = ground_averages(solution_, ground, observables);
        if (options.connected) {
            const Reference local = ground_averages(solution_, ground, local_spins(Axis::z));
            for (std::size_t e = 0; e < entries.size(); ++e) {
                subtract_products(result, e, entries[e], local);
            }
            result.range.reset();
        }
        return result;
    }

    static void subtract_products(Reference& result,
                                  std::size_t entry,
                                  const Pairs& pairs,
                                  const Reference& local) {
        double product = 0.0;
        double error = 0.0;
        for (const auto& [i, j] : pairs) {
            const auto a = static_cast<std::size_t>(i);
            const auto b = static_cast<std::size_t>(j);
            product += local.value.real_at(a) * local.value.real_at(b);
            error += (local.bound[a] + local.bound[b]) / 2;  // |<Sz>| <= 1/2
        }
        const auto count = static_cast<double>(pairs.size());
        result.value.data[entry] -= product / count;
        result.bound[entry] += error / count;
    }

    Answer levels(std::size_t count) {
        if (Solution::can_solve_completely(solution_.symmetries(), problem_.chain)) {
            return all_levels(count);
        }
        std::vector<double> energies;
        Reference result;
        result.complete = Completeness::proved;
        for (const BlockLevel& level : solution_.lowest(problem_, count)) {
            energies.push_back(level.energy);
            result.bound.push_back(level.bound);
            result.labels.push_back(labels_of(solution_.block(level.block).sector(), length()));
            if (solution_.completeness(level.block) == Completeness::tested) {
                result.complete = Completeness::tested;
            }
        }
        result.value = Value::array(energies);
        result.basis = Basis::residual;
        return result;
    }

    Answer all_levels(std::size_t count) {
        std::vector<LabelledLevel> levels = solution_.all_levels(problem_);
        levels.resize(std::min(count, levels.size()));
        std::vector<double> energies;
        Reference result;
        for (const LabelledLevel& level : levels) {
            energies.push_back(level.energy);
            result.bound.push_back(level.bound);
            result.labels.push_back(level.labels);
        }
        result.value = Value::array(energies);
        result.basis = Basis::residual;
        result.complete = Completeness::proved;
        return result;
    }

    Answer jump_fields() {
        const double window = ground_window({problem_.chain, problem_.terms, 0.0});
        Staircase jumps = staircase(solution_.lowest_by_sz(), window);
        for (std::size_t i = 0; i < jumps.fields.size(); ++i) {
            jumps.fields[i] -= problem_.field;
            jumps.bounds[i] += epsilon * std::abs(problem_.field);
        }
        Reference result;
        result.value = Value::array(jumps.fields);
        result.value.total_sz = std::move(jumps.sz);
        result.bound = std::move(jumps.bounds);
        result.basis = Basis::residual;
        return result;
    }

    const Problem& problem_;
    Solution& solution_;
};

/// Why a query cannot be answered for these symmetries; empty where it can.
std::string refusal(const Query& query, const Symmetries& symmetries, const Chain& chain) {
    const QuantityId id = query.spec->id;
    if (!covers(id)) {
        return id == QuantityId::mode_energies ? "a quantity of free fermions"
                                               : "a quantity of the infinite chain";
    }
    const bool sz = symmetries.conserved == Conserved::up_count;
    if (!sz && (id == QuantityId::susceptibility || id == QuantityId::jump_fields)) {
        return "needs a Hamiltonian that conserves Sz; " + symmetries.why_no_sz;
    }
    const bool complete = Solution::can_solve_completely(symmetries, chain);
    if (id == QuantityId::spectrum && !complete) {
        return fmt::format("all levels at once need blocks of at most {} states",
                           Block::complex_dense_limit);
    }
    const bool complete_list = id == QuantityId::spectrum || id == QuantityId::levels;
    const double states = largest_sector(symmetries.conserved, chain.length());
    if (!symmetries.real && states > Block::complex_dense_limit && !(complete_list && complete)) {
        return fmt::format(
            "complex Hamiltonian ({}): lowest levels are found in sectors of at most {} states, "
            "this "
            "chain has {:.0f}",
            symmetries.why_not_real,
            Block::complex_dense_limit,
            states);
    }
    return {};
}

bool only_complete_solutions(const Batch& batch, const Coverage& coverage) {
    for (std::size_t q = 0; q < batch.queries.size(); ++q) {
        const QuantityId id = batch.queries[q].spec->id;
        if (coverage.refusal[q].empty() && id != QuantityId::levels && id != QuantityId::spectrum) {
            return false;
        }
    }
    return true;
}

void estimate(Coverage& coverage,
              const Batch& batch,
              const Symmetries& symmetries,
              std::size_t terms) {
    const Chain& chain = batch.problems.front().chain;
    const int length = chain.length();
    const double solves = symmetries.conserved == Conserved::up_count
                              ? 1.0
                              : static_cast<double>(batch.problems.size());
    const double states = std::pow(2.0, length);
    const double dim = largest_sector(symmetries.conserved, length);
    const double row = 1.0 + 0.5 * static_cast<double>(terms);
    const bool complete = Solution::can_solve_completely(symmetries, chain);
    const bool asks_complete =
        std::any_of(batch.queries.begin(), batch.queries.end(), [](const Query& query) {
            return query.spec->id == QuantityId::levels || query.spec->id == QuantityId::spectrum;
        });
    if (complete && asks_complete) {
        const double block = symmetries.translation ? dim / length : dim;
        coverage.seconds += solves * states * block * block * 1e-9 / 2;
        coverage.bytes += block * block * 16 * 5 + states * 64;
    }
    if (!only_complete_solutions(batch, coverage)) {
        coverage.seconds += solves * 2 * states * (row * 2e-9 + 4e-8) * 60;
        coverage.bytes += dim * (row * 12 + 24) + krylov_bytes(dim);
    }
}

Coverage plan(const Batch& batch) {
    const Problem& first = batch.problems.front();
    if (first.chain.is_infinite()) {
        return refuse_all(batch, "needs a finite chain");
    }
    const int length = first.chain.length();
    if (length > largest_length) {
        return refuse_all(batch, fmt::format("takes at most {} sites", largest_length));
    }
    const Symmetries symmetries = find_symmetries(first.chain, *first.terms);
    Coverage coverage;
    for (const Query& query : batch.queries) {
        coverage.refusal.push_back(refusal(query, symmetries, first.chain));
    }
    estimate(coverage, batch, symmetries, first.terms->terms.size());
    return coverage;
}

Answers evaluate(const Batch& batch, const Context& context) {
    const Coverage coverage = plan(batch);
    std::optional<Solution> solution;
    std::size_t solved_for = batch.problems.size();
    return answer_each(
        RouteId::sector, batch, coverage, [&](std::size_t p, const Query& query) -> Answer {
            const Problem& problem = batch.problems[p];
            if (!solution || (!solution->field_outside() && solved_for != p)) {
                solution.emplace(problem, context);
                solved_for = p;
            }
            poll(context);
            try {
                return Evaluator(problem, *solution)(query);
            } catch (const std::runtime_error& failure) {
                return Undecided{failure.what()};
            }
        });
}

}  // namespace

const Route& sector_route() {
    static const Route route{RouteId::sector,
                             "the Hamiltonian in the sectors of its symmetries, sparse or dense",
                             plan,
                             evaluate};
    return route;
}

}  // namespace chainmark
