#pragma once

#include <functional>
#include <memory>
#include <optional>
#include <vector>

#include "chainmark/base/context.hpp"
#include "chainmark/reference/problem.hpp"
#include "chainmark/reference/value.hpp"
#include "chainmark/sector/block.hpp"
#include "chainmark/sector/ground_proofs.hpp"
#include "chainmark/sector/symmetry.hpp"

namespace chainmark::sector {

/// A level of one sector in a given uniform field.
struct SectorLevel {
    std::size_t sector = 0;  ///< index into Solution::sectors()
    std::size_t level = 0;   ///< of the sector
    double energy = 0.0;
    double bound = 0.0;
};

/// The levels in the ground-space window, and the first above it.
struct GroundSpace {
    std::vector<SectorLevel> members;  ///< ascending
    std::optional<SectorLevel> next;   ///< nothing: the whole space is degenerate
    bool straddles = false;            ///< some level's bound reaches over the edge of the window
    Completeness complete = Completeness::proved;
    std::vector<Skipped> skipped = {};

    const SectorLevel& lowest() const { return members.front(); }
};

/// The lowest level alone.
struct GroundEnergy {
    double energy = 0.0;
    double bound = 0.0;
    Completeness complete = Completeness::proved;
    std::vector<Skipped> skipped;  ///< sectors that were not solved, and why that is allowed
};

/// A level with the quantum numbers of its sector.
struct LabelledLevel {
    double energy = 0.0;
    double bound = 0.0;
    Labels labels;
};

/// One Hamiltonian, solved as far as questions need. Where total Sz is conserved the uniform field
/// stays outside: it shifts whole sectors, and one solution serves all fields.
class Solution {
public:
    /// `use_inversion`: false leaves the symmetry m to -m unused.
    Solution(const Problem& problem, const Context& context, bool use_inversion = true);

    const Symmetries& symmetries() const { return hamiltonian_->symmetries; }
    const SectorHamiltonian& hamiltonian() const { return *hamiltonian_; }
    bool field_outside() const { return symmetries().conserved == Conserved::up_count; }
    const std::vector<Sector>& sectors() const { return sectors_; }
    Labels labels(std::size_t sector) const;

    /// The lowest level in the uniform field `problem.field`; sectors that cannot hold it are
    /// skipped where that is proved.
    GroundEnergy ground_energy(const Problem& problem);

    /// The ground space, with vectors.
    GroundSpace ground_space(const Problem& problem);

    /// The `count` lowest levels of the sectors that `accept` takes, ascending, copies counted.
    using Accept = std::function<bool(std::size_t sector)>;
    std::vector<SectorLevel> lowest(const Problem& problem,
                                    std::size_t count,
                                    const Accept& accept);

    /// Lowest level of every Sz in zero field, ascending in Sz. Needs field_outside().
    struct SzMinimum {
        double sz, energy, bound;
    };
    std::vector<SzMinimum> lowest_by_sz();

    /// All (2S+1)^L levels with labels in the uniform field, ascending.
    std::vector<LabelledLevel> all_levels(const Problem& problem);

    /// Solves every block completely and visits it while its vectors are there: visit(twin, block,
    /// context), on several threads at once for different blocks. Vectors are forgotten after it.
    using Visit = std::function<void(std::size_t twin, const Block& block, const Context& context)>;
    void for_each_solved_block(const Visit& visit);

    /// <i|A|i> for the known levels of a sector's block, whose vectors must be there (as in
    /// `state` or `for_each_solved_block`), of the sector's own states. A is Hermitian and commutes
    /// with the translations and reflections of H.
    Eigen::VectorXd expectations(std::size_t sector,
                                 const std::vector<Term>& symmetric,
                                 const Context& context) const;

    /// The same for one level, whose vector is found if it is not there.
    double expectation(const SectorLevel& level, const std::vector<Term>& symmetric);

    /// Bounds the sine of the angle between the span of the levels as computed and the exact space:
    /// residual / distance to the next level, within the levels' own sectors.
    double tilt_of(const std::vector<SectorLevel>& levels);

    double sz_of_sector(std::size_t sector) const { return sz_of(sectors_[sector].label.value); }
    double constant() const { return constant_; }

    /// The block whose levels a sector has.
    const Block& block_of(std::size_t sector) const { return *blocks_[sectors_[sector].twin]; }

    /// Amplitudes of a ground state over all configurations of its up count (or parity).
    Eigen::VectorXcd state(const SectorLevel& level, const HalvesBasis& configurations);

    /// How it is known that no level at or below `energy` in the problem's field is missing among
    /// the known levels of the sectors that `accept` takes.
    Completeness completeness(const Problem& problem, double energy, const Accept& accept);

private:
    double sz_of(int value) const { return value - chain_.length() * chain_.spin(); }
    SectorLevel at(std::size_t sector, std::size_t level, double field) const;
    void extend(const std::vector<std::size_t>& sectors, std::size_t beyond_known, Aim aim);
    std::vector<std::size_t> sectors_with(int value) const;
    bool known_lowest(int value) const;

    /// The lowest level of one up count in zero field, over the sectors that can hold it.
    SectorLevel minimum(int value);
    /// A lower bound of the same, from what is known without solving it.
    double floor_of(int value) const;
    std::vector<int> values() const;

    Context context_;
    Chain chain_;
    double constant_ = 0.0;
    std::unique_ptr<SectorHamiltonian> hamiltonian_;
    std::vector<Sector> sectors_;
    std::vector<std::unique_ptr<Block>> blocks_;      ///< by twin; the others stay empty
    std::vector<std::optional<SectorLevel>> minima_;  ///< by up count (parity, 0)
    bool all_solved_ = false;
};

}  // namespace chainmark::sector
