#include <doctest/doctest.h>

#include "chainmark/sector/halves_basis.hpp"
#include "chainmark/sector/necklaces.hpp"
#include "chainmark/sector/orbit_basis.hpp"
#include "sector/explicit_maps.hpp"
#include "support/ask.hpp"
#include "support/near.hpp"

using namespace chainmark;
using namespace chainmark::sector;
using namespace chainmark::test;

namespace {

constexpr Conserved all_kinds[] = {Conserved::nothing, Conserved::parity, Conserved::up_count};

std::vector<int> values_of(Conserved conserved, const Packing& packing) {
    const int count = conserved == Conserved::nothing  ? 1
                      : conserved == Conserved::parity ? 2
                                                       : packing.length * packing.two_s + 1;
    std::vector<int> values(static_cast<std::size_t>(count));
    for (int value = 0; value < count; ++value) {
        values[static_cast<std::size_t>(value)] = value;
    }
    return values;
}

struct Case {
    int length, two_s;
};
constexpr Case cases[] = {{1, 1},
                          {2, 1},
                          {3, 1},
                          {6, 1},
                          {9, 1},
                          {12, 1},
                          {4, 2},
                          {6, 2},
                          {7, 2},
                          {4, 3},
                          {6, 3},
                          {3, 4}};

std::vector<int> steps_on(int length) {
    std::vector<int> steps = {0};
    for (const int step : {1, 2, 3}) {
        if (length % step == 0) {
            steps.push_back(step);
        }
    }
    return steps;
}

/// Words that are smallest among their translates, by looking at all of them.
std::vector<Word> filtered(const Group& group, Conserved conserved, int value) {
    std::vector<Word> words;
    for (const Word word : all_words(group.packing)) {
        bool smallest = counts(group.packing, conserved, value, word);
        for (int t = 1; smallest && t < group.translations(); ++t) {
            smallest = moved(group, t, 0, 0, word).word >= word;
        }
        if (smallest) {
            words.push_back(word);
        }
    }
    return words;
}

void check_basis(const Group& group, const SectorLabel& label) {
    const OrbitBasis basis(group, label, context(2));
    const std::vector<Word> expected =
        allowed_words(group, label.irrep, label.conserved, label.value);
    REQUIRE(basis.dim() == static_cast<std::int64_t>(expected.size()));
    for (std::int64_t i = 0; i < basis.dim(); ++i) {
        const Word word = basis.word(i);
        REQUIRE(word == expected[static_cast<std::size_t>(i)]);
        REQUIRE(basis.index().find(basis.words(), word) == i);
        std::vector<Word> orbit;
        for_each_map(
            group, [&](int t, int r, int z) { orbit.push_back(moved(group, t, r, z, word).word); });
        std::sort(orbit.begin(), orbit.end());
        orbit.erase(std::unique(orbit.begin(), orbit.end()), orbit.end());
        REQUIRE(basis.weight(i) == static_cast<double>(orbit.size()));
        REQUIRE(basis.metric().weight(i) == basis.weight(i));
    }
}

}  // namespace

TEST_CASE("words that are smallest among their translates, ascending, none left out") {
    for (const auto& [length, two_s] : cases) {
        for (const int step : steps_on(length)) {
            const Group group{Packing(length, two_s), step};
            for (const Conserved conserved : all_kinds) {
                for (const int value : values_of(conserved, group.packing)) {
                    INFO("L = " << length << ", 2S = " << two_s << ", step " << step << ", value "
                                << value);
                    const WordSource source(group, conserved, value);
                    std::vector<Word> words;
                    for (std::size_t piece = 0; piece < source.pieces(); ++piece) {
                        source.for_each(piece, [&](Word word) { words.push_back(word); });
                    }
                    REQUIRE(words == filtered(group, conserved, value));
                }
            }
        }
    }
}

TEST_CASE("the states of a sector are the orbits that its representation allows") {
    for (const auto& [length, two_s] : cases) {
        if (length < 3) {
            continue;
        }
        const int middle = length * two_s / 2;
        for (const int step : steps_on(length)) {
            for (const bool reflection : {false, true}) {
                for (const bool wrap_sign : {false, true}) {
                    Group group{Packing(length, two_s), step};
                    group.reflection = reflection;
                    group.wrap_sign = wrap_sign && step > 0;
                    if (reflection && group.wrap_sign && middle * step % length != 0) {
                        continue;  // R would take this momentum to another one
                    }
                    for (const int sign : {1, -1}) {
                        check_basis(group,
                                    {Conserved::up_count,
                                     middle,
                                     {0, reflection ? sign : 1, 1, group.wrap_sign ? middle : 0}});
                    }
                    if (!reflection && step > 0) {
                        check_basis(group,
                                    {Conserved::parity, 1, {1, 1, 1, group.wrap_sign ? 1 : 0}});
                    }
                }
            }
            Group inverting{Packing(length, two_s), step, true, true};
            for (const int sign : {1, -1}) {
                check_basis(inverting, {Conserved::nothing, 0, {0, sign, -sign, 0}});
                if (length * two_s % 2 == 0) {
                    check_basis(inverting, {Conserved::up_count, middle, {0, sign, sign, 0}});
                }
            }
        }
    }
}

TEST_CASE("one and several threads enumerate the same states") {
    Group group{Packing(20, 1), 1, true, true};
    const SectorLabel label{Conserved::up_count, 10, {10, -1, -1, 0}};
    const OrbitBasis one(group, label, context(1));
    const OrbitBasis two(group, label, context(2));
    CHECK(one.words() == two.words());
    CHECK(static_cast<double>(one.dim()) ==
          count_states(group, label.irrep, label.conserved, label.value));
}

TEST_CASE("the position of a word, and -1 for every other word") {
    constexpr std::uint64_t seed = 21;
    INFO("seed " << seed);
    std::mt19937_64 generator(seed);
    for (const int bits : {4, 9, 12}) {
        for (const double share : {0.0, 0.01, 0.3, 1.0}) {
            BigVector<Word> words;
            for (Word word = 0; word < Word{1} << bits; ++word) {
                if (std::uniform_real_distribution<double>(0, 1)(generator) < share) {
                    words.push_back(word);
                }
            }
            WordIndex index;
            index.build(words, bits);
            std::size_t next = 0;
            for (Word word = 0; word < Word{1} << bits; ++word) {
                const bool listed = next < words.size() && words[next] == word;
                REQUIRE(index.find(words, word) == (listed ? static_cast<std::int64_t>(next) : -1));
                next += listed ? 1 : 0;
            }
        }
    }
}

TEST_CASE("all configurations of a sector: dimension, order and ranks") {
    for (const auto& [length, two_s] : cases) {
        const Packing packing(length, two_s);
        const std::vector<Word> everything = all_words(packing);
        for (const Conserved conserved : all_kinds) {
            for (const int value : values_of(conserved, packing)) {
                INFO("L = " << length << ", 2S = " << two_s << ", value " << value);
                std::vector<Word> expected;
                std::copy_if(everything.begin(),
                             everything.end(),
                             std::back_inserter(expected),
                             [&](Word word) { return counts(packing, conserved, value, word); });
                const HalvesBasis basis(packing, conserved, value);
                REQUIRE(basis.dim() == static_cast<std::int64_t>(expected.size()));
                REQUIRE(HalvesBasis::count(packing, conserved, value) ==
                        static_cast<double>(expected.size()));
                std::size_t seen = 0;
                basis.for_each_in(0, basis.highs().size(), [&](std::int64_t index, Word word) {
                    REQUIRE(index == static_cast<std::int64_t>(seen));
                    REQUIRE(word == expected[seen]);
                    REQUIRE(basis.rank(word) == index);
                    ++seen;
                });
                REQUIRE(seen == expected.size());
            }
        }
    }
}

TEST_CASE("dimensions beyond 64 bits, and of long chains, are counted") {
    // C(40, 20) = 137846528820 (elementary), 3^60 = 4.2e28.
    CHECK(HalvesBasis::count(Packing(40, 1), Conserved::up_count, 20) == 137846528820.0);
    CHECK_NEAR(HalvesBasis::count(Packing(31, 3), Conserved::nothing, 0) / std::pow(4.0, 31),
               1.0,
               rounding(1.0, 64));
}
