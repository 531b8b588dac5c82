#include <Spectra/MatOp/DenseSymMatProd.h>
#include <Spectra/SymEigsSolver.h>
#include <doctest/doctest.h>

#include "chainmark/base/hermitian_eigen.hpp"
#include "chainmark/sector/block.hpp"
#include "chainmark/sector/dense_matrix.hpp"
#include "chainmark/sector/halves_operator.hpp"
#include "chainmark/sector/lanczos.hpp"
#include "chainmark/sector/orbit_operator.hpp"
#include "sector/vectors.hpp"
#include "support/ask.hpp"
#include "support/near.hpp"
#include "support/random_lists.hpp"

using namespace chainmark;
using namespace chainmark::sector;
using namespace chainmark::test;

namespace {

using Complex = std::complex<double>;

/// Any real symmetric matrix as an operator.
class MatrixOperator final : public LinearOperator<double> {
public:
    explicit MatrixOperator(Eigen::MatrixXd matrix) : matrix_(std::move(matrix)) {}

    std::int64_t dim() const override { return matrix_.rows(); }
    Metric metric() const override { return {}; }
    double multiply(const double* x, double* y, double scale, double keep) const override {
        const Eigen::Map<const Eigen::VectorXd> in(x, matrix_.rows());
        Eigen::Map<Eigen::VectorXd> out(y, matrix_.rows());
        const Eigen::VectorXd image = scale * (matrix_ * in);
        if (keep == 0.0) {
            out = image;
        } else {
            out = image - keep * out;
        }
        ++products;
        return in.dot(out);
    }
    double row_sum() const override {
        return matrix_.size() == 0 ? 0.0 : matrix_.cwiseAbs().rowwise().sum().maxCoeff();
    }
    std::size_t n_strings() const override { return 3; }
    int threads() const override { return 1; }

    mutable int products = 0;

private:
    Eigen::MatrixXd matrix_;
};

template <class Scalar>
using Pairs = std::vector<EigenPair<Scalar>>;

template <class Scalar>
Pairs<Scalar> lowest_levels(const LinearOperator<Scalar>& op,
                            int count,
                            const Context& with = context(),
                            Aim aim = Aim::vector) {
    Pairs<Scalar> found;
    for (int i = 0; i < count; ++i) {
        found.push_back(lowest_outside<Scalar>(op, found, aim, {}, with));
    }
    return found;
}

/// ||H v - E v|| and ||v||, measured here.
template <class Scalar>
void check_pair(const LinearOperator<Scalar>& op, const EigenPair<Scalar>& pair) {
    const Eigen::VectorXd weights = weights_of(op.metric(), op.dim());
    const Eigen::Map<const VectorOf<Scalar>> v(pair.vector.data(), op.dim());
    VectorOf<Scalar> hv(op.dim());
    op.multiply(v.data(), hv.data(), 1.0, 0.0);
    const auto norm = [&](const VectorOf<Scalar>& x) {
        return std::sqrt(std::real(x.dot(weights.asDiagonal() * x)));
    };
    CHECK_NEAR(norm(v), 1.0, rounding(1.0, 8));
    CHECK(norm(hv - pair.value * v) <= pair.residual);
}

/// Orthogonal to each other in the metric.
template <class Scalar>
void check_orthogonal(const LinearOperator<Scalar>& op, const Pairs<Scalar>& pairs) {
    const Eigen::VectorXd weights = weights_of(op.metric(), op.dim());
    for (std::size_t i = 0; i < pairs.size(); ++i) {
        const Eigen::Map<const VectorOf<Scalar>> a(pairs[i].vector.data(), op.dim());
        for (std::size_t j = 0; j < i; ++j) {
            const Eigen::Map<const VectorOf<Scalar>> b(pairs[j].vector.data(), op.dim());
            CHECK_NEAR(std::abs(a.dot(weights.asDiagonal() * b)), 0.0, rounding(1.0, 16));
        }
    }
}

template <class Scalar>
void check_sector(const SectorHamiltonian& hamiltonian, const Sector& sector, int count) {
    const OrbitBasis basis(sector.group, sector.label, context());
    const OrbitRows<Scalar> rows(basis, hamiltonian.packed);
    const auto op = make_stored(rows, context());
    const Eigen::VectorXd levels = hermitian_eigen(dense_matrix(rows)).values;
    const Pairs<Scalar> pairs = lowest_levels<Scalar>(*op, count);
    for (int i = 0; i < count; ++i) {
        const EigenPair<Scalar>& pair = pairs[static_cast<std::size_t>(i)];
        CHECK_NEAR(pair.value, levels[i], bound(pair.residual + 1e-15 * op->row_sum()));
        CHECK(pair.residual <= 64 * pair.noise);
        CHECK(pair.next > pair.value - pair.residual);
        check_pair(*op, pair);
    }
    check_orthogonal(*op, pairs);
}

}  // namespace

TEST_CASE("the ten lowest levels of sectors of some hundred states are those of LAPACK") {
    std::mt19937_64 generator(41);
    for (const Problem& problem :
         {random_problem({ring(14), Keeps::sz, true, false}, generator, 0.1),
          random_problem({ring(13), Keeps::sz, true, true}, generator, 0.1),
          random_problem({ring(12, 0.6), Keeps::sz, true, true}, generator, 0.1),
          random_problem({ring(13, pi), Keeps::parity, true, false}, generator, 0.1),
          random_problem({ring(12), Keeps::nothing, true, true}, generator, 0.1),
          random_problem(
              {Chain{7, BoundaryKind::ring, 0.0, 2}, Keeps::parity, true, false}, generator, 0.1),
          family_problem("j1j2", {1.0, 0.5}, ring(16))}) {
        const SectorHamiltonian hamiltonian = hamiltonian_of(problem);
        const int middle = hamiltonian.symmetries.conserved == Conserved::up_count
                               ? problem.chain.length() * problem.chain.two_s / 2
                               : 0;
        for (const Sector& sector : sectors_of(problem.chain, hamiltonian.symmetries)) {
            const int n = sector.label.irrep.momentum;
            if (sector.label.value == middle && (n == 0 || n == 2)) {
                INFO(to_string(problem.chain) << ", momentum " << n);
                if (is_real(hamiltonian, sector)) {
                    check_sector<double>(hamiltonian, sector, 10);
                } else {
                    check_sector<Complex>(hamiltonian, sector, 10);
                }
            }
        }
    }
}

namespace {

/// All levels of the XX ring with `up` up spins: sums of cos k over `up` of the momenta
/// 2 pi (n + 1/2)/L for even `up`, 2 pi n/L for odd (Lieb, Schultz, Mattis, Ann. Phys. (NY) 16, 407
/// (1961)).
std::vector<double> xx_levels(int length, int up) {
    std::vector<double> levels;
    for (unsigned set = 0; set < 1U << length; ++set) {
        if (std::popcount(set) != up) {
            continue;
        }
        long double energy = 0.0L;
        for (int n = 0; n < length; ++n) {
            if ((set >> n & 1U) != 0) {
                const long double number = n + (up % 2 == 0 ? 0.5L : 0.0L);
                energy += std::cos(2 * std::numbers::pi_v<long double> * number / length);
            }
        }
        levels.push_back(static_cast<double>(energy));
    }
    std::sort(levels.begin(), levels.end());
    return levels;
}

}  // namespace

TEST_CASE("copies of degenerate levels: XX rings in the whole Sz = 0 space") {
    for (const int length : {12, 14}) {
        const SectorHamiltonian hamiltonian =
            hamiltonian_of(family_problem("xx", {1.0}, ring(length)));
        const HalvesBasis basis(Packing(length, 1), Conserved::up_count, length / 2);
        const auto op = make_by_halves<double>(basis, hamiltonian.terms, context());
        const std::vector<double> levels = xx_levels(length, length / 2);
        CHECK_NEAR(levels[1], levels[4], rounding(4.0, 4));  // fourfold
        const Pairs<double> pairs = lowest_levels<double>(*op, 10);
        for (std::size_t i = 0; i < pairs.size(); ++i) {
            CHECK_NEAR(pairs[i].value, levels[i], bound(pairs[i].residual));
            CHECK(pairs[i].residual < 1e-12);
            check_pair(*op, pairs[i]);
        }
        check_orthogonal(*op, pairs);
    }
}

TEST_CASE("spaces of one and two states, and no states left over") {
    const MatrixOperator one(Eigen::MatrixXd::Constant(1, 1, -3.25));
    const Pairs<double> single = lowest_levels(one, 1);
    CHECK(single[0].value == -3.25);
    Eigen::MatrixXd matrix(2, 2);
    matrix << 1.0, 2.0, 2.0, -2.0;  // eigenvalues 2 and -3
    const MatrixOperator two(matrix);
    const Pairs<double> both = lowest_levels(two, 2);
    CHECK_NEAR(both[0].value, -3.0, bound(both[0].residual));
    CHECK_NEAR(both[1].value, 2.0, bound(both[1].residual));
    CHECK(both[1].residual < 1e-13);
    check_orthogonal(two, both);
}

TEST_CASE("an operator that is zero, and one that is a multiple of the identity") {
    const MatrixOperator zero(Eigen::MatrixXd::Zero(50, 50));
    for (const EigenPair<double>& pair : lowest_levels(zero, 3)) {
        CHECK(pair.value == 0.0);
        CHECK(pair.residual == 0.0);
        check_pair(zero, pair);
    }
    const MatrixOperator multiple(-2.5 * Eigen::MatrixXd::Identity(50, 50));
    const Pairs<double> pairs = lowest_levels(multiple, 4);
    for (const EigenPair<double>& pair : pairs) {
        CHECK_NEAR(pair.value, -2.5, bound(pair.residual));
        CHECK(pair.residual < 1e-13);
    }
    check_orthogonal(multiple, pairs);
}

TEST_CASE("a small gap needs several runs") {
    // The open chain of hops, -1 between neighbours: levels -2 cos(pi k/(n+1)) (elementary). Two
    // lowest 3 pi^2/n^2 apart, in a spectrum of width 4.
    constexpr int size = 600;
    Eigen::MatrixXd hops = Eigen::MatrixXd::Zero(size, size);
    for (int i = 0; i + 1 < size; ++i) {
        hops(i, i + 1) = hops(i + 1, i) = -1.0;
    }
    const MatrixOperator op(hops);
    const EigenPair<double> pair = lowest_outside<double>(op, {}, Aim::vector, {}, context());
    CHECK(op.products > 800);  // more than one run with its second pass
    CHECK_NEAR(pair.value, -2 * std::cos(pi / (size + 1)), bound(pair.residual));
    CHECK(pair.residual < 1e-12);
    check_pair(op, pair);
}

TEST_CASE("vectors that are not kept are made again: the same result in any memory") {
    const SectorHamiltonian hamiltonian =
        hamiltonian_of(family_problem("j1j2", {1.0, 0.3}, ring(14)));
    const HalvesBasis basis(Packing(14, 1), Conserved::up_count, 7);
    const auto op = make_by_halves<double>(basis, hamiltonian.terms, context());
    const EigenPair<double> kept = lowest_outside<double>(*op, {}, Aim::vector, {}, context());
    Context none = context();
    none.memory = nullptr;
    Context little = context();
    little.memory = std::make_shared<MemoryBudget>(1000.0);
    Context some = context();  // room for about ten of the vectors
    some.memory = std::make_shared<MemoryBudget>(4.0 * 10 * 8 * static_cast<double>(op->dim()));
    for (const Context& with : {none, little, some}) {
        const EigenPair<double> pair = lowest_outside<double>(*op, {}, Aim::vector, {}, with);
        CHECK_NEAR(pair.value, kept.value, rounding(op->row_sum(), 4));
        CHECK(pair.residual < 1e-12);
        check_pair(*op, pair);
        const Eigen::Map<const Eigen::VectorXd> a(pair.vector.data(), op->dim());
        const Eigen::Map<const Eigen::VectorXd> b(kept.vector.data(), op->dim());
        CHECK_NEAR(a.dot(b), 1.0, rounding(1.0, 16));
    }
}

TEST_CASE("one and several threads find the same bits") {
    const SectorHamiltonian hamiltonian =
        hamiltonian_of(family_problem("heisenberg", {1.0}, ring(14)));
    const HalvesBasis basis(Packing(14, 1), Conserved::up_count, 7);
    const auto solve = [&](int threads) {
        const auto op = make_by_halves<double>(basis, hamiltonian.terms, context(threads));
        return lowest_outside<double>(*op, {}, Aim::vector, {}, context(threads));
    };
    const EigenPair<double> one = solve(1);
    const EigenPair<double> two = solve(2);
    CHECK(one.value == two.value);
    CHECK(one.vector == two.vector);
}

TEST_CASE("a stop request ends a search") {
    const MatrixOperator op(Eigen::MatrixXd::Identity(10, 10));
    std::stop_source source;
    Context stopped = context();
    stopped.stop = source.get_token();
    source.request_stop();
    CHECK_THROWS_AS(lowest_outside<double>(op, {}, Aim::vector, {}, stopped), Interrupted);
    const SectorHamiltonian hamiltonian = hamiltonian_of(family_problem("xx", {1.0}, ring(14)));
    const auto sectors = sectors_of(hamiltonian.chain, hamiltonian.symmetries);
    const auto block = make_block(sectors[sectors.size() / 2], hamiltonian);
    CHECK_THROWS_AS(block->solve_completely(stopped), Interrupted);
}

namespace {

struct Lowest {
    long double level;
    double gap;
};

/// The lowest level to more digits than a double holds: a Rayleigh quotient in long double of
/// LAPACK's vector, whose error is residual^2 / gap < 1e-23 for gaps above 1e-3.
template <class Scalar>
Lowest lowest_exactly(const MatrixOf<Scalar>& matrix) {
    using Wide =
        std::conditional_t<std::is_same_v<Scalar, double>, long double, std::complex<long double>>;
    const HermitianEigen<Scalar> solution = hermitian_eigen(matrix);
    const Eigen::Matrix<Wide, Eigen::Dynamic, 1> v = solution.vectors.col(0).template cast<Wide>();
    long double above = 0.0L;
    long double below = 0.0L;
    for (Eigen::Index row = 0; row < matrix.rows(); ++row) {
        Wide image(0);
        for (Eigen::Index column = 0; column < matrix.cols(); ++column) {
            if (matrix(row, column) != Scalar(0)) {
                image += static_cast<Wide>(matrix(row, column)) * v[column];
            }
        }
        above += std::real(Eigen::numext::conj(v[row]) * image);
        below += std::norm(v[row]);
    }
    return {above / below, solution.values[1] - solution.values[0]};
}

/// The chains that the bounds are tried on, by number: their sectors hold 400 to 1000 states.
Problem chain_for_bounds(int number, std::mt19937_64& generator) {
    const bool complex = number % 16 == 5;
    const Chain chain = number % 4 == 0   ? ring(11)
                        : number % 4 == 1 ? open_chain(11)
                        : number % 8 == 2 ? Chain{6, BoundaryKind::open, 0.0, 3}
                                          : ring(11, pi);
    return random_problem({chain, Keeps::sz, false, complex}, generator, 0.0);
}

}  // namespace

TEST_CASE("bounds of the lowest level are never below its error and not far above it") {
    constexpr std::uint64_t seed = 42;
    INFO("seed " << seed);
    std::mt19937_64 generator(seed);
    std::vector<double> excess;
    int skipped = 0;
    for (int number = 0; number < 215; ++number) {
        const Problem problem = chain_for_bounds(number, generator);
        const SectorHamiltonian hamiltonian = hamiltonian_of(problem);
        const auto sectors = sectors_of(problem.chain, hamiltonian.symmetries);
        const int middle = problem.chain.length() * problem.chain.two_s / 2;
        const auto sector = std::find_if(sectors.begin(), sectors.end(), [&](const Sector& s) {
            return s.label.value == middle;
        });
        REQUIRE(sector->group.is_trivial());
        const auto block = make_block(*sector, hamiltonian);
        REQUIRE(block->dim() > Block::dense_limit);
        const HalvesBasis basis(
            sector->group.packing, sector->label.conserved, sector->label.value);
        const Lowest exact =
            hamiltonian.packed.is_real()
                ? lowest_exactly<double>(dense_matrix<double>(basis, hamiltonian.packed))
                : lowest_exactly<Complex>(dense_matrix<Complex>(basis, hamiltonian.packed));
        if (exact.gap < 1e-3) {
            ++skipped;
            continue;
        }
        for (const Aim aim : {Aim::value, Aim::vector}) {
            block->extend(1, aim, context());
            const auto error = static_cast<double>(
                std::abs(static_cast<long double>(block->energy(0)) - exact.level));
            INFO("chain " << number << ", aim " << (aim == Aim::value ? "value" : "vector"));
            CHECK(error <= block->bound(0));
            if (aim == Aim::value) {
                excess.push_back(block->bound(0) / std::max(error, 1e-18));
            }
        }
    }
    CHECK(skipped < 15);
    REQUIRE(excess.size() >= 200);
    std::sort(excess.begin(), excess.end());
    INFO("bound / error: median " << excess[excess.size() / 2]);
    CHECK(excess[excess.size() / 2] < 1e4);
}

TEST_CASE("a second solver finds the same lowest level") {
    std::mt19937_64 generator(43);
    for (int repeat = 0; repeat < 3; ++repeat) {
        const Problem problem =
            random_problem({open_chain(12), Keeps::sz, false, false}, generator, 0.0);
        const SectorHamiltonian hamiltonian = hamiltonian_of(problem);
        const HalvesBasis basis(Packing(12, 1), Conserved::up_count, 6);
        const auto op = make_by_halves<double>(basis, hamiltonian.terms, context());
        const EigenPair<double> pair = lowest_outside<double>(*op, {}, Aim::vector, {}, context());
        // Moved below 0, where the lowest level is the largest in size and none is lost at 0.
        const Eigen::MatrixXd matrix =
            dense_matrix<double>(basis, hamiltonian.packed) -
            op->row_sum() * Eigen::MatrixXd::Identity(basis.dim(), basis.dim());
        Spectra::DenseSymMatProd<double> product(matrix);
        Spectra::SymEigsSolver<Spectra::DenseSymMatProd<double>> solver(product, 1, 30);
        solver.init();
        REQUIRE(solver.compute(Spectra::SortRule::SmallestAlge, 1000, 1e-14) == 1);
        const Eigen::VectorXd v = solver.eigenvectors().col(0);
        const double value = solver.eigenvalues()[0];
        const double residual = (matrix * v - value * v).norm();
        CHECK(residual < 1e-11);
        CHECK_NEAR(pair.value, value + op->row_sum(), bound(residual + pair.residual));
    }
}
