#pragma once

#include <memory>
#include <random>
#include <vector>

#include "chainmark/operators/hamiltonian.hpp"
#include "chainmark/reference/problem.hpp"
#include "support/random_lists.hpp"

/// Random Hamiltonians that are quadratic after the Jordan-Wigner transformation.
namespace chainmark::test {

struct QuadraticKind {
    Chain chain;
    bool pairs = true;
    bool complex = false;
    bool uniform = false;
    int longest = 1;     ///< range of the longest terms, Sz on every site between their ends
    bool wraps = false;  ///< open chains: also terms with Sz on every site outside
};

/// S^a_j Sz_{j+1} ... Sz_{j+r-1} S^b_{j+r}
inline std::vector<PlacedMatrix> cluster(int site,
                                         int range,
                                         const SiteMatrix& a,
                                         const SiteMatrix& b) {
    std::vector<PlacedMatrix> product = {{site, a}};
    for (int l = 1; l < range; ++l) {
        product.push_back({site + l, SiteMatrix::sz()});
    }
    product.push_back({site + range, b});
    return product;
}

/// Sz on every site but those of S^a_i S^b_j, i < j.
inline std::vector<PlacedMatrix> around(
    int sites, int i, int j, const SiteMatrix& a, const SiteMatrix& b) {
    std::vector<PlacedMatrix> product;
    for (int l = 0; l < sites; ++l) {
        if (l <= i || l >= j) {
            product.push_back({l, l == i ? a : l == j ? b : SiteMatrix::sz()});
        }
    }
    return product;
}

inline TermList quadratic_list(const QuadraticKind& kind, std::mt19937_64& generator) {
    const SiteMatrix up = SiteMatrix::raising();
    const SiteMatrix down = SiteMatrix::lowering();
    const int sites = kind.chain.length();
    TermCollector collector(kind.chain);
    const auto number = [&](int range) {
        const double scale = std::exp2(range - 1);  // a string of Sz counts a half each
        const double real = draw(generator);
        return scale * std::complex<double>(real, kind.complex ? draw(generator) : 0.0);
    };
    const auto add = [&](std::complex<double> value, const std::vector<PlacedMatrix>& product) {
        collector.add(value, product);
        collector.add_conjugate(value, product);
    };
    for (int range = 1; range <= std::min(kind.longest, sites - 1); ++range) {
        const int bonds = kind.chain.is_ring() ? sites : sites - range;
        std::complex<double> hop = number(range);
        std::complex<double> pair = number(range);
        for (int j = 0; j < bonds; ++j) {
            if (!kind.uniform) {
                hop = number(range);
                pair = number(range);
            }
            add(hop, cluster(j, range, up, down));
            if (kind.pairs) {
                add(pair, cluster(j, range, up, up));
            }
        }
    }
    if (kind.wraps && sites >= 3) {
        const int inner = sites - 2;  // one pair of ends, one field, and P itself
        add(number(1 + inner - 1), around(sites, 0, inner, up, down));
        if (kind.pairs) {
            add(number(2), around(sites, 0, sites - 1, up, up));
        }
        std::vector<PlacedMatrix> all_but_one;
        std::vector<PlacedMatrix> all;
        for (int j = 0; j < sites; ++j) {
            all.push_back({j, SiteMatrix::sz()});
            if (j != 1) {
                all_but_one.push_back({j, SiteMatrix::sz()});
            }
        }
        collector.add(std::exp2(sites - 2) * draw(generator), all_but_one);
        collector.add(std::exp2(sites - 1) * draw(generator), all);
    }
    double field = draw(generator);
    for (int j = 0; j < sites; ++j) {
        field = kind.uniform ? field : draw(generator);
        collector.add(field, {{j, SiteMatrix::sz()}});
    }
    return collector.finish().value();
}

inline Problem quadratic_problem(const QuadraticKind& kind,
                                 std::mt19937_64& generator,
                                 double field = 0.0) {
    return {kind.chain, std::make_shared<const TermList>(quadratic_list(kind, generator)), field};
}

}  // namespace chainmark::test
