#pragma once

#include <array>
#include <complex>
#include <cstdint>
#include <vector>

#include "chainmark/base/big_vector.hpp"
#include "chainmark/base/context.hpp"
#include "chainmark/sector/group.hpp"
#include "chainmark/sector/linear_operator.hpp"

namespace chainmark::sector {

/// Which states a sector holds: configurations of one up count (or parity, or all) in one
/// representation of the group.
struct SectorLabel {
    Conserved conserved = Conserved::nothing;
    int value = 0;  ///< the up count, or its parity (0 even, 1 odd)
    Irrep irrep = {};

    bool operator==(const SectorLabel&) const = default;
};

/// Position of a word in an ascending list: a table on the leading bits gives the few neighbours
/// among which it must be. About two cache misses, against log2(n) of a binary search.
class WordIndex {
public:
    void build(const BigVector<Word>& words, int bits);

    /// -1 for a word that is not in the list. A bucket holds about one word, so they are tried one
    /// after the other.
    std::int64_t find(const BigVector<Word>& words, Word word) const {
        const std::size_t bucket = word >> shift_;
        if (bucket + 1 >= first_.size()) {
            return -1;
        }
        std::size_t at = first_[bucket];
        while (at < words.size() && words[at] < word) {
            ++at;
        }
        return at < words.size() && words[at] == word ? static_cast<std::int64_t>(at) : -1;
    }

    void prefetch_bucket(Word word) const { __builtin_prefetch(first_.data() + (word >> shift_)); }
    void prefetch_word(const BigVector<Word>& words, Word word) const {
        const std::size_t bucket = word >> shift_;
        if (bucket < first_.size()) {
            __builtin_prefetch(words.data() + first_[bucket]);
        }
    }

    /// Bytes of the table for `count` words.
    static double bytes(double count) { return 8 * count; }

private:
    int shift_ = 0;
    BigVector<std::uint32_t> first_;
};

/// The states of a sector of a group: one configuration of every orbit that the representation
/// allows, the smallest. A state is stored by the amplitudes psi(a) of these configurations; the
/// amplitudes of the others follow from the characters, and
///   <phi|psi> = sum_a w_a phi(a)* psi(a),   w_a the number of configurations in a's orbit.
/// That needs no square roots, and the off-diagonal elements of H keep their few distinct values.
class OrbitBasis {
public:
    /// Enumerates on `context.threads` threads. Throws Interrupted; needs a dimension below 2^32.
    OrbitBasis(const Group& group, const SectorLabel& sector, const Context& context);

    const Group& group() const { return finder_.group(); }
    const SectorLabel& sector() const { return sector_; }
    const ImageFinder& finder() const { return finder_; }
    std::int64_t dim() const { return static_cast<std::int64_t>(words_.size()); }
    Word word(std::int64_t index) const { return words_[static_cast<std::size_t>(index)]; }
    double weight(std::int64_t index) const {
        return weights_[stabilizer_[static_cast<std::size_t>(index)]];
    }

    Metric metric() const { return {stabilizer_.data(), weights_.data()}; }

    const BigVector<Word>& words() const { return words_; }
    const WordIndex& index() const { return index_; }
    /// By `Image::character`: psi(s) = characters()[...] psi(word of the image).
    const std::vector<std::complex<double>>& characters() const { return characters_; }

    /// Bytes a basis of `dim` states takes.
    static double bytes(double dim) { return dim * 9 + WordIndex::bytes(dim); }

private:
    ImageFinder finder_;
    SectorLabel sector_;
    std::vector<std::complex<double>> characters_;
    BigVector<Word> words_;
    BigVector<std::uint8_t> stabilizer_;  ///< index into weights_
    std::array<double, 256> weights_{};   ///< |G| / size of the stabilizer
    WordIndex index_;
};

}  // namespace chainmark::sector
