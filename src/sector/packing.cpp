#include "chainmark/sector/packing.hpp"

#include "chainmark/base/error.hpp"

namespace chainmark::sector {

int Packing::width_of(int two_s) {
    return std::bit_width(static_cast<unsigned>(two_s));
}

Packing::Packing(int sites, int twice_spin)
    : length(sites), two_s(twice_spin), width(width_of(twice_spin)) {
    CHAINMARK_EXPECTS(sites >= 1 && twice_spin >= 1 && sites <= most_sites(twice_spin));
    for (int site = 0; site < length; ++site) {
        ones |= Word{1} << (site * width);
        all |= site_bits(site);
        top |= place(two_s, site);
    }
}

Word Packing::reversed(Word word) const {
    if (width == 3) {
        Word result = 0;
        for (int site = 0; site < length; ++site) {
            result |= place(digit(word, site), length - 1 - site);
        }
        return result;
    }
    // Swap neighbours of growing size: sites, pairs of sites, ... up to bytes, then the bytes.
    Word w = word;
    if (width == 1) {
        w = ((w >> 1) & 0x5555555555555555U) | ((w & 0x5555555555555555U) << 1);
    }
    if (width <= 2) {
        w = ((w >> 2) & 0x3333333333333333U) | ((w & 0x3333333333333333U) << 2);
    }
    w = ((w >> 4) & 0x0f0f0f0f0f0f0f0fU) | ((w & 0x0f0f0f0f0f0f0f0fU) << 4);
    return __builtin_bswap64(w) >> (64 - length * width);
}

}  // namespace chainmark::sector
