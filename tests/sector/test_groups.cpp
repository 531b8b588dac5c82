#include <set>
#include <tuple>

#include <doctest/doctest.h>

#include "chainmark/sector/symmetry.hpp"
#include "sector/explicit_maps.hpp"
#include "support/near.hpp"
#include "support/random_lists.hpp"

using namespace chainmark;
using namespace chainmark::sector;
using namespace chainmark::test;

namespace {

Group group_of(int length,
               int two_s,
               int step,
               bool reflection = false,
               bool inversion = false,
               bool wrap_sign = false) {
    Group group{Packing(length, two_s), step};
    group.reflection = reflection;
    group.inversion = inversion;
    group.wrap_sign = wrap_sign;
    return group;
}

/// Every combination of maps on rings of the given length.
std::vector<Group> groups_on(int length, int two_s) {
    std::vector<Group> groups;
    for (const int step : {0, 1, 2, 3}) {
        if (step != 0 && length % step != 0) {
            continue;
        }
        for (const bool reflection : {false, true}) {
            for (const bool inversion : {false, true}) {
                for (const bool wrap_sign : {false, true}) {
                    groups.push_back(
                        group_of(length, two_s, step, reflection, inversion, wrap_sign));
                }
            }
        }
    }
    return groups;
}

/// All maps that take `word` to `target`.
using Map = std::tuple<int, bool>;
std::set<Map> maps_between(const Group& group, Word word, Word target) {
    std::set<Map> maps;
    for_each_map(group, [&](int t, int r, int z) {
        const Moved image = moved(group, t, r, z, word);
        if (image.word == target) {
            maps.emplace(group.number(t, r, z), image.odd);
        }
    });
    return maps;
}

Word smallest_image(const Group& group, Word word) {
    Word least = word;
    for_each_map(group, [&](int t, int r, int z) {
        least = std::min(least, moved(group, t, r, z, word).word);
    });
    return least;
}

void check_images(const Group& group, Word word) {
    const ImageFinder finder(group);
    const Word least = smallest_image(group, word);
    const Image image = finder.smallest(word);
    REQUIRE(image.word == least);
    REQUIRE(maps_between(group, word, least).count({image.map, image.odd}) == 1);

    std::set<Map> fixing;
    REQUIRE(finder.for_each_fixing(
        least, [&](const Image& found) { fixing.emplace(found.map, found.odd); }));
    REQUIRE(fixing == maps_between(group, least, least));
    if (word != least) {
        REQUIRE(!finder.for_each_fixing(word, [](const Image&) {}));
    }
}

/// The representations of a group, without those of R that do not commute with T.
std::vector<Irrep> irreps_of(const Group& group, int digit_sum) {
    std::vector<Irrep> irreps;
    const int wrapped = group.wrap_sign ? digit_sum : 0;
    const int translations = group.translations();
    for (int n = -((translations - 1) / 2); n <= translations / 2; ++n) {
        const bool real = ((2 * n + wrapped) * group.step) % group.packing.length == 0;
        if (group.reflection && !real) {
            continue;
        }
        for (const int r : group.reflection ? std::vector{1, -1} : std::vector{1}) {
            for (const int z : group.inversion ? std::vector{1, -1} : std::vector{1}) {
                irreps.push_back({n, r, z, wrapped});
            }
        }
    }
    return irreps;
}

}  // namespace

TEST_CASE("smallest images and stabilizers are those of all maps tried one by one") {
    constexpr std::uint64_t seed = 11;
    INFO("seed " << seed);
    std::mt19937_64 generator(seed);
    for (const int two_s : {1, 2, 3, 4}) {
        for (const int length : {3, 6, 7, 12}) {
            for (const Group& group : groups_on(length, two_s)) {
                INFO("2S = " << two_s << ", L = " << length << ", step " << group.step);
                check_images(group, 0);
                check_images(group, group.packing.top);
                for (int i = 0; i < 60; ++i) {
                    check_images(group, random_word(group.packing, generator));
                }
            }
        }
    }
    for (const Group& group : {group_of(62, 1, 1, true, true), group_of(60, 1, 3, true, true)}) {
        for (int i = 0; i < 60; ++i) {
            check_images(group, random_word(group.packing, generator));
        }
    }
}

TEST_CASE("all words of a short ring: every one has its smallest image") {
    for (const Group& group : groups_on(6, 1)) {
        for (const Word word : all_words(group.packing)) {
            check_images(group, word);
        }
    }
    for (const Group& group : groups_on(4, 3)) {
        for (const Word word : all_words(group.packing)) {
            check_images(group, word);
        }
    }
}

TEST_CASE("characters multiply as the maps do, with the sign of the wrap") {
    constexpr std::uint64_t seed = 12;
    INFO("seed " << seed);
    std::mt19937_64 generator(seed);
    // Inversion changes the sum of the digits, so it goes with the wrap sign for no route.
    for (const Group& group : groups_on(6, 2)) {
        if (group.wrap_sign && (group.inversion || group.step == 0)) {
            continue;
        }
        // A word that no map leaves in place names each map by its image.
        Word word = 0;
        do {
            word = random_word(group.packing, generator);
        } while (maps_between(group, word, word).size() != 1);
        for (const Irrep& irrep : irreps_of(group, group.packing.digit_sum(word))) {
            const auto chi = characters(group, irrep);
            REQUIRE(chi.size() == 2 * static_cast<std::size_t>(group.numbers()));
            for_each_map(group, [&](int t1, int r1, int z1) {
                for_each_map(group, [&](int t2, int r2, int z2) {
                    const Moved inner = moved(group, t2, r2, z2, word);
                    const Moved outer = moved(group, t1, r1, z1, inner.word);
                    const auto product = maps_between(group, word, outer.word);
                    REQUIRE(product.size() == 1);
                    const auto [map, odd] = *product.begin();
                    const bool sign = odd != (inner.odd != outer.odd);
                    const auto at = [&](int number) {
                        return chi[static_cast<std::size_t>(number)];
                    };
                    const auto left = at(group.number(t1, r1, z1)) * at(group.number(t2, r2, z2));
                    const auto right = at(sign ? map + group.numbers() : map);
                    CHECK_NEAR(std::abs(left - right), 0.0, rounding(1.0, 8));
                });
            });
        }
    }
}

TEST_CASE("the number of states counted by Burnside is that of the orbits") {
    for (const int two_s : {1, 2, 3}) {
        const int length = two_s == 1 ? 8 : two_s == 2 ? 6 : 4;
        for (const Group& group : groups_on(length, two_s)) {
            if (group.wrap_sign && group.inversion) {
                continue;
            }
            for (const int sum : {0, 1, 2, length * two_s / 2}) {
                if (group.inversion && 2 * sum != length * two_s) {
                    continue;
                }
                for (const Irrep& irrep : irreps_of(group, sum)) {
                    CHECK(count_states(group, irrep, Conserved::up_count, sum) ==
                          static_cast<double>(
                              allowed_words(group, irrep, Conserved::up_count, sum).size()));
                    if (sum < 2 && (!group.inversion || length * two_s % 2 == 0)) {
                        CHECK(count_states(group, irrep, Conserved::parity, sum) ==
                              static_cast<double>(
                                  allowed_words(group, irrep, Conserved::parity, sum).size()));
                    }
                }
            }
        }
    }
}

TEST_CASE("the sectors of a chain hold (2S+1)^L states together") {
    for (const int two_s : {1, 2, 3}) {
        for (const int length : {3, 4, 5, 6, 12}) {
            for (const Conserved conserved :
                 {Conserved::nothing, Conserved::parity, Conserved::up_count}) {
                for (const int step : {0, 1, 2, 3}) {
                    if (step != 0 && length % step != 0) {
                        continue;
                    }
                    for (const bool wrap_sign : {false, true}) {
                        Symmetries symmetries;
                        symmetries.conserved = conserved;
                        symmetries.step = step;
                        symmetries.wrap_sign =
                            wrap_sign && step > 0 && conserved != Conserved::nothing;
                        symmetries.reflection = true;
                        symmetries.inversion = !wrap_sign;
                        const Chain chain{length, BoundaryKind::ring, 0.0, two_s};
                        double states = 0.0;
                        for (const Sector& sector : sectors_of(chain, symmetries)) {
                            states += count_states(sector.group,
                                                   sector.label.irrep,
                                                   sector.label.conserved,
                                                   sector.label.value);
                        }
                        CHECK(states == std::pow(two_s + 1.0, length));
                    }
                }
            }
        }
    }
}

TEST_CASE("momentum 0 over all up counts: binary necklaces") {
    // OEIS A000031 (quoted from memory), and counted here one by one.
    const std::vector<double> necklaces = {2, 3, 4, 6, 8, 14, 20, 36, 60, 108, 188, 352, 632, 1182};
    for (int length = 1; length <= 14; ++length) {
        const Group group = group_of(length, 1, 1);
        const double expected = necklaces[static_cast<std::size_t>(length - 1)];
        CHECK(count_states(group, {}, Conserved::nothing, 0) == expected);
        double counted = 0.0;
        for (const Word word : all_words(group.packing)) {
            counted += smallest_image(group, word) == word ? 1.0 : 0.0;
        }
        CHECK(counted == expected);
    }
}

TEST_CASE("momentum 1 over all up counts: Lyndon words") {
    // OEIS A001037 (quoted from memory): states of momentum 1 need an orbit of L words.
    const std::vector<double> lyndon = {2, 3, 6, 9, 18, 30, 56, 99, 186, 335, 630, 1161};
    for (int length = 3; length <= 14; ++length) {
        CHECK(count_states(group_of(length, 1, 1), {.momentum = 1}, Conserved::nothing, 0) ==
              lyndon[static_cast<std::size_t>(length - 3)]);
    }
}

TEST_CASE("momentum sectors at half filling: sums of Ramanujan") {
    // dim(n) = (1/L) sum_{d | gcd(L, N)} c_d(n) C(L/d, N/d), c_d Ramanujan's sum (C. Moreau, Nouv.
    // Ann. Math. 11, 309 (1872), quoted from memory); L = 8, 12, 16 and N = L/2.
    const std::vector<std::vector<double>> expected = {
        {10, 8, 9, 8, 10},
        {80, 75, 78, 76, 78, 75, 80},
        {810, 800, 808, 800, 809, 800, 808, 800, 810}};
    for (std::size_t i = 0; i < expected.size(); ++i) {
        const int length = 8 + 4 * static_cast<int>(i);
        const Group group = group_of(length, 1, 1);
        for (int n = 0; n <= length / 2; ++n) {
            const double states = expected[i][static_cast<std::size_t>(n)];
            CHECK(count_states(group, {.momentum = n}, Conserved::up_count, length / 2) == states);
            CHECK(count_states(group, {.momentum = -n}, Conserved::up_count, length / 2) == states);
        }
    }
}

TEST_CASE("the ground-state sector of the even Heisenberg ring: known sizes") {
    // Sz = 0, k = 0, reflection and inversion +1, L = 4n (recomputed by another program, which
    // enumerated the states).
    for (const auto& [length, states] :
         {std::pair{24, 28'968.0}, {28, 361'270.0}, {32, 4'707'969.0}}) {
        CHECK(
            count_states(group_of(length, 1, 1, true, true), {}, Conserved::up_count, length / 2) ==
            states);
    }
}
