#include <doctest/doctest.h>

#include "chainmark/dense/full_matrix.hpp"
#include "chainmark/sector/dense_matrix.hpp"
#include "chainmark/sector/halves_operator.hpp"
#include "chainmark/sector/orbit_operator.hpp"
#include "sector/explicit_maps.hpp"
#include "sector/vectors.hpp"
#include "support/ask.hpp"
#include "support/near.hpp"
#include "support/random_lists.hpp"

using namespace chainmark;
using namespace chainmark::sector;
using namespace chainmark::test;

namespace {

using Complex = std::complex<double>;

Chain chain_of(int length, int two_s, double twist = 0.0) {
    return {length, BoundaryKind::ring, twist, two_s};
}

Chain open_of(int length, int two_s) {
    return {length, BoundaryKind::open, 0.0, two_s};
}

/// random_terms with a product of three operators, whose sign depends on the site between.
Problem random_with_three(const RandomChain& wanted, std::mt19937_64& generator) {
    std::vector<PlacedTerm> terms = random_terms(wanted, generator);
    const int two_s = wanted.chain.two_s;
    const int length = wanted.chain.length();
    const int count = wanted.uniform ? 1 : wanted.chain.is_ring() ? length : length - 2;
    std::vector<Complex> couplings;
    for (int i = 0; i < count; ++i) {
        const double re = draw(generator);
        couplings.emplace_back(re, wanted.complex ? draw(generator) : 0.0);
    }
    terms.push_back({.factors = {SiteMatrix::raising(two_s),
                                 SiteMatrix::sz(two_s),
                                 SiteMatrix::lowering(two_s)},
                     .offsets = {0, 1, 2},
                     .coupling = couplings,
                     .add_conjugate = true});
    const Result<TermList> list = build_terms(wanted.chain, terms, Coincident::add, 1);
    return {wanted.chain, std::make_shared<const TermList>(list.value()), 0.3};
}

std::vector<Problem> small_problems() {
    std::mt19937_64 generator(31);
    std::vector<Problem> problems;
    for (const bool complex : {false, true}) {
        for (const bool uniform : {true, false}) {
            for (const Keeps keeps : {Keeps::sz, Keeps::parity, Keeps::nothing}) {
                const auto add = [&](const Chain& chain) {
                    problems.push_back(
                        random_with_three({chain, keeps, uniform, complex}, generator));
                };
                add(chain_of(7, 1));
                add(chain_of(6, 1, pi));
                add(chain_of(5, 2));
                add(chain_of(5, 2, pi));
                add(chain_of(4, 3));
                add(open_of(6, 1));
                add(open_of(4, 2));
            }
            for (const int two_s : {1, 2, 3}) {
                const Chain twisted = chain_of(two_s == 1 ? 6 : 4, two_s, 0.83);
                problems.push_back(
                    random_with_three({twisted, Keeps::sz, uniform, complex}, generator));
            }
        }
    }
    // Reflection and inversion hold as well.
    for (const Chain& chain :
         {chain_of(7, 1), chain_of(8, 1), chain_of(8, 1, pi), open_of(7, 1), chain_of(5, 2)}) {
        problems.push_back(family_problem("xxz", {1.0, 0.7}, chain));
        problems.push_back(family_problem("tfim", {1.0}, chain));
    }
    problems.push_back(family_problem("dimer_xx", {1.0, 0.3}, chain_of(8, 1)));
    problems.push_back(family_problem("blbq", {1.0, 0.4}, chain_of(5, 2)));
    problems.push_back(family_problem("heisenberg", {1.0}, chain_of(4, 3)));
    return problems;
}

/// Number of a configuration in the full space: base 2S+1 instead of bits.
Eigen::Index full_index(const Packing& packing, Word word) {
    Eigen::Index index = 0;
    for (int site = packing.length - 1; site >= 0; --site) {
        index = index * (packing.two_s + 1) + packing.digit(word, site);
    }
    return index;
}

Eigen::MatrixXcd full_of(const SectorHamiltonian& hamiltonian) {
    const int length = hamiltonian.chain.length();
    return dense::full_matrix<Complex>(hamiltonian.terms, length, hamiltonian.chain.two_s);
}

/// Columns: the orthonormal states of a sector over the full space, psi(s) = (-1)^odd chi(h) psi(a)
/// for h|s> = (-1)^odd |a>.
Eigen::MatrixXcd states_of(const Sector& sector, const std::vector<Word>& smallest) {
    const Packing& packing = sector.group.packing;
    const auto chi = characters(sector.group, sector.label.irrep);
    Eigen::MatrixXcd states = Eigen::MatrixXcd::Zero(full_index(packing, packing.top) + 1,
                                                     static_cast<Eigen::Index>(smallest.size()));
    for (const Word word : all_words(packing)) {
        for_each_map(sector.group, [&](int t, int r, int z) {
            const Moved image = moved(sector.group, t, r, z, word);
            const auto at = std::lower_bound(smallest.begin(), smallest.end(), image.word);
            if (at != smallest.end() && *at == image.word) {
                const Complex value = chi[static_cast<std::size_t>(sector.group.number(t, r, z))];
                states(full_index(packing, word), at - smallest.begin()) =
                    image.odd ? -value : value;
            }
        });
    }
    states.colwise().normalize();
    return states;
}

double scale_of(const SectorHamiltonian& hamiltonian) {
    return hamiltonian.packed.row_sum();
}
double operations(const SectorHamiltonian& hamiltonian) {
    return 4.0 + static_cast<double>(hamiltonian.packed.n_strings());
}

/// y = scale H x - keep y and the product it returns, against the matrix in the orthonormal basis.
template <class Scalar>
void check_product(const LinearOperator<Scalar>& op,
                   const MatrixOf<Scalar>& matrix,
                   const SectorHamiltonian& hamiltonian,
                   std::mt19937_64& generator) {
    REQUIRE(op.dim() == matrix.rows());
    const Eigen::VectorXd roots = weights_of(op.metric(), op.dim()).cwiseSqrt();
    const VectorOf<Scalar> x = random_vector<Scalar>(op.dim(), generator);
    const VectorOf<Scalar> before = random_vector<Scalar>(op.dim(), generator);
    for (const auto& [scale, keep] : {std::pair{1.0, 0.0}, {-0.7, 1.3}}) {
        VectorOf<Scalar> y = before;
        if (keep == 0.0) {
            y.setConstant(std::numeric_limits<double>::quiet_NaN());  // must not be read
        }
        const double product = op.multiply(x.data(), y.data(), scale, keep);
        const VectorOf<Scalar> left = roots.asDiagonal() * y;
        const VectorOf<Scalar> in = roots.asDiagonal() * x;
        VectorOf<Scalar> expected = scale * (matrix * in);
        if (keep != 0.0) {
            expected -= keep * (roots.asDiagonal() * before);
        }
        const double size = scale_of(hamiltonian) * (in.norm() + 1.0);
        CHECK_NEAR((left - expected).norm(), 0.0, rounding(size, operations(hamiltonian)));
        CHECK_NEAR(product,
                   std::real(in.dot(expected)),
                   rounding(size * (in.norm() + 1.0), operations(hamiltonian)));
    }
    CHECK(op.row_sum() * (1 + 1e-12) >= matrix.cwiseAbs().colwise().norm().template maxCoeff());
}

/// <x|H y> = <y|H x>*.
template <class Scalar>
void check_hermitian(const LinearOperator<Scalar>& op, std::mt19937_64& generator) {
    const Eigen::VectorXd weights = weights_of(op.metric(), op.dim());
    const VectorOf<Scalar> x = random_vector<Scalar>(op.dim(), generator);
    const VectorOf<Scalar> y = random_vector<Scalar>(op.dim(), generator);
    VectorOf<Scalar> hx(op.dim());
    VectorOf<Scalar> hy(op.dim());
    op.multiply(x.data(), hx.data(), 1.0, 0.0);
    op.multiply(y.data(), hy.data(), 1.0, 0.0);
    const Complex left = x.dot(weights.asDiagonal() * hy);
    const Complex right = y.dot(weights.asDiagonal() * hx);
    const double size = op.row_sum() * weights.sum();
    CHECK_NEAR(std::abs(left - std::conj(right)),
               0.0,
               rounding(size, 4.0 + static_cast<double>(op.n_strings())));
}

/// The same bits on any number of threads.
template <class Scalar, class Make>
void check_threads(Make&& make, std::mt19937_64& generator) {
    const std::unique_ptr<LinearOperator<Scalar>> one = make(context(1));
    const VectorOf<Scalar> x = random_vector<Scalar>(one->dim(), generator);
    const VectorOf<Scalar> before = random_vector<Scalar>(one->dim(), generator);
    VectorOf<Scalar> expected = before;
    const double product = one->multiply(x.data(), expected.data(), 0.9, -0.2);
    for (const int threads : {2, 3}) {
        const std::unique_ptr<LinearOperator<Scalar>> several = make(context(threads));
        VectorOf<Scalar> y = before;
        CHECK(several->multiply(x.data(), y.data(), 0.9, -0.2) == product);
        CHECK(y == expected);
    }
}

template <class Scalar>
void check_sector(const SectorHamiltonian& hamiltonian,
                  const Sector& sector,
                  const Eigen::MatrixXcd& full,
                  std::mt19937_64& generator) {
    const OrbitBasis basis(sector.group, sector.label, context());
    if (basis.dim() == 0) {
        return;
    }
    const OrbitRows<Scalar> rows(basis, hamiltonian.packed);
    const MatrixOf<Scalar> matrix = dense_matrix(rows);
    const Eigen::MatrixXcd states = states_of(sector, {basis.words().begin(), basis.words().end()});
    // The states carry a representation: H leaves their space, and acts in it by the matrix.
    const Eigen::MatrixXcd acted = full * states;
    const Eigen::MatrixXcd by_matrix = states * matrix.template cast<Complex>();
    CHECK_NEAR((acted - by_matrix).cwiseAbs().maxCoeff(),
               0.0,
               rounding(scale_of(hamiltonian), operations(hamiltonian)));
    for (const auto& op : {make_stored(rows, context()), make_matrix_free(rows, context())}) {
        check_product<Scalar>(*op, matrix, hamiltonian, generator);
        check_hermitian<Scalar>(*op, generator);
    }
    check_threads<Scalar>([&](const Context& c) { return make_stored(rows, c); }, generator);
    check_threads<Scalar>([&](const Context& c) { return make_matrix_free(rows, c); }, generator);
}

template <class Scalar>
void check_halves(const SectorHamiltonian& hamiltonian,
                  int value,
                  const Eigen::MatrixXcd& full,
                  std::mt19937_64& generator) {
    const Packing packing(hamiltonian.chain);
    const HalvesBasis basis(packing, hamiltonian.symmetries.conserved, value);
    const MatrixOf<Scalar> matrix = dense_matrix<Scalar>(basis, hamiltonian.packed);
    std::vector<Eigen::Index> place;
    basis.for_each_in(0, basis.highs().size(), [&](std::int64_t, Word word) {
        place.push_back(full_index(packing, word));
    });
    const Eigen::MatrixXcd expected = full(place, place);
    CHECK_NEAR((matrix.template cast<Complex>() - expected).cwiseAbs().maxCoeff(),
               0.0,
               rounding(scale_of(hamiltonian), operations(hamiltonian)));
    const auto make = [&](const Context& c) {
        return make_by_halves<Scalar>(basis, hamiltonian.terms, c);
    };
    const auto op = make(context());
    check_product<Scalar>(*op, matrix, hamiltonian, generator);
    check_hermitian<Scalar>(*op, generator);
    check_threads<Scalar>(make, generator);
}

}  // namespace

TEST_CASE("a sector's matrix is H between its states, by every kind of product") {
    std::mt19937_64 generator(32);
    for (const Problem& problem : small_problems()) {
        const SectorHamiltonian hamiltonian = hamiltonian_of(problem);
        const Eigen::MatrixXcd full = full_of(hamiltonian);
        for (const Sector& sector : sectors_of(problem.chain, hamiltonian.symmetries)) {
            INFO(to_string(problem.chain)
                 << ", " << to_string(labels_of(problem.chain, hamiltonian.symmetries, sector)));
            check_sector<Complex>(hamiltonian, sector, full, generator);
            if (is_real(hamiltonian, sector)) {
                check_sector<double>(hamiltonian, sector, full, generator);
            }
        }
    }
}

TEST_CASE("the matrix between all configurations, by halves") {
    std::mt19937_64 generator(33);
    for (const Problem& problem : small_problems()) {
        const SectorHamiltonian hamiltonian = hamiltonian_of(problem);
        const Eigen::MatrixXcd full = full_of(hamiltonian);
        int last = -1;
        for (const Sector& sector : sectors_of(problem.chain, hamiltonian.symmetries)) {
            const int value = sector.label.value;
            if (value == last) {
                continue;
            }
            last = value;
            INFO(to_string(problem.chain) << ", value " << value);
            check_halves<Complex>(hamiltonian, value, full, generator);
            if (hamiltonian.packed.is_real()) {
                check_halves<double>(hamiltonian, value, full, generator);
            }
        }
    }
}

namespace {

/// Stored elements, computed elements and halves on sectors of many blocks of rows.
template <class Scalar>
void check_large(const SectorHamiltonian& hamiltonian,
                 const Sector& sector,
                 std::mt19937_64& generator) {
    const OrbitBasis basis(sector.group, sector.label, context());
    const OrbitRows<Scalar> rows(basis, hamiltonian.packed);
    const auto stored = make_stored(rows, context());
    const auto computed = make_matrix_free(rows, context());
    check_threads<Scalar>([&](const Context& c) { return make_stored(rows, c); }, generator);
    check_threads<Scalar>([&](const Context& c) { return make_matrix_free(rows, c); }, generator);
    const VectorOf<Scalar> x = random_vector<Scalar>(basis.dim(), generator);
    VectorOf<Scalar> y(basis.dim());
    VectorOf<Scalar> z(basis.dim());
    stored->multiply(x.data(), y.data(), 1.0, 0.0);
    computed->multiply(x.data(), z.data(), 1.0, 0.0);
    CHECK_NEAR((y - z).cwiseAbs().maxCoeff(),
               0.0,
               rounding(scale_of(hamiltonian), operations(hamiltonian)));

    // The same product between configurations: psi(s) = (-1)^odd chi(h) psi(a).
    const HalvesBasis all(sector.group.packing, sector.label.conserved, sector.label.value);
    const auto between_all = make_by_halves<Complex>(all, hamiltonian.terms, context());
    const auto expanded = [&](const VectorOf<Scalar>& psi) {
        Eigen::VectorXcd result(all.dim());
        all.for_each_in(0, all.highs().size(), [&](std::int64_t index, Word word) {
            const Image image = basis.finder().smallest(word);
            const std::int64_t at = basis.index().find(basis.words(), image.word);
            const int character = image.character(sector.group.numbers());
            result[index] =
                at < 0 ? 0.0 : basis.characters()[static_cast<std::size_t>(character)] * psi[at];
        });
        return result;
    };
    const Eigen::VectorXcd wide = expanded(x);
    Eigen::VectorXcd product(all.dim());
    between_all->multiply(wide.data(), product.data(), 1.0, 0.0);
    CHECK_NEAR((product - expanded(y)).cwiseAbs().maxCoeff(),
               0.0,
               rounding(scale_of(hamiltonian), 2 * operations(hamiltonian)));
    check_threads<Complex>(
        [&](const Context& c) { return make_by_halves<Complex>(all, hamiltonian.terms, c); },
        generator);
}

}  // namespace

TEST_CASE("larger sectors: stored, computed and by halves agree, on any number of threads") {
    std::mt19937_64 generator(34);
    for (const Problem& problem :
         {random_with_three({chain_of(15, 1), Keeps::sz, true, false}, generator),
          random_with_three({chain_of(14, 1, 0.4), Keeps::sz, true, true}, generator),
          random_with_three({chain_of(9, 2, pi), Keeps::sz, true, false}, generator),
          random_with_three({chain_of(7, 3), Keeps::parity, true, true}, generator),
          family_problem("heisenberg", {1.0}, chain_of(16, 1))}) {
        const SectorHamiltonian hamiltonian = hamiltonian_of(problem);
        const int length = problem.chain.length();
        const int middle = hamiltonian.symmetries.conserved == Conserved::up_count
                               ? length * problem.chain.two_s / 2
                               : 0;
        for (const Sector& sector : sectors_of(problem.chain, hamiltonian.symmetries)) {
            const int n = sector.label.irrep.momentum;
            if (sector.label.value == middle && (n == 0 || n == 1)) {
                INFO(to_string(problem.chain) << ", momentum " << n);
                if (is_real(hamiltonian, sector)) {
                    check_large<double>(hamiltonian, sector, generator);
                }
                check_large<Complex>(hamiltonian, sector, generator);
            }
        }
    }
}
