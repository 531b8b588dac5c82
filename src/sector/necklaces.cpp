#include "chainmark/sector/necklaces.hpp"

#include <algorithm>

namespace chainmark::sector {
namespace {

/// Prefixes are extended alone until there are about this many to share among threads.
constexpr std::size_t enough_pieces = 512;

}  // namespace

void WordSource::use_sites(const Group& group) {
    const int sites = std::max(1, group.step);
    const Packing letter(sites, group.packing.two_s);
    letters_ = group.packing.length / sites;
    largest_sum_ = letter.top == 0 ? 0 : letter.two_s * sites;
    for (Word bits = 0; bits <= letter.top; ++bits) {
        bool valid = true;
        for (int site = 0; site < sites; ++site) {
            valid = valid && letter.digit(bits, site) <= letter.two_s;
        }
        if (valid) {
            alphabet_.push_back({bits, sites * letter.width, letter.digit_sum(bits)});
        }
    }
}

/// A letter is a gap of g zeros with the 1 that ends it; the largest gap makes the smallest word.
void WordSource::use_gaps(const Packing& packing) {
    by_gaps_ = true;
    letters_ = wanted_sum_;
    wanted_sum_ = packing.length - letters_;
    for (int gap = wanted_sum_; gap >= 0; --gap) {
        alphabet_.push_back({1, gap + 1, gap});
    }
}

WordSource::WordSource(const Group& group, Conserved conserved, int value)
    : rotates_(group.step != 0),
      fixed_sum_(conserved == Conserved::up_count),
      wanted_sum_(value),
      wanted_parity_(conserved == Conserved::parity ? value : -1) {
    if (group.step == 1 && group.packing.two_s == 1 && fixed_sum_ && value > 0) {
        use_gaps(group.packing);
    } else {
        use_sites(group);
    }
    Prefix empty;
    empty.letters.assign(static_cast<std::size_t>(letters_) + 1, 0);
    prefixes_ = {empty};
    for (int length = 1; length <= letters_ && prefixes_.size() < enough_pieces; ++length) {
        std::vector<Prefix> longer;
        const auto keep = [&longer](const Prefix& prefix) { longer.push_back(prefix); };
        for (Prefix& prefix : prefixes_) {
            extend(prefix, length, keep);
        }
        prefixes_ = std::move(longer);
    }
}

}  // namespace chainmark::sector
