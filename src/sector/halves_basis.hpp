#pragma once

#include <cstdint>
#include <vector>

#include "chainmark/sector/orbit_basis.hpp"

namespace chainmark::sector {

/// All configurations of one up count (or parity, or all), ascending, without storing them: the
/// upper sites of a configuration choose a block, the lower ones the place in it
/// (Lin, Phys. Rev. B 42, 6561 (1990)).
class HalvesBasis {
public:
    /// Needs about 2 (2S+1)^(L/2) numbers of memory. The irrep of `sector` is not looked at.
    HalvesBasis(const Packing& packing, Conserved conserved, int value);

    const Packing& packing() const { return packing_; }
    Conserved conserved() const { return conserved_; }
    int value() const { return value_; }
    std::int64_t dim() const { return starts_.back(); }

    /// Bits of the lower sites.
    int low_bits() const { return low_bits_; }

    /// Upper halves that occur, ascending, already shifted to their place.
    const std::vector<Word>& highs() const { return highs_; }
    /// First index of the block of highs()[h]; one more entry, the dimension.
    std::int64_t start(std::size_t h) const { return starts_[h]; }
    /// Index into highs() of the upper half of a word; -1 where it does not occur.
    std::int64_t high_index(Word word) const {
        return high_index_[static_cast<std::size_t>(word >> low_bits_)];
    }

    /// The lower halves are sorted into classes by what is conserved (their digit sum, its parity,
    /// or one class); a block holds one class.
    int low_class(Word low) const;
    int class_of_high(std::size_t h) const { return high_class_[h]; }
    std::size_t n_classes() const { return lows_.size(); }
    const std::vector<Word>& lows(int low_class) const {
        return lows_[static_cast<std::size_t>(low_class)];
    }
    /// Place of a lower half among those of its class.
    std::int64_t low_rank(Word word) const {
        return low_rank_[static_cast<std::size_t>(word & low_mask_)];
    }

    /// Position of a configuration that the sector contains.
    std::int64_t rank(Word word) const {
        return starts_[static_cast<std::size_t>(high_index(word))] + low_rank(word);
    }

    /// visit(index, word) for the configurations of the blocks first ... last-1.
    template <class Visit>
    void for_each_in(std::size_t first, std::size_t last, Visit&& visit) const {
        for (std::size_t h = first; h < last; ++h) {
            std::int64_t index = starts_[h];
            for (const Word low : lows(high_class_[h])) {
                visit(index++, highs_[h] | low);
            }
        }
    }

    /// Number of configurations, for any length; a double, since it may exceed 64 bits.
    static double count(const Packing& packing, Conserved conserved, int value);

private:
    Packing packing_;
    Conserved conserved_;
    int value_;
    int low_sites_;
    int low_bits_;
    Word low_mask_;
    std::vector<Word> highs_;
    std::vector<int> high_class_;
    std::vector<std::int64_t> starts_;
    std::vector<std::int32_t> high_index_;
    std::vector<std::vector<Word>> lows_;
    std::vector<std::int32_t> low_rank_;
};

}  // namespace chainmark::sector
