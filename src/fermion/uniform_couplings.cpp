#include <algorithm>
#include <map>

#include "chainmark/fermion/ball_sums.hpp"

namespace chainmark::fermion {
namespace {

/// The same couplings on every bond 0 ... L-2, and those of the bond between L-1 and 0.
class BondCollector {
public:
    explicit BondCollector(int length)
        : length_(length), bonds_(static_cast<std::size_t>(length)) {}

    /// False where the term is no real nearest-neighbour ladder product.
    bool add(const Term& term) {
        if (term.string.size() != 2 || term.coefficient.imag() != 0.0) {
            return false;
        }
        const SiteFactor& left = term.string[0];
        const SiteFactor& right = term.string[1];
        const bool is_wrap = left.site == 0 && right.site == length_ - 1 && length_ > 2;
        if (!is_wrap && right.site != left.site + 1) {
            return false;
        }
        const auto is_ladder = [](SiteOperator op) {
            return op == SiteOperator::plus || op == SiteOperator::minus;
        };
        if (!is_ladder(left.op) || !is_ladder(right.op)) {
            return false;
        }
        Bond& bond = bonds_[static_cast<std::size_t>(is_wrap ? length_ - 1 : left.site)];
        (left.op == right.op ? bond.pair : bond.hop) = term.coefficient.real();
        return true;
    }

    bool fill(UniformCouplings& chain) const {
        const Bond& first = bonds_.front();
        const Bond& wrap = bonds_.back();
        const bool uniform = std::all_of(bonds_.begin(), bonds_.end() - 1, [&](const Bond& bond) {
            return bond.hop == first.hop && bond.pair == first.pair;
        });
        chain.hop = first.hop;
        chain.pair = first.pair;
        chain.ring = wrap.hop != 0.0 || wrap.pair != 0.0;
        chain.antiperiodic = wrap.hop == -first.hop && wrap.pair == -first.pair;
        const bool periodic = wrap.hop == first.hop && wrap.pair == first.pair;
        return uniform && (chain.ring ? periodic || chain.antiperiodic : first.pair == 0.0);
    }

private:
    struct Bond {
        double hop = 0.0;
        double pair = 0.0;
    };

    int length_;
    std::vector<Bond> bonds_;
};

}  // namespace

std::optional<UniformCouplings> recognise_uniform(const Problem& problem) {
    if (problem.chain.is_infinite() || problem.chain.two_s != 1 || problem.chain.length() < 2) {
        return std::nullopt;
    }
    const SplitField split = split_uniform_field(*problem.terms, problem.chain);
    BondCollector bonds(problem.chain.length());
    for (const Term& term : split.rest.terms) {
        if (!bonds.add(term)) {
            return std::nullopt;
        }
    }
    UniformCouplings chain{.length = problem.chain.length(),
                           .field_parts = {problem.field, split.field},
                           .constant = split.rest.constant,
                           .window = ground_window(problem)};
    return bonds.fill(chain) ? std::optional(chain) : std::nullopt;
}

}  // namespace chainmark::fermion
