#include <random>
#include <stdexcept>
#include <thread>

#include <doctest/doctest.h>

#include "chainmark/base/context.hpp"
#include "chainmark/base/error.hpp"
#include "chainmark/base/hermitian_eigen.hpp"
#include "chainmark/base/numerics.hpp"
#include "chainmark/base/parallel.hpp"
#include "chainmark/base/words.hpp"
#include "support/near.hpp"

using namespace chainmark;
using namespace chainmark::test;

TEST_CASE("errors say where, what and what would be right") {
    const Error error{ErrorCode::unknown_key, {"a.toml", 12, 3}, "no key 'x'", "did you mean 'y'?"};
    CHECK(to_string(error) == "a.toml:12:3: no key 'x'; did you mean 'y'?");
    CHECK(to_string(Error{ErrorCode::cannot_read, {"a.toml"}, "is a folder", ""}) ==
          "a.toml: is a folder");
    CHECK(error_id(ErrorCode::not_hermitian) == "not_hermitian");
}

TEST_CASE("a broken invariant throws with its place") {
    CHECK_THROWS_AS(CHAINMARK_EXPECTS(1 + 1 == 3), std::logic_error);
}

TEST_CASE("the nearest word") {
    const std::vector<std::string> words = {"sites", "boundary", "spin"};
    CHECK(nearest_word("boundry", words) == "boundary");
    CHECK(nearest_word("site", words) == "sites");
    CHECK(nearest_word("temperature", words).empty());
    CHECK(suggestion("spni", words) == "did you mean 'spin'? (allowed: sites, boundary, spin)");
    CHECK(suggestion("zzzzzz", words) == "allowed: sites, boundary, spin");
    const std::vector<std::string> short_words = {"J", "h", "xx", "XXZ"};
    CHECK(nearest_word("j", short_words) == "J");
    CHECK(nearest_word("x", short_words).empty());
    CHECK(nearest_word("", short_words).empty());
    CHECK(nearest_word("Jx", short_words) == "J");
    CHECK(nearest_word("xxz", short_words) == "XXZ");
}

TEST_CASE("one of a thing and more") {
    CHECK(counted(0, "site") == "0 sites");
    CHECK(counted(1, "site") == "1 site");
    CHECK(counted(2, "site") == "2 sites");
}

TEST_CASE("binomials") {
    CHECK(binomial(5, 2) == 10);
    CHECK(binomial(5, -1) == 0);
    CHECK(binomial(5, 6) == 0);
    CHECK(binomial(62, 31) == 465428353255261088);  // Pascal's triangle, computed exactly
}

TEST_CASE("grids meet the decimals that people mean") {
    const std::vector<double> grid = even_grid(0.0, 1.2, 25);
    CHECK(grid[3] == 0.15);
    CHECK(grid[20] == 1.0);
    CHECK(grid.back() == 1.2);
    CHECK(even_grid(0.7, 3.0, 1) == std::vector<double>{0.7});
}

TEST_CASE("dot products keep digits that plain sums lose") {
    const std::vector<double> a = {1.0, 1e-18, -1.0};
    const std::vector<double> b = {1.0, 1.0, 1.0};
    CHECK(accurate_dot(std::span(a), std::span(b)) > 0.9e-18);
    using Complex = std::complex<double>;
    const std::vector<Complex> c = {Complex(0, 1)};
    CHECK(accurate_dot(std::span(c), std::span(c)) == Complex(1, 0));
}

TEST_CASE("full eigensolutions: residuals and orthogonality of random matrices") {
    std::srand(3);
    for (const Eigen::Index n : {1, 2, 37}) {
        const Eigen::MatrixXcd random = Eigen::MatrixXcd::Random(n, n);
        const Eigen::MatrixXcd matrix = random + random.adjoint();
        const auto solution = hermitian_eigen(matrix);
        const double norm = matrix.norm();
        const Eigen::MatrixXcd residual =
            matrix * solution.vectors - solution.vectors * solution.values.asDiagonal();
        CHECK_NEAR(residual.norm(), 0.0, rounding(norm, 20));
        const Eigen::MatrixXcd gram = solution.vectors.adjoint() * solution.vectors;
        CHECK_NEAR((gram - Eigen::MatrixXcd::Identity(n, n)).norm(), 0.0, rounding(1.0, 100));
        const Eigen::MatrixXd real = matrix.real();
        const auto real_solution = hermitian_eigen(real);
        CHECK_NEAR(real_solution.values.sum(), real.trace(), rounding(norm, 50));
    }
}

TEST_CASE("bounds of a cluster are joined") {
    Eigen::VectorXd values(4);
    values << 0.0, 1.0, 1.0 + 1e-13, 2.0;
    Eigen::VectorXd residuals = Eigen::VectorXd::Constant(4, 3e-13);
    residuals[2] = 4e-13;
    const Eigen::VectorXd bounds = cluster_bounds(values, residuals);
    CHECK(bounds[0] == 3e-13);
    CHECK_NEAR(bounds[1], 5e-13, rounding(1e-12, 4));
    CHECK(bounds[2] == bounds[1]);
    CHECK(bounds[3] == 3e-13);
}

TEST_CASE("a memory budget lends and takes back") {
    MemoryBudget budget(100.0);
    {
        const auto first = budget.take(60.0);
        REQUIRE(first.has_value());
        CHECK(!budget.take(60.0).has_value());
        CHECK(budget.take(40.0).has_value());
    }
    CHECK(budget.take(100.0).has_value());
    CHECK(available_memory() > 1e6);
}

TEST_CASE("parallel loops visit everything once and pass exceptions on") {
    std::vector<std::atomic<int>> visits(1000);
    parallel_for(visits.size(), 3, [&](std::size_t i) { ++visits[i]; });
    for (const auto& count : visits) {
        REQUIRE(count == 1);
    }
    CHECK_THROWS_AS(parallel_for(100,
                                 3,
                                 [](std::size_t i) {
                                     if (i == 50) {
                                         throw std::runtime_error("stop");
                                     }
                                 }),
                    std::runtime_error);
}

TEST_CASE("poll throws once a stop is requested") {
    std::stop_source source;
    Context context;
    context.stop = source.get_token();
    poll(context);
    source.request_stop();
    CHECK_THROWS_AS(poll(context), Interrupted);
}
