#include <random>

#include "chainmark/fermion/enclosures.hpp"
#include "published/by_routes.hpp"

// Certified digits of uniform rings beside the routes by matrices, which know nothing of fermions.

using namespace chainmark;
using namespace chainmark::test;

namespace {

std::optional<Reference> certified(const Problem& problem,
                                   QuantityId id,
                                   const Options& options = {}) {
    Context context;
    context.digits = 30;
    return fermion::enclose(problem, query(id, options), context);
}

/// The distance of each element from the enclosure is within the matrices' bound.
int check_beside(const Problem& problem, QuantityId id, const Options& options = {}) {
    const auto found = certified(problem, id, options);
    if (!found) {
        return 0;
    }
    const Reference expected = ask(sector_route(), problem, id, options);
    REQUIRE(found->enclosure.size() == expected.value.data.size());
    for (std::size_t i = 0; i < found->enclosure.size(); ++i) {
        INFO(spec_of(id).name << ", " << to_string(problem.chain) << ", h = " << problem.field
                              << ", element " << i);
        CHECK_NEAR(std::stod(found->enclosure[i].mid),
                   expected.value.real_at(i),
                   bound(expected.bound[i] + 1e-16));
        CHECK(std::stod(found->enclosure[i].radius) < 1e-29);
        const long double mid = std::stold(found->enclosure[i].mid);
        CHECK_NEAR(static_cast<double>(found->value.real_at(i) - mid),
                   0.0,
                   bound(found->bound[i] + 1e-18));  // mid read as a long double
    }
    return 1;
}

}  // namespace

TEST_CASE("certified digits agree with the matrices: random XX, XY and Ising chains [exact]") {
    if (!fermion::can_enclose()) {
        return;
    }
    std::mt19937_64 generator(23);
    int compared = 0;
    for (int sample = 0; sample < 60; ++sample) {
        const int sites = 3 + sample % 7;
        const double j = draw(generator);
        const double h = sample % 4 == 0 ? 0.0 : draw(generator);
        const double gamma = 2 * draw(generator);
        const Chain chain = ring(sites, sample % 2 == 0 ? 0.0 : pi);
        const Problem problem = sample % 5 == 0   ? family_problem("xx", {j}, open_chain(sites), h)
                                : sample % 5 == 1 ? family_problem("xx", {j}, chain, h)
                                : sample % 5 == 2 ? family_problem("tfim", {j}, chain, h / 2)
                                                  : family_problem("xy", {j, gamma}, chain, h);
        Options options;
        options.distance = {1, 2};
        options.pairs = {{0, 1}, {sites - 1, 0}, {2, 2}};
        options.connected = sample % 3 == 0;
        compared += check_beside(problem, QuantityId::ground_energy);
        compared += check_beside(problem, QuantityId::gap);
        compared += check_beside(problem, QuantityId::magnetization);
        compared += check_beside(problem, QuantityId::spin_correlation, options);
    }
    CHECK(compared > 150);
}
