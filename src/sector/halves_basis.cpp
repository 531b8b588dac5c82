#include "chainmark/sector/halves_basis.hpp"

#include "chainmark/base/error.hpp"

namespace chainmark::sector {
namespace {

/// Every valid word of `sites` sites, ascending.
template <class Visit>
void for_each_word(int sites, int two_s, Visit&& visit) {
    if (sites == 0) {
        visit(Word{0});
        return;
    }
    const Packing packing(sites, two_s);
    const auto next = [&](Word word) {
        // Adds one as in base 2S+1: digits that are full become zero and carry on.
        for (int site = 0; site < sites; ++site) {
            if (packing.digit(word, site) < two_s) {
                return word + packing.place(1, site);
            }
            word -= packing.place(two_s, site);
        }
        return packing.all + 1;
    };
    for (Word word = 0; word <= packing.top; word = next(word)) {
        visit(word);
        if (word == packing.top) {
            break;
        }
    }
}

}  // namespace

int HalvesBasis::low_class(Word low) const {
    switch (conserved_) {
        case Conserved::up_count:
            return packing_.digit_sum(low);
        case Conserved::parity:
            return packing_.digit_sum(low) % 2;
        case Conserved::nothing:
            break;
    }
    return 0;
}

HalvesBasis::HalvesBasis(const Packing& packing, Conserved conserved, int value)
    : packing_(packing),
      conserved_(conserved),
      value_(value),
      low_sites_(packing.length / 2),
      low_bits_(low_sites_ * packing.width),
      low_mask_((Word{1} << low_bits_) - 1) {
    const int classes = conserved == Conserved::up_count ? low_sites_ * packing.two_s + 1
                        : conserved == Conserved::parity ? 2
                                                         : 1;
    lows_.resize(static_cast<std::size_t>(classes));
    low_rank_.assign(static_cast<std::size_t>(low_mask_) + 1, -1);
    for_each_word(low_sites_, packing.two_s, [&](Word low) {
        std::vector<Word>& members = lows_[static_cast<std::size_t>(low_class(low))];
        low_rank_[static_cast<std::size_t>(low)] = static_cast<std::int32_t>(members.size());
        members.push_back(low);
    });
    const int high_sites = packing.length - low_sites_;
    high_index_.assign(std::size_t{1} << (high_sites * packing.width), -1);
    std::int64_t start = 0;
    for_each_word(high_sites, packing.two_s, [&](Word high) {
        const Word word = high << low_bits_;
        const int sum = packing.digit_sum(word);
        const int left = conserved == Conserved::up_count ? value - sum
                         : conserved == Conserved::parity ? (value + sum) % 2
                                                          : 0;
        if (left < 0 || left >= classes) {
            return;
        }
        high_index_[static_cast<std::size_t>(high)] = static_cast<std::int32_t>(highs_.size());
        highs_.push_back(word);
        high_class_.push_back(left);
        starts_.push_back(start);
        start += static_cast<std::int64_t>(lows(left).size());
    });
    starts_.push_back(start);
}

double HalvesBasis::count(const Packing& packing, Conserved conserved, int value) {
    return count_states(Group{packing}, Irrep{}, conserved, value);
}

}  // namespace chainmark::sector
