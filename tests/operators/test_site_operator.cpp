#include <cmath>

#include <doctest/doctest.h>

#include "chainmark/operators/chain.hpp"
#include "chainmark/operators/site_matrix.hpp"
#include "operators/kronecker.hpp"

using namespace chainmark;
using namespace chainmark::test;

namespace {

SiteOperator sz_power(int degree) {
    return {static_cast<std::uint8_t>(degree), 0, 0};
}

SiteMatrix power(const SiteMatrix& matrix, int exponent) {
    SiteMatrix result = matrix;
    for (int i = 1; i < exponent; ++i) {
        result = result * matrix;
    }
    return result;
}

}  // namespace

TEST_CASE("Sz[k] are orthogonal under the trace, traceless and start with m^k") {
    for (int two_s = 1; two_s <= largest_two_s; ++two_s) {
        CAPTURE(two_s);
        for (int k = 0; k <= two_s; ++k) {
            for (int l = 0; l < k; ++l) {
                double trace = 0.0;
                double size = 0.0;
                for (int digit = 0; digit <= two_s; ++digit) {
                    const double part = gram_value(two_s, k, digit) * gram_value(two_s, l, digit);
                    trace += part;
                    size += std::abs(part);
                }
                CHECK(std::abs(trace) <= 1e-14 * size);
            }
            // The k-th finite difference of a polynomial of degree k with leading coefficient 1 is
            // k!, whatever the lower coefficients are.
            double difference = 0.0;
            double binomial = 1.0;
            double size = 0.0;
            for (int i = 0; i <= k; ++i) {
                const double part = binomial * gram_value(two_s, k, k - i);
                difference += i % 2 == 0 ? part : -part;
                size += std::abs(part);
                binomial = binomial * (k - i) / (i + 1);
            }
            CHECK(std::abs(difference - std::tgamma(k + 1.0)) <= 1e-14 * size);
        }
    }
}

TEST_CASE("Sz[1] = Sz, Sz[2] = Sz^2 - S(S+1)/3") {
    for (int two_s = 2; two_s <= largest_two_s; ++two_s) {
        const double spin = two_s / 2.0;
        for (int digit = 0; digit <= two_s; ++digit) {
            const double m = digit - spin;
            CHECK(gram_value(two_s, 1, digit) == m);
            CHECK(std::abs(gram_value(two_s, 2, digit) - (m * m - spin * (spin + 1) / 3)) <
                  1e-14 * spin * spin);
        }
    }
}

TEST_CASE("Sz[k] from Gram-Schmidt on the powers of Sz") {
    for (int two_s = 1; two_s <= 8; ++two_s) {
        const SpinMatrices spin(two_s);
        for (int k = 0; k <= two_s; ++k) {
            const Matrix expected = orthogonal_power(spin, k);
            for (int digit = 0; digit <= two_s; ++digit) {
                CHECK(std::abs(gram_value(two_s, k, digit) - expected(digit, digit)) <
                      1e-12 * std::pow(spin.z(two_s, two_s).real() + 1, k));
            }
        }
    }
}

TEST_CASE("S+, S-, Sx, Sy, Sz obey the algebra of spin S") {
    for (int two_s = 1; two_s <= largest_two_s; ++two_s) {
        CAPTURE(two_s);
        const double casimir = two_s * (two_s + 2) / 4.0;
        const SiteMatrix x = SiteMatrix::sx(two_s);
        const SiteMatrix y = SiteMatrix::sy(two_s);
        const SiteMatrix z = SiteMatrix::sz(two_s);
        const SiteMatrix commutator = x * y - y * x;
        const SiteMatrix x2 = x * x;
        const SiteMatrix y2 = y * y;
        const SiteMatrix z2 = z * z;
        for (std::size_t i = 0; i < z.entries.size(); ++i) {
            // [Sx, Sy] = i Sz, S^2 = S(S+1), the algebra's two definitions
            const auto iz = std::complex<long double>(0, 1) * z.entries[i];
            CHECK(std::abs(commutator.entries[i] - iz) < 1e-16);
            const long double expected = i % (z.dim() + 1) == 0 ? casimir : 0.0;
            CHECK(std::abs(x2.entries[i] + y2.entries[i] + z2.entries[i] - expected) < 1e-16);
        }
    }
}

TEST_CASE("sqrt(2) sqrt(2) is exactly 2 in the end") {
    // S+ S- of spin 1 has the elements 0, 2, 2: 4/3 + Sz - Sz[2]
    const SiteExpansion parts = expand(SiteMatrix::raising(2) * SiteMatrix::lowering(2));
    CHECK(static_cast<double>(parts.identity.real()) == 4.0 / 3.0);
    REQUIRE(parts.operators.size() == 2);
    CHECK(parts.operators[0].first == SiteOperator::z);
    CHECK(std::complex<double>(parts.operators[0].second) == 1.0);
    CHECK(parts.operators[1].first == sz_power(2));
    CHECK(std::complex<double>(parts.operators[1].second) == -1.0);
}

TEST_CASE("an expansion gives its matrix back, and holds no noise") {
    for (int two_s = 1; two_s <= largest_two_s; ++two_s) {
        CAPTURE(two_s);
        const SiteMatrix x = SiteMatrix::sx(two_s);
        const SiteMatrix matrix = x * SiteMatrix::sz(two_s) * x;
        const SiteExpansion parts = expand(matrix);
        SiteMatrix sum = SiteMatrix::identity(two_s);
        for (auto& entry : sum.entries) {
            entry *= parts.identity;
        }
        for (const auto& [op, coefficient] : parts.operators) {
            const SiteMatrix unit = to_matrix(op, two_s);
            for (std::size_t i = 0; i < sum.entries.size(); ++i) {
                sum.entries[i] += coefficient * unit.entries[i];
            }
            // Sx Sz Sx is odd in Sz and changes m by 0 or 2
            CHECK(op.degree % 2 == (op.is_diagonal() ? 1 : 0));
            CHECK(op.raises_by() % 2 == 0);
            CHECK(op.degree <= 3);
        }
        for (std::size_t i = 0; i < sum.entries.size(); ++i) {
            CHECK(std::abs(sum.entries[i] - matrix.entries[i]) < 1e-14);
        }
    }
    CHECK(expand(power(SiteMatrix::sz(15), 4)).operators.size() == 2);  // Sz[2] and Sz[4]
    CHECK(expand(power(SiteMatrix::raising(3), 4)).operators.empty());  // S+^4 = 0
}

TEST_CASE("names of operators and spins") {
    CHECK(to_string(SiteOperator::z, 3) == "Sz");
    CHECK(to_string(sz_power(2), 2) == "Sz[2]");
    CHECK(to_string(SiteOperator::plus, 1) == "S+");
    CHECK(to_string(SiteOperator::minus, 1) == "S-");
    CHECK(to_string(SiteOperator{0, 2, 1}, 2) == "|+1><0|");
    CHECK(to_string(SiteOperator{0, 0, 2}, 2) == "|-1><+1|");
    CHECK(to_string(SiteOperator{0, 2, 1}, 3) == "|+1/2><-1/2|");
    CHECK(SiteOperator::z < SiteOperator::plus);
    CHECK(SiteOperator::plus < SiteOperator::minus);
    CHECK(conjugate(SiteOperator{0, 2, 1}) == SiteOperator{0, 1, 2});
    CHECK(conjugate(sz_power(3)) == sz_power(3));
    CHECK(spin_text(1) == "1/2");
    CHECK(spin_text(4) == "2");
    const Chain chain{.sites = 6, .two_s = 3};
    CHECK(to_string(chain) == "ring of 6 sites of spin 3/2");
    CHECK(to_string(Chain{.sites = 6, .twist = 0.5, .two_s = 2}) ==
          "ring of 6 sites of spin 1, twist 0.5");
    CHECK(to_string(Chain{.sites = 6}) == "ring of 6 sites");
}
