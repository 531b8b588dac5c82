#include "chainmark/fermion/correlations.hpp"

#include <algorithm>

namespace chainmark::fermion {
namespace {

std::size_t at(int i) {
    return static_cast<std::size_t>(i);
}

/// Largest error of a density or |G_ij|^2 in any state, and the count of additions, give the error
/// of an average of numbers below `size`; the tilt of the space moves <A> by at most 2 ||A|| tilt.
Real average_error(
    const Solution& solution, const GroundSpace& ground, Real green, Real additions, Real size) {
    Real distance = 0.0L;
    for (const ModeSet& modes : solution.modes) {
        distance = std::max(distance, modes.distance);
    }
    return 4 * green + size * (additions * real_epsilon + 2 * ground.tilt(distance));
}

/// The states of a ground space one after the other.
class Walk {
public:
    Walk(const Solution& solution,
         Levels& levels,
         const GroundSpace& ground,
         const Context& context)
        : solution_(solution), levels_(levels), ground_(ground), context_(context) {}

    /// visit(orbitals, occupation) for every state.
    template <class Visit>
    void each(Visit&& visit) {
        for (const State& state : ground_.states) {
            poll(context_);
            const Orbitals& orbitals = *solution_.of(state.up_count).orbitals;
            const Occupation occupied = levels_.occupation(state);
            green_error = std::max(green_error, orbitals.error(occupied));
            visit(orbitals, occupied);
        }
    }

    Real green_error = 0.0L;

private:
    const Solution& solution_;
    Levels& levels_;
    const GroundSpace& ground_;
    const Context& context_;
};

std::vector<Real> sz_profile(const Orbitals& orbitals,
                             const Occupation& occupied,
                             int sites,
                             const Context& context) {
    if (orbitals.homogeneous()) {
        return std::vector<Real>(at(sites), orbitals.density(occupied, 0) - 0.5L);
    }
    std::vector<Real> profile;
    for (int j = 0; j < sites; ++j) {
        if (j % 1024 == 0) {
            poll(context);
        }
        profile.push_back(orbitals.density(occupied, j) - 0.5L);
    }
    return profile;
}

/// Mean over a family of f(i, j). On a homogeneous chain every pair gives the same.
template <class Function>
Real family_mean(
    PairFamily family, int sites, bool homogeneous, const Context& context, Function&& f) {
    const int count = homogeneous ? 1 : family.count;
    CompensatedSum sum;
    for (int s = 0; s < count; ++s) {
        if (s % 1024 == 0) {
            poll(context);
        }
        sum.add(f((family.first + s) % sites, (family.second + s) % sites));
    }
    return sum.value() / static_cast<Real>(count);
}

}  // namespace

Averages average_sz(const Solution& solution,
                    Levels& levels,
                    const GroundSpace& ground,
                    const Context& context) {
    const int sites = solution.form.length();
    const Real states = static_cast<Real>(ground.states.size());
    Averages averages{.value = std::vector<Real>(at(sites))};
    Walk walk(solution, levels, ground, context);
    walk.each([&](const Orbitals& orbitals, const Occupation& occupied) {
        const std::vector<Real> profile = sz_profile(orbitals, occupied, sites, context);
        for (std::size_t j = 0; j < profile.size(); ++j) {
            averages.value[j] += profile[j] / states;
        }
    });
    averages.error = average_error(solution, ground, walk.green_error, states + 2, 0.5L);
    return averages;
}

Averages average_szsz(const Solution& solution,
                      Levels& levels,
                      const GroundSpace& ground,
                      const std::vector<PairFamily>& families,
                      bool connected,
                      const Context& context) {
    const int sites = solution.form.length();
    const Real states = static_cast<Real>(ground.states.size());
    const bool homogeneous = solution.of(UpCount::even).orbitals->homogeneous();
    Averages averages{.value = std::vector<Real>(families.size())};
    Walk walk(solution, levels, ground, context);
    walk.each([&](const Orbitals& orbitals, const Occupation& occupied) {
        const std::vector<Real> sz = sz_profile(orbitals, occupied, sites, context);
        const auto product = [&](int i, int j) {
            return i == j ? 0.25L
                          : sz[at(i)] * sz[at(j)] - orbitals.coherence_squared(occupied, i, j);
        };
        for (std::size_t k = 0; k < families.size(); ++k) {
            averages.value[k] +=
                family_mean(families[k], sites, homogeneous, context, product) / states;
        }
    });
    averages.error = average_error(solution, ground, walk.green_error, states + 8, 0.25L);
    if (connected) {
        const Averages single = average_sz(solution, levels, ground, context);
        const auto product = [&](int i, int j) {
            return single.value[at(i)] * single.value[at(j)];
        };
        for (std::size_t k = 0; k < families.size(); ++k) {
            averages.value[k] -= family_mean(families[k], sites, homogeneous, context, product);
        }
        averages.error += single.error + 4 * real_epsilon;
    }
    return averages;
}

}  // namespace chainmark::fermion
