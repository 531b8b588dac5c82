#pragma once

#include <cmath>
#include <complex>
#include <memory>
#include <random>
#include <string>
#include <vector>

#include <Eigen/Core>
#include <doctest/doctest.h>

#include "chainmark/base/numerics.hpp"
#include "chainmark/fermion/routes.hpp"
#include "chainmark/operators/hamiltonian.hpp"
#include "support/near.hpp"

namespace chainmark::test {

using Complex = std::complex<double>;

/// H = sum_b t_b S+_b S-_{b+1} + h.c. + sum_j z_j Sz_j, written down once for the route (as a term
/// list) and once for the explicit matrix. Bond L-1 is the wrap bond.
struct Model {
    Chain chain;
    std::vector<Complex> hop;  ///< L on a ring, L - 1 on an open chain, without the twist
    std::vector<double> onsite;
    double field = 0.0;
};

inline Chain ring(int sites, double twist = 0.0) {
    return {.sites = sites, .boundary = BoundaryKind::ring, .twist = twist};
}

inline Chain open_chain(int sites) {
    return {.sites = sites, .boundary = BoundaryKind::open, .twist = 0.0};
}

inline std::size_t at(int i) {
    return static_cast<std::size_t>(i);
}

/// J (Sx Sx + Sy Sy) = (J/2)(S+ S- + S- S+) on every bond.
inline Model xx_model(const Chain& chain, double coupling, double field = 0.0) {
    const int bonds = chain.is_ring() ? chain.length() : chain.length() - 1;
    return {.chain = chain,
            .hop = std::vector<Complex>(at(bonds), coupling / 2),
            .onsite = std::vector<double>(at(chain.length())),
            .field = field};
}

/// Random complex hops and random on-site fields.
inline Model random_model(const Chain& chain, unsigned seed, bool complex_hops) {
    std::mt19937_64 generator(seed);
    std::uniform_real_distribution<double> uniform(-1.0, 1.0);
    Model model = xx_model(chain, 1.0);
    for (Complex& hop : model.hop) {
        hop = {uniform(generator), complex_hops ? uniform(generator) : 0.0};
    }
    for (double& onsite : model.onsite) {
        onsite = uniform(generator);
    }
    return model;
}

inline Problem problem_of(const Model& model) {
    TermCollector collector(model.chain);
    const auto add_hop = [&](int site, Complex hop) {
        const std::vector<PlacedMatrix> product = {{site, SiteMatrix::raising()},
                                                   {site + 1, SiteMatrix::lowering()}};
        collector.add(hop, product);
        collector.add_conjugate(hop, product);
    };
    for (std::size_t b = 0; b < model.hop.size(); ++b) {
        add_hop(static_cast<int>(b), model.hop[b]);
    }
    for (std::size_t j = 0; j < model.onsite.size(); ++j) {
        collector.add(model.onsite[j], {{static_cast<int>(j), SiteMatrix::sz()}});
    }
    return {.chain = model.chain,
            .terms = std::make_shared<TermList>(collector.finish().value()),
            .field = model.field};
}

/// The family xx on any chain, the way the program builds it.
inline Problem xx_problem(const Chain& chain, double coupling, double field = 0.0) {
    const Family* family = find_family("xx");
    const std::vector<double> values = {coupling};
    const auto terms = family->terms(values, chain);
    return {.chain = chain,
            .terms = std::make_shared<TermList>(
                build_terms(chain, terms, Coincident::refuse, family->cell).value()),
            .field = field};
}

/// xx with its list written down at once, for very long chains.
inline Problem long_xx_problem(const Chain& chain, double coupling, double field = 0.0) {
    constexpr SiteOperator plus = SiteOperator::plus;
    constexpr SiteOperator minus = SiteOperator::minus;
    const int sites = chain.length();
    TermList list;
    for (int j = 0; j + 1 < sites; ++j) {
        list.terms.push_back({{{j, plus}, {j + 1, minus}}, coupling / 2});
        list.terms.push_back({{{j, minus}, {j + 1, plus}}, coupling / 2});
    }
    if (chain.is_ring()) {
        list.terms.push_back({{{0, plus}, {sites - 1, minus}}, coupling / 2});
        list.terms.push_back({{{0, minus}, {sites - 1, plus}}, coupling / 2});
    }
    return {.chain = chain, .terms = std::make_shared<TermList>(list), .field = field};
}

inline Query query(QuantityId id, const Options& options = {}) {
    return {.spec = &spec_of(id), .options = options, .label = ""};
}

inline Answer ask(const Route& route,
                  const Problem& problem,
                  QuantityId id,
                  const Options& options = {}) {
    const Batch batch{.problems = {problem}, .queries = {query(id, options)}};
    return route.evaluate(batch, Context{}).front().front();
}

inline Reference get(const Route& route,
                     const Problem& problem,
                     QuantityId id,
                     const Options& options = {}) {
    const Answer answer = ask(route, problem, id, options);
    REQUIRE(std::holds_alternative<Reference>(answer));
    return std::get<Reference>(answer);
}

inline Reference fermion(const Problem& problem, QuantityId id, const Options& options = {}) {
    return get(fermion_route(), problem, id, options);
}

/// A difference that is allowed for the reason given.
inline Allowed allow(double size, const char* reason) {
    return {size, reason};
}

inline double value(const Reference& reference) {
    return reference.value.real_at(0);
}

/// The explicit 2^L matrices, by loops over bits: bit j of a state is site j, 1 = up. Written for
/// these tests and sharing nothing with the library.
namespace explicit_matrix {

using Matrix = Eigen::MatrixXcd;

inline bool up(int state, int site) {
    return ((state >> site) & 1) != 0;
}

inline double sz(int state, int site) {
    return up(state, site) ? 0.5 : -0.5;
}

inline double total_sz(int state, int sites) {
    double sum = 0.0;
    for (int j = 0; j < sites; ++j) {
        sum += sz(state, j);
    }
    return sum;
}

/// The wrap bond is t exp(i phi) S+_{L-1} S-_0 + h.c.
Matrix hamiltonian(const Model& model);

/// T S_j T^-1 = S_{j+1} with S+_L = exp(-i phi) S+_0; all down is carried to itself.
Matrix translation(const Chain& chain);

struct Spectrum {
    Eigen::VectorXd energies;  ///< ascending
    Matrix states;             ///< columns
    double error = 0.0;        ///< on each energy, from measured residuals
};

/// Diagonalizes block by block in the number of up spins, which must be conserved.
Spectrum diagonalize(const Matrix& matrix);

/// Lowest level of `ups` up spins.
double lowest(const Matrix& matrix, int ups);

/// Number of levels within `window` of the lowest.
inline int degeneracy(const Spectrum& spectrum, double window) {
    int count = 0;
    while (count < spectrum.energies.size() &&
           spectrum.energies(count) - spectrum.energies(0) <= window) {
        ++count;
    }
    return count;
}

/// Tr(P A)/dim over the lowest `dimension` states for the diagonal operator A(state).
template <class Diagonal>
double average(const Spectrum& spectrum, int dimension, Diagonal&& diagonal) {
    double sum = 0.0;
    for (int n = 0; n < dimension; ++n) {
        for (int state = 0; state < spectrum.states.rows(); ++state) {
            sum += std::norm(spectrum.states(state, n)) * diagonal(state);
        }
    }
    return sum / dimension;
}

}  // namespace explicit_matrix

}  // namespace chainmark::test
