#include "chainmark/sector/orbit_basis.hpp"

#include <algorithm>
#include <bit>
#include <cmath>
#include <stdexcept>

#include <fmt/format.h>

#include "chainmark/base/error.hpp"
#include "chainmark/base/parallel.hpp"
#include "chainmark/sector/necklaces.hpp"

namespace chainmark::sector {

void WordIndex::build(const BigVector<Word>& words, int bits) {
    // About one bucket a word: as many leading bits of the largest word as give that.
    const Word last = words.empty() ? 0 : words.back();
    const int used = std::min(bits, static_cast<int>(std::bit_width(last)));
    shift_ = std::max(0, used - static_cast<int>(std::bit_width(words.size())));
    const std::size_t buckets = (last >> shift_) + 1;
    first_.resize(buckets + 1);
    std::size_t bucket = 0;
    for (std::size_t i = 0; i < words.size(); ++i) {
        for (; bucket <= words[i] >> shift_; ++bucket) {
            first_[bucket] = static_cast<std::uint32_t>(i);
        }
    }
    for (; bucket < first_.size(); ++bucket) {
        first_[bucket] = static_cast<std::uint32_t>(words.size());
    }
}

namespace {

struct Piece {
    std::vector<Word> words;
    std::vector<std::uint8_t> stabilizer;  ///< its order
};

/// The stabilizer's order where the representation is the trivial one on it; 0 where its
/// characters sum to zero, so that the orbit carries no state, or where the word has a smaller
/// image.
std::uint8_t orbit_carries(const ImageFinder& finder,
                           const std::vector<std::complex<double>>& characters,
                           Word word) {
    const int numbers = finder.group().numbers();
    std::complex<double> sum = 0;
    int order = 0;
    const bool smallest = finder.for_each_fixing(word, [&](const Image& image) {
        sum += characters[static_cast<std::size_t>(image.character(numbers))];
        ++order;
    });
    return smallest && std::abs(sum) > 0.5 ? static_cast<std::uint8_t>(order) : std::uint8_t{0};
}

}  // namespace

OrbitBasis::OrbitBasis(const Group& group, const SectorLabel& sector, const Context& context)
    : finder_(group),
      sector_(sector),
      characters_(chainmark::sector::characters(group, sector.irrep)) {
    CHAINMARK_EXPECTS(group.order() < 256);
    const double expected = count_states(group, sector.irrep, sector.conserved, sector.value);
    const WordSource source(group, sector.conserved, sector.value);
    std::vector<Piece> pieces(source.pieces());
    parallel_for(pieces.size(), context.threads, [&](std::size_t i) {
        poll(context);
        source.for_each(i, [&](Word word) {
            const std::uint8_t order = orbit_carries(finder_, characters_, word);
            if (order != 0) {
                pieces[i].words.push_back(word);
                pieces[i].stabilizer.push_back(order);
            }
        });
    });
    words_.reserve(static_cast<std::size_t>(expected));
    stabilizer_.reserve(static_cast<std::size_t>(expected));
    for (Piece& piece : pieces) {
        words_.insert(words_.end(), piece.words.begin(), piece.words.end());
        stabilizer_.insert(stabilizer_.end(), piece.stabilizer.begin(), piece.stabilizer.end());
        piece = {};
    }
    if (static_cast<double>(words_.size()) != expected) {
        throw std::logic_error(
            fmt::format("a sector should have {} states, {} were found", expected, words_.size()));
    }
    for (std::size_t order = 1; order < weights_.size(); ++order) {
        weights_[order] = static_cast<double>(group.order()) / static_cast<double>(order);
    }
    index_.build(words_, group.packing.length * group.packing.width);
}

}  // namespace chainmark::sector
