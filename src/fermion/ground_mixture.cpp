#include "chainmark/fermion/ground_mixture.hpp"

#include <algorithm>

#include "chainmark/base/error.hpp"

namespace chainmark::fermion {

void SingleMember::each(const std::function<void(Real, const StringMeasure&)>& visit) const {
    std::size_t next = 0;
    mixture_.each([&](Real, const StringMeasure& measure) {
        if (next == member_) {
            visit(1.0L, measure);
        }
        ++next;
    });
}

GroundMixture::GroundMixture(const Solution& solution,
                             const Levels& levels,
                             const GroundSpace& ground,
                             const Context& context)
    : solution_(solution), levels_(levels), ground_(ground), context_(context) {
    Real distance = 0.0L;
    for (const ModeSet& modes : solution.modes) {
        distance = std::max(distance, modes.distance);
    }
    tilt_ = ground.tilt(distance);
}

bool GroundMixture::homogeneous() const {
    return solution_.form.kind == FormKind::uniform_ring;
}

GroundMixture::Member GroundMixture::member(const State& state) const {
    Member own{levels_.gaussian(state), nullptr};
    own.wick = std::make_unique<WickState<double>>(*own.state);
    return own;
}

/// All covariances together take at most 256 MB, or there is one of them.
bool GroundMixture::kept() const {
    constexpr double most_bytes = 2.56e8;
    const double sites = solution_.form.length();
    const auto states = static_cast<double>(ground_.states.size());
    return states == 1.0 || 32 * sites * sites * states <= most_bytes;
}

void GroundMixture::each(const std::function<void(Real, const StringMeasure&)>& visit) const {
    const Real weight = 1.0L / static_cast<Real>(ground_.states.size());
    const auto visit_member = [&](const Member& own) {
        visit(weight, [&](const PauliString& string) { return own.wick->average(string); });
    };
    if (kept() && members_.empty()) {
        for (const State& state : ground_.states) {
            members_.push_back(member(state));
        }
    }
    for (const Member& own : members_) {
        visit_member(own);
    }
    for (std::size_t s = members_.size(); s < ground_.states.size(); ++s) {
        poll(context_);
        visit_member(member(ground_.states[s]));
    }
}

WickState<double>& GroundMixture::single() const {
    CHAINMARK_EXPECTS(ground_.states.size() == 1);
    if (members_.empty()) {
        members_.push_back(member(ground_.lowest()));
    }
    return *members_.front().wick;
}

}  // namespace chainmark::fermion
