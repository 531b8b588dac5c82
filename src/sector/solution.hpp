#pragma once

#include <optional>
#include <vector>

#include "chainmark/base/context.hpp"
#include "chainmark/reference/problem.hpp"
#include "chainmark/sector/block.hpp"
#include "chainmark/sector/momentum.hpp"
#include "chainmark/sector/symmetry.hpp"

namespace chainmark::sector {

/// A level of one block in a given uniform field.
struct BlockLevel {
    std::size_t block = 0;
    std::size_t level = 0;
    double energy = 0.0;
    double bound = 0.0;
};

/// The levels in the ground-space window, and the first above it.
struct GroundSpace {
    std::vector<BlockLevel> members;  ///< ascending
    std::optional<BlockLevel> next;   ///< nothing: the whole space is degenerate
    bool straddles = false;           ///< some level's bound reaches over the edge of the window
    Completeness complete = Completeness::proved;

    const BlockLevel& lowest() const { return members.front(); }
};

/// One Hamiltonian, solved as far as questions need. Where total Sz is conserved the uniform field
/// stays outside: it shifts whole sectors, and one solution serves all fields.
class Solution {
public:
    Solution(const Problem& problem, const Context& context);

    const Symmetries& symmetries() const { return symmetries_; }
    bool field_outside() const { return symmetries_.conserved == Conserved::up_count; }

    /// The ground space in the uniform field `problem.field`. Only sectors that touch the window
    /// are searched beyond their lowest level.
    GroundSpace ground_space(const Problem& problem);

    /// The `count` lowest levels of all sectors together, ascending, copies counted.
    std::vector<BlockLevel> lowest(const Problem& problem, std::size_t count);

    /// Lowest level of every sector in zero field. Needs field_outside().
    struct SzMinimum {
        double sz, energy, bound;
    };
    std::vector<SzMinimum> lowest_by_sz();

    /// All 2^L levels with labels in the uniform field, ascending: by momentum blocks where the
    /// ring has translation symmetry and they are small enough, by whole sectors otherwise.
    std::vector<LabelledLevel> all_levels(const Problem& problem);

    /// True where all_levels can answer.
    static bool can_solve_completely(const Symmetries& symmetries, const Chain& chain);

    const Block& block(std::size_t index) const { return blocks_[index]; }

    /// Whether every level of the block is known, or the Krylov method vouches for its list.
    Completeness completeness(std::size_t block) const;

private:
    /// energy + constant - field sz; adds the rounding of the sum to `bound`.
    double shifted(double energy, double sz, double field, double& bound) const;
    BlockLevel at(std::size_t block, std::size_t level, double field) const;
    void extend(std::size_t block, std::size_t count);
    void extend_all();
    std::vector<BlockLevel> known(double field) const;

    Context context_;
    Chain chain_;
    Symmetries symmetries_;
    double constant_ = 0.0;
    std::vector<BitTerm> terms_;
    std::vector<Block> blocks_;
    std::optional<std::vector<LabelledLevel>> all_;  ///< in zero field where it is outside
};

}  // namespace chainmark::sector
