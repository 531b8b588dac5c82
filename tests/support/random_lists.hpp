#pragma once

#include <memory>
#include <random>
#include <utility>
#include <vector>

#include "chainmark/base/numerics.hpp"
#include "chainmark/operators/hamiltonian.hpp"
#include "chainmark/reference/problem.hpp"

/// Random Hamiltonians for property tests; the seed is printed by the test that uses them.
namespace chainmark::test {

enum class Keeps { sz, parity, nothing };

struct RandomChain {
    Chain chain;
    Keeps keeps = Keeps::sz;
    bool uniform = false;  ///< the same couplings everywhere: translation symmetry on a ring
    bool complex = false;
};

inline double draw(std::mt19937_64& generator) {
    return std::uniform_real_distribution<double>(-1.0, 1.0)(generator);
}

/// Nearest- and next-nearest-neighbour couplings, fields and, for S > 1/2, single-site anisotropies
/// and squared hops that conserve what is asked for.
inline std::vector<PlacedTerm> random_terms(const RandomChain& wanted, std::mt19937_64& generator) {
    const auto couplings = [&](int distance, bool complex) {
        std::vector<std::complex<double>> values;
        const int length = wanted.chain.length();
        const int count = wanted.uniform ? 1 : wanted.chain.is_ring() ? length : length - distance;
        for (int i = 0; i < count; ++i) {
            const double re = draw(generator);
            values.emplace_back(re, complex ? draw(generator) : 0.0);
        }
        return values;
    };
    std::vector<PlacedTerm> terms;
    const auto add =
        [&](const SiteMatrix& a, const SiteMatrix& b, int distance, bool complex, bool conjugate) {
            terms.push_back({.factors = {a, b},
                             .offsets = {0, distance},
                             .coupling = couplings(distance, complex),
                             .add_conjugate = conjugate});
        };
    const int two_s = wanted.chain.two_s;
    const auto up = SiteMatrix::raising(two_s);
    const auto down = SiteMatrix::lowering(two_s);
    const auto z = SiteMatrix::sz(two_s);
    add(up, down, 1, wanted.complex, true);
    add(z, z, 1, false, false);
    add(up, down, 2, wanted.complex, true);
    terms.push_back({.factors = {z}, .offsets = {0}, .coupling = couplings(0, false)});
    if (two_s > 1) {
        terms.push_back({.factors = {z * z}, .offsets = {0}, .coupling = couplings(0, false)});
        add(up * up, down * down, 1, wanted.complex, true);
    }
    if (wanted.keeps != Keeps::sz) {
        add(up, up, 1, wanted.complex, true);
    }
    if (wanted.keeps == Keeps::nothing) {
        terms.push_back(
            {.factors = {SiteMatrix::sx(two_s)}, .offsets = {0}, .coupling = couplings(0, false)});
    }
    return terms;
}

inline Problem random_problem(const RandomChain& wanted, std::mt19937_64& generator, double field) {
    const auto terms = random_terms(wanted, generator);
    const Result<TermList> list = build_terms(wanted.chain, terms, Coincident::refuse, 1);
    return {wanted.chain, std::make_shared<const TermList>(list.value()), field};
}

/// A family's problem; aborts the test where it cannot be built.
inline Problem family_problem(const char* name,
                              const std::vector<double>& values,
                              const Chain& chain,
                              double field = 0.0) {
    const Family& family = *find_family(name);
    const auto terms = family_terms(family, values, chain);
    const Result<TermList> list =
        build_terms(chain, terms.value(), Coincident::refuse, family.cell);
    return {chain, std::make_shared<const TermList>(list.value()), field};
}

inline Chain ring(int length, double twist = 0.0) {
    return {length, BoundaryKind::ring, twist};
}

inline Chain open_chain(int length) {
    return {length, BoundaryKind::open, 0.0};
}

}  // namespace chainmark::test
