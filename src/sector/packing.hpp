#pragma once

#include <bit>
#include <cstdint>

#include "chainmark/operators/chain.hpp"

namespace chainmark::sector {

/// A configuration of the whole chain in one integer: site j in the bits j width ... (j+1) width -
/// 1 as its digit m + S = 0 ... 2S. For S = 1/2 that is one bit a site, 1 = up. Integers of this
/// kind are ordered as the base-(2S+1) numbers with the same digits.
using Word = std::uint64_t;

struct Packing {
    int length = 0;
    int two_s = 1;
    int width = 1;  ///< bits per site
    Word ones = 0;  ///< the lowest bit of every site
    Word all = 0;   ///< every bit of every site
    Word top = 0;   ///< the configuration of all digits 2S

    /// Needs fits(length, two_s).
    Packing(int length, int two_s);
    explicit Packing(const Chain& chain) : Packing(chain.length(), chain.two_s) {}

    /// Bits per site of a spin.
    static int width_of(int two_s);
    /// Largest number of sites that a word holds.
    static int most_sites(int two_s) { return 62 / width_of(two_s); }

    int digit(Word word, int site) const {
        return static_cast<int>((word >> (site * width)) & ((Word{1} << width) - 1));
    }
    Word place(int digit, int site) const { return static_cast<Word>(digit) << (site * width); }
    /// All bits of one site.
    Word site_bits(int site) const { return ((Word{1} << width) - 1) << (site * width); }

    /// Sum of all digits: N_up = Sz + L S. For a part of the chain, of the digits in `word`.
    int digit_sum(Word word) const {
        int sum = std::popcount(word & ones);
        for (int bit = 1; bit < width; ++bit) {
            sum += std::popcount(word & (ones << bit)) << bit;
        }
        return sum;
    }

    /// 1 in the lowest bit of every site whose digit is 0.
    Word zeros(Word word) const {
        Word any = word;
        for (int bit = 1; bit < width; ++bit) {
            any |= word >> bit;
        }
        return ~any & ones;
    }

    /// Site j to site j + sites around the ring, 0 <= sites < length.
    Word rotated(Word word, int sites) const {
        return ((word << (sites * width)) | (word >> ((length - sites) * width))) & all;
    }

    /// Site j to site length - 1 - j.
    Word reversed(Word word) const;

    /// m to -m on every site.
    Word inverted(Word word) const { return top - word; }
};

}  // namespace chainmark::sector
