#include <doctest/doctest.h>

#include "chainmark/base/numerics.hpp"
#include "chainmark/sector/basis.hpp"
#include "chainmark/sector/momentum.hpp"
#include "support/random_lists.hpp"

using namespace chainmark;
using namespace chainmark::sector;
using chainmark::test::ring;

TEST_CASE("sector dimensions are binomial coefficients and ranks invert states") {
    for (int length = 1; length <= 13; ++length) {
        for (int up = 0; up <= length; ++up) {
            const SectorBasis basis({Conserved::up_count, up}, length);
            REQUIRE(basis.dim() == binomial(length, up));
            for (std::int64_t i = 0; i < basis.dim(); ++i) {
                REQUIRE(basis.rank(basis.state(i)) == i);
                REQUIRE((i == 0 || basis.state(i - 1) < basis.state(i)));
            }
        }
        for (const int parity : {0, 1}) {
            const SectorBasis basis({Conserved::parity, parity}, length);
            REQUIRE(basis.dim() == std::int64_t{1} << (length - 1));
            for (std::int64_t i = 0; i < basis.dim(); ++i) {
                REQUIRE(basis.rank(basis.state(i)) == i);
            }
        }
    }
}

TEST_CASE("momentum 0 over all up counts: necklaces, OEIS A000031 (MacMahon 1892)") {
    const std::vector<std::size_t> necklaces = {
        2, 3, 4, 6, 8, 14, 20, 36, 60, 108, 188, 352, 632, 1182};
    for (int length = 3; length <= 14; ++length) {
        const Orbits orbits({Conserved::nothing, 0}, ring(length));
        CHECK(orbits.with_momentum(0).size() == necklaces[static_cast<std::size_t>(length - 1)]);
    }
}

TEST_CASE("momentum 1 over all up counts: Lyndon words, OEIS A001037 (Moreau 1872)") {
    const std::vector<std::size_t> lyndon = {2, 1, 2, 3, 6, 9, 18, 30, 56, 99, 186, 335, 630, 1161};
    for (int length = 3; length <= 14; ++length) {
        const Orbits orbits({Conserved::nothing, 0}, ring(length));
        CHECK(orbits.with_momentum(1).size() == lyndon[static_cast<std::size_t>(length - 1)]);
    }
}

TEST_CASE("momentum sectors at half filling: Moreau, Nouv. Ann. Math. 11, 309 (1872)") {
    // dim(q) = (1/L) sum_{d | gcd(L, N)} c_d(q) C(L/d, N/d), c_d Ramanujan's sum; L = 8, 12, 16.
    const std::vector<std::vector<std::size_t>> expected = {
        {10, 8, 9, 8, 10},
        {80, 75, 78, 76, 78, 75, 80},
        {810, 800, 808, 800, 809, 800, 808, 800, 810}};
    for (std::size_t i = 0; i < expected.size(); ++i) {
        const int length = 8 + 4 * static_cast<int>(i);
        const Orbits orbits({Conserved::up_count, length / 2}, ring(length));
        for (int n = 0; n <= length / 2; ++n) {
            CHECK(orbits.with_momentum(n).size() == expected[i][static_cast<std::size_t>(n)]);
            CHECK(orbits.with_momentum(-n).size() == expected[i][static_cast<std::size_t>(n)]);
        }
    }
}
