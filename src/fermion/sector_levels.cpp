#include "chainmark/fermion/sector_levels.hpp"

#include <cmath>

namespace chainmark::fermion {
namespace {

int particles_of(double sz, int length) {
    return static_cast<int>(std::lround(sz + length / 2.0));
}

std::optional<UpCount> class_of(const Labels& wanted, int length) {
    if (wanted.sz) {
        return particles_of(*wanted.sz, length) % 2 == 0 ? UpCount::even : UpCount::odd;
    }
    if (wanted.parity) {
        return *wanted.parity > 0 ? UpCount::even : UpCount::odd;
    }
    return std::nullopt;
}

}  // namespace

std::string sector_refusal(const Labels& wanted, const QuadraticForm& form) {
    if (wanted.reflection || wanted.inversion) {
        return "a sector of reflection or inversion is not covered by this route";
    }
    if (wanted.sz) {
        const double ups = *wanted.sz + form.length() / 2.0;
        if (!form.conserves_number()) {
            return "needs a Hamiltonian that conserves Sz";
        }
        if (ups < 0 || ups > form.length() || ups != std::floor(ups)) {
            return "the chain has no such Sz";
        }
    }
    if (wanted.momentum) {
        if (form.kind != FormKind::uniform_ring) {
            return "needs a uniform ring for a momentum";
        }
        if (!form.conserves_number() && form.chain.twist != 0.0) {
            return "a momentum needs a ring without twist where Sz is not conserved";
        }
    }
    return "";
}

SectorLevels::SectorLevels(const Solution& solution, double field, const Labels& wanted)
    : levels_(solution, field, class_of(wanted, solution.form.length())), wanted_(wanted) {
    if (!wanted.sz) {
        return;
    }
    const int particles = particles_of(*wanted.sz, solution.form.length());
    const UpCount up_count = *class_of(wanted, solution.form.length());
    empty_ = wanted.parity && *wanted.parity != parity_of(up_count);
    fixed_.emplace(solution.of(up_count),
                   up_count,
                   static_cast<Real>(solution.outer_field(field)),
                   solution.form.constant_of(up_count),
                   particles);
}

std::optional<State> SectorLevels::next(const Context& context) {
    constexpr std::int64_t most_tried = std::int64_t{1} << 22;
    for (std::int64_t tried = 0; !empty_ && !gave_up_; ++tried) {
        gave_up_ = tried == most_tried;
        if (tried % 4096 == 0) {
            poll(context);
        }
        std::optional<State> state = fixed_ ? fixed_->next() : levels_.next();
        if (!state || !wanted_.momentum || labels(*state).momentum == wanted_.momentum) {
            return state;
        }
    }
    return std::nullopt;
}

}  // namespace chainmark::fermion
