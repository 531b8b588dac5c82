#pragma once

#include <functional>
#include <vector>

#include "chainmark/base/context.hpp"
#include "chainmark/sector/group.hpp"

namespace chainmark::sector {

/// Enumerates, ascending, the words that are smallest among their translates by multiples of
/// `group.step` (or all words without translations) and whose digit sum is `value` (or has that
/// parity, or is anything), without looking at any other word: prefixes of such words are extended
/// letter by letter (Fredricksen, Kessler and Maiorana), dropping those whose sum can no longer be
/// met. A letter is `step` sites. Single spins 1/2 of a fixed up count are spelled by the gaps
/// between up spins instead, which leaves few prefixes that lead nowhere (Ruskey and Sawada, SIAM
/// J. Comput. 29, 671 (1999)). Both quoted from memory.
class WordSource {
public:
    WordSource(const Group& group, Conserved conserved, int value);

    /// The words in consecutive pieces that can be enumerated independently.
    std::size_t pieces() const { return prefixes_.size(); }

    /// Calls visit(word) for the words of one piece, ascending.
    template <class Visit>
    void for_each(std::size_t piece, Visit&& visit) const {
        Prefix prefix = prefixes_[piece];
        extend(prefix, letters_, visit);
    }

private:
    struct Letter {
        Word bits;
        int width;
        int sum;
    };

    /// The beginning of a word, from the top.
    struct Prefix {
        std::vector<std::uint32_t> letters;  ///< indices into alphabet_, from position 1
        int known = 0;                       ///< letters chosen
        int period = 1;  ///< length of the longest beginning that is smaller than its rotations
        int sum = 0;     ///< of the letters so far
        Word word = 0;
    };

    void use_sites(const Group& group);
    void use_gaps(const Packing& packing);

    /// Whether letters that follow `prefix` can bring its sum to what is wanted.
    bool can_reach(const Prefix& prefix) const {
        if (!fixed_sum_) {
            return true;
        }
        const int largest = by_gaps_ ? alphabet_[prefix.letters[1]].sum : largest_sum_;
        return prefix.sum <= wanted_sum_ &&
               prefix.sum + (letters_ - prefix.known) * largest >= wanted_sum_;
    }
    bool is_wanted(int sum) const {
        return fixed_sum_ ? sum == wanted_sum_ : wanted_parity_ < 0 || sum % 2 == wanted_parity_;
    }

    template <class Visit>
    void extend(Prefix& prefix, int stop, Visit& visit) const;

    bool rotates_ = false;
    bool by_gaps_ = false;
    bool fixed_sum_ = false;
    int wanted_sum_ = 0;
    int wanted_parity_ = -1;  ///< -1: any
    int letters_ = 0;         ///< per word
    int largest_sum_ = 0;
    std::vector<Letter> alphabet_;  ///< in the order of the words they begin
    std::vector<Prefix> prefixes_;
};

template <class Visit>
void WordSource::extend(Prefix& prefix, int stop, Visit& visit) const {
    if (prefix.known == stop) {
        if constexpr (std::is_invocable_v<Visit&, const Prefix&>) {
            visit(prefix);
        } else if (is_wanted(prefix.sum) && (!rotates_ || letters_ % prefix.period == 0)) {
            visit(prefix.word);
        }
        return;
    }
    const int period = prefix.period;
    const int sum = prefix.sum;
    const Word word = prefix.word;
    const int next = ++prefix.known;
    std::uint32_t& place = prefix.letters[static_cast<std::size_t>(next)];
    const std::uint32_t first =
        rotates_ && next > 1 ? prefix.letters[static_cast<std::size_t>(next - period)] : 0;
    for (place = first; place < alphabet_.size(); ++place) {
        const Letter& letter = alphabet_[place];
        prefix.sum = sum + letter.sum;
        if (can_reach(prefix)) {
            prefix.period = next > 1 && place == first ? period : next;
            prefix.word = (word << letter.width) | letter.bits;
            extend(prefix, stop, visit);
        } else if (by_gaps_ && prefix.sum < wanted_sum_) {
            break;  // the gaps that follow are smaller still
        }
    }
    --prefix.known;
    prefix.period = period;
    prefix.sum = sum;
    prefix.word = word;
}

}  // namespace chainmark::sector
