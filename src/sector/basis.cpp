#include "chainmark/sector/basis.hpp"

#include <array>
#include <bit>
#include <cmath>

#include "chainmark/base/error.hpp"
#include "chainmark/base/numerics.hpp"

namespace chainmark::sector {

std::vector<SectorLabel> sectors_of(Conserved conserved, int length) {
    std::vector<SectorLabel> sectors;
    const int count = conserved == Conserved::up_count ? length + 1
                      : conserved == Conserved::parity ? 2
                                                       : 1;
    for (int value = 0; value < count; ++value) {
        sectors.push_back({conserved, value});
    }
    return sectors;
}

double largest_sector(Conserved conserved, int length) {
    const int half = length / 2;
    switch (conserved) {
        case Conserved::up_count:  // C(L, L/2)
            return std::exp(std::lgamma(length + 1.0) - std::lgamma(half + 1.0) -
                            std::lgamma(length - half + 1.0));
        case Conserved::parity:
            return std::pow(2.0, length - 1);
        case Conserved::nothing:
            break;
    }
    return std::pow(2.0, length);
}

Labels labels_of(const SectorLabel& sector, int length) {
    switch (sector.conserved) {
        case Conserved::up_count:
            return {.sz = sector.value - length / 2.0};
        case Conserved::parity:
            return {.parity = sector.value == 0 ? 1 : -1};
        case Conserved::nothing:
            break;
    }
    return {};
}

SectorBasis::SectorBasis(SectorLabel sector, int length) : sector_(sector) {
    CHAINMARK_EXPECTS(length >= 1 && length <= 62);
    if (sector.conserved == Conserved::up_count) {
        build_up_count(length);
        return;
    }
    const std::uint64_t end = std::uint64_t{1} << length;
    for (std::uint64_t state = 0; state < end; ++state) {
        if (contains(state)) {
            states_.push_back(state);
        }
    }
}

void SectorBasis::build_up_count(int length) {
    const int up = sector_.value;
    low_bits_ = length / 2;
    low_mask_ = (std::uint64_t{1} << low_bits_) - 1;
    const std::uint64_t lows = std::uint64_t{1} << low_bits_;
    const std::uint64_t highs = std::uint64_t{1} << (length - low_bits_);
    std::array<std::int64_t, 64> seen{};
    low_rank_.resize(lows);
    for (std::uint64_t low = 0; low < lows; ++low) {
        low_rank_[low] = seen[static_cast<std::size_t>(std::popcount(low))]++;
    }
    high_offset_.resize(highs);
    states_.reserve(static_cast<std::size_t>(binomial(length, up)));
    for (std::uint64_t high = 0; high < highs; ++high) {
        high_offset_[high] = dim();
        const int left = up - std::popcount(high);
        if (left < 0 || left > low_bits_) {
            continue;
        }
        for (std::uint64_t low = 0; low < lows; ++low) {
            if (std::popcount(low) == left) {
                states_.push_back((high << low_bits_) | low);
            }
        }
    }
}

bool SectorBasis::contains(std::uint64_t state) const {
    const int up = std::popcount(state);
    switch (sector_.conserved) {
        case Conserved::up_count:
            return up == sector_.value;
        case Conserved::parity:
            return up % 2 == sector_.value;
        case Conserved::nothing:
            break;
    }
    return true;
}

}  // namespace chainmark::sector
