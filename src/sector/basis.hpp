#pragma once

#include <cstdint>
#include <vector>

#include "chainmark/reference/value.hpp"
#include "chainmark/sector/symmetry.hpp"

namespace chainmark::sector {

/// A set of up counts that H does not leave: one count, one parity, or everything.
struct SectorLabel {
    Conserved conserved = Conserved::nothing;
    int value = 0;  ///< the up count, or its parity (0 even, 1 odd)

    bool operator==(const SectorLabel&) const = default;
};

/// All sectors of a chain: L + 1 up counts, two parities, or one.
std::vector<SectorLabel> sectors_of(Conserved conserved, int length);

/// Number of states of the largest sector, as a double since it may exceed 64 bits.
double largest_sector(Conserved conserved, int length);

/// sz, or parity (+1 even, -1 odd), whichever the sector fixes.
Labels labels_of(const SectorLabel& sector, int length);

/// The configurations of a sector, ascending as integers; bit j is site j, 1 = up. At most 62
/// sites.
class SectorBasis {
public:
    SectorBasis(SectorLabel sector, int length);

    const SectorLabel& sector() const { return sector_; }
    std::int64_t dim() const { return static_cast<std::int64_t>(states_.size()); }
    std::uint64_t state(std::int64_t index) const {
        return states_[static_cast<std::size_t>(index)];
    }
    const std::vector<std::uint64_t>& states() const { return states_; }

    bool contains(std::uint64_t state) const;

    /// Position of a configuration that the sector contains. O(1): for a fixed up count the rank
    /// splits into a sum over the two halves of the bits (Lin, Phys. Rev. B 42, 6561 (1990)).
    std::int64_t rank(std::uint64_t state) const {
        switch (sector_.conserved) {
            case Conserved::up_count:
                return high_offset_[state >> low_bits_] + low_rank_[state & low_mask_];
            case Conserved::parity:  // one of every pair 2i, 2i + 1 has the parity
                return static_cast<std::int64_t>(state >> 1);
            case Conserved::nothing:
                break;
        }
        return static_cast<std::int64_t>(state);
    }

private:
    void build_up_count(int length);

    SectorLabel sector_;
    int low_bits_ = 0;
    std::uint64_t low_mask_ = 0;
    std::vector<std::uint64_t> states_;
    std::vector<std::int64_t> high_offset_;
    std::vector<std::int64_t> low_rank_;
};

}  // namespace chainmark::sector
