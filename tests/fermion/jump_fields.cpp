#include <limits>

#include "fermion/support.hpp"

namespace chainmark::test {
namespace {

namespace em = explicit_matrix;

/// E(N) of the explicit matrix: the lowest level of each up count.
std::vector<double> sector_minima(Model model) {
    model.field = 0.0;
    const int sites = model.chain.length();
    const em::Matrix matrix = em::hamiltonian(model);
    std::vector<double> minima;
    for (int n = 0; n <= sites; ++n) {
        minima.push_back(em::lowest(matrix, n));
    }
    return minima;
}

/// The walk written out: from N to the N' > N of smallest slope, the largest among equals.
void check_jumps(const Model& model) {
    constexpr double equal = 1e-11;
    const int sites = model.chain.length();
    const std::vector<double> minimum = sector_minima(model);
    const Reference found = fermion(problem_of(model), QuantityId::jump_fields);
    std::vector<double> fields;
    std::vector<double> total_sz = {-sites / 2.0};
    for (int n = 0; n < sites;) {
        double smallest = std::numeric_limits<double>::infinity();
        int farthest = n;
        for (int next = n + 1; next <= sites; ++next) {
            const double slope = (minimum[at(next)] - minimum[at(n)]) / (next - n);
            if (slope < smallest + equal) {
                smallest = std::min(smallest, slope);
                farthest = next;
            }
        }
        fields.push_back(smallest - model.field);
        total_sz.push_back(farthest - sites / 2.0);
        n = farthest;
    }
    REQUIRE(found.value.data.size() == fields.size());
    CHECK(found.value.total_sz == total_sz);
    for (std::size_t i = 0; i < fields.size(); ++i) {
        CHECK_NEAR(found.value.real_at(i), fields[i], bound(found.bound[i] + 1e-14 * sites));
    }
}

TEST_CASE("jump fields against the lowest level of every up count") {
    for (const int sites : {3, 4, 5, 6, 7, 8}) {
        for (const double coupling : {1.0, -1.0}) {
            check_jumps(xx_model(ring(sites), coupling));
            check_jumps(xx_model(open_chain(sites), coupling));
        }
        check_jumps(xx_model(ring(sites, 0.9), 1.0));
        check_jumps(xx_model(ring(sites, pi), 1.0));
    }
    for (unsigned seed = 1; seed <= 5; ++seed) {
        check_jumps(random_model(ring(6), seed, true));
        check_jumps(random_model(open_chain(7), seed, false));
    }
    check_jumps(xx_model(ring(5), 1.0, 0.37));  // a field in H moves all jumps
}

TEST_CASE("without couplings there is one jump over all up counts") {
    const Reference found = fermion(xx_problem(ring(6), 0.0), QuantityId::jump_fields);
    REQUIRE(found.value.data.size() == 1);
    CHECK(found.value.real_at(0) == 0.0);
    CHECK(found.value.total_sz == std::vector<double>{-3.0, 3.0});
}

TEST_CASE("even rings: the closed form, the last jump at |J|") {
    // Katsura, Phys. Rev. 127, 1508 (1962) and Lieb, Schultz, Mattis, Ann. Phys. 16, 407 (1961),
    // derived from E(N) = -J sin(pi N/L)/sin(pi/L):
    //   h_m = J sin(pi (2m+1)/(2L))/cos(pi/(2L)), m = 0 ... L/2 - 1, and their negatives.
    for (const int sites : {4, 6, 8, 10, 1000, 100000}) {
        for (const double coupling : {1.0, -1.0}) {
            const Reference found =
                fermion(long_xx_problem(ring(sites), coupling), QuantityId::jump_fields);
            REQUIRE(found.value.data.size() == at(sites));
            for (int m = 0; m < sites / 2; ++m) {
                const double expected =
                    std::sin(pi * (2 * m + 1) / (2.0 * sites)) / std::cos(pi / (2.0 * sites));
                const std::size_t upper = at(sites / 2 + m);
                const std::size_t lower = at(sites / 2 - 1 - m);
                const double allowed = found.bound[upper] + 4 * epsilon;
                CHECK(std::abs(found.value.real_at(upper) - expected) <= allowed);
                CHECK(std::abs(found.value.real_at(lower) + expected) <= allowed);
            }
            CHECK_NEAR(found.value.real_at(at(sites - 1)), 1.0, bound(found.bound.back()));
        }
    }
}

TEST_CASE("odd rings: a jump at h = 0, and the last one depends on the sign of J") {
    for (const int sites : {3, 5, 9, 11}) {
        const Reference anti = fermion(xx_problem(ring(sites), 1.0), QuantityId::jump_fields);
        const Reference ferro = fermion(xx_problem(ring(sites), -1.0), QuantityId::jump_fields);
        for (const Reference& found : {anti, ferro}) {
            double nearest = 1.0;
            for (const Complex& field : found.value.data) {
                nearest = std::min(nearest, std::abs(field));
            }
            CHECK_NEAR(nearest, 0.0, bound(found.bound[0]));
        }
        const auto last = [](const Reference& r) { return r.value.real_at(r.bound.size() - 1); };
        // One down spin of momentum k costs h - |J| cos k and k = pi does not exist: elementary.
        CHECK_NEAR(last(anti), std::cos(pi / sites), bound(anti.bound.back() + epsilon));
        CHECK_NEAR(last(ferro), 1.0, bound(ferro.bound.back()));
    }
    const Reference nine = fermion(xx_problem(ring(9), 1.0), QuantityId::jump_fields);
    CHECK_NEAR(nine.value.real_at(nine.bound.size() - 1), 0.93969262, published(8));
}

}  // namespace
}  // namespace chainmark::test
