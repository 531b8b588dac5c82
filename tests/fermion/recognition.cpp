#include "chainmark/fermion/form.hpp"
#include "fermion/support.hpp"

namespace chainmark::test {
namespace {

Problem family_problem(const char* name, std::vector<double> values, const Chain& chain) {
    const Family* family = find_family(name);
    REQUIRE(family != nullptr);
    const auto terms = family->terms(values, chain);
    return {.chain = chain,
            .terms = std::make_shared<TermList>(
                build_terms(chain, terms, Coincident::refuse, family->cell).value()),
            .field = 0.0};
}

std::string refusal(const Problem& problem,
                    QuantityId id = QuantityId::ground_energy,
                    const Options& options = {}) {
    const Batch batch{.problems = {problem}, .queries = {query(id, options)}};
    const Coverage coverage = fermion_route().plan(batch);
    const Answer answer = fermion_route().evaluate(batch, Context{}).front().front();
    CHECK(std::holds_alternative<NotCovered>(answer) == !coverage.refusal.front().empty());
    return coverage.refusal.front();
}

Problem collected(const TermCollector& collector, const Chain& chain) {
    return {.chain = chain,
            .terms = std::make_shared<TermList>(collector.finish().value()),
            .field = 0.0};
}

bool mentions(const std::string& text, const char* part) {
    return text.find(part) != std::string::npos;
}

TEST_CASE("which routes apply is found from the terms, not from the family") {
    CHECK(refusal(family_problem("xx", {1.0}, ring(6))).empty());
    CHECK(refusal(family_problem("xxz", {1.0, 0.0}, ring(6))).empty());
    CHECK(refusal(family_problem("dimer_xx", {1.0, 0.3}, ring(7))).empty());
    CHECK(refusal(family_problem("xy", {1.0, 0.3}, open_chain(6))).empty());
    CHECK(refusal(family_problem("tfim", {1.0}, ring(6))).empty());
    CHECK(refusal(family_problem("heisenberg", {1.0}, open_chain(2))).empty());
}

TEST_CASE("a refusal names the first offending string and the reason") {
    const std::string heisenberg = refusal(family_problem("heisenberg", {1.0}, ring(6)));
    CHECK(mentions(heisenberg, "Sz_0 Sz_1"));
    CHECK(mentions(heisenberg, "interaction"));
    Model far = xx_model(open_chain(4), 1.0);
    TermCollector collector(far.chain);
    const std::vector<PlacedMatrix> hop = {{0, SiteMatrix::raising()}, {2, SiteMatrix::lowering()}};
    collector.add(1.0, hop);
    collector.add_conjugate(1.0, hop);
    CHECK(mentions(refusal(collected(collector, far.chain)), "S+_0 S-_2 joins sites 0 and 2"));
    TermCollector along_x(far.chain);
    along_x.add(1.0, {{1, SiteMatrix::sz()}});
    along_x.add(1.0, {{2, SiteMatrix::sx()}});
    CHECK(mentions(refusal(collected(along_x, far.chain)), "S+_2 changes the parity"));
    TermCollector four(far.chain);
    four.add(1.0,
             {{0, SiteMatrix::sx()},
              {1, SiteMatrix::sx()},
              {2, SiteMatrix::sx()},
              {3, SiteMatrix::sx()}});
    CHECK(mentions(refusal(collected(four, far.chain)), "S+_0 S+_1 S+_2 S+_3 is an interaction"));
}

TEST_CASE("strings of Sz that miss no site, one site, or go round the outside are quadratic") {
    const Chain chain = open_chain(3);
    TermCollector collector(chain);
    collector.add(1.0, {{0, SiteMatrix::sz()}, {2, SiteMatrix::sz()}});
    collector.add(1.0, {{0, SiteMatrix::sz()}, {1, SiteMatrix::sz()}, {2, SiteMatrix::sz()}});
    collector.add(1.0, {{0, SiteMatrix::sx()}, {1, SiteMatrix::sx()}, {2, SiteMatrix::sz()}});
    const fermion::QuadraticForm form =
        fermion::recognise(chain, collector.finish().value()).value();
    // Sz_0 Sz_2 = -P (n_1 - 1/2)/2, Sz_0 Sz_1 Sz_2 = -P/8.
    CHECK(form.onsite_times_parity == std::vector<fermion::Real>{0.0L, -0.5L, 0.0L});
    CHECK(form.constant_times_parity == -0.125L);
    REQUIRE(form.bonds.size() == 1);
    CHECK(form.bonds.front().first == 1);
    CHECK(form.bonds.front().range == 2);
}

TEST_CASE("an end-to-end bond closes a ring, and an open chain, too") {
    for (const BoundaryKind boundary : {BoundaryKind::ring, BoundaryKind::open}) {
        const Chain chain{.sites = 5, .boundary = boundary, .twist = 0.0};
        TermCollector collector(chain);
        const std::vector<PlacedMatrix> hop = {{0, SiteMatrix::raising()},
                                               {4, SiteMatrix::lowering()}};
        collector.add(1.0, hop);
        collector.add_conjugate(1.0, hop);
        const Problem problem{.chain = chain,
                              .terms = std::make_shared<TermList>(collector.finish().value()),
                              .field = 0.0};
        CHECK(refusal(problem).empty());
    }
}

TEST_CASE("infinite chains, sizes and options that do not fit") {
    Problem infinite = xx_problem(ring(6), 1.0);
    infinite.chain.sites.reset();
    CHECK(mentions(refusal(infinite), "needs a finite chain"));
    CHECK(mentions(refusal(xx_problem(ring(21), 1.0), QuantityId::spectrum), "20 sites"));
    const Problem six = xx_problem(ring(6), 1.0);
    Options many;
    many.count = 65;
    CHECK(mentions(refusal(six, QuantityId::levels, many), "only 64"));
    Options far;
    far.distance = {6};
    CHECK(mentions(refusal(six, QuantityId::spin_correlation, far), "0 ... 5"));
    Options pair;
    pair.pairs = {{0, -1}};
    CHECK(mentions(refusal(six, QuantityId::spin_correlation, pair), "[0, -1]"));
    CHECK(mentions(refusal(six, QuantityId::phase), "infinite chain alone"));
    const Chain long_chain = open_chain(2001);
    CHECK(mentions(refusal(family_problem("dimer_xx", {1.0, 0.3}, long_chain)), "2000 sites"));
    CHECK(refusal(family_problem("xx", {1.0}, long_chain)).empty());
}

TEST_CASE("the form: hops, wrap bond, kind") {
    using fermion::FormKind;
    const auto form_of = [](const Problem& problem) {
        return fermion::recognise(problem.chain, *problem.terms).value();
    };
    CHECK(form_of(xx_problem(ring(6), 1.0)).kind == FormKind::uniform_ring);
    CHECK(form_of(xx_problem(ring(6, 0.4), 1.0)).kind == FormKind::uniform_ring);
    CHECK(form_of(xx_problem(ring(6, pi), 1.0)).bonds.back().hop == Complex(-0.5));
    CHECK(form_of(xx_problem(open_chain(6), 1.0)).kind == FormKind::uniform_open);
    Model broken = xx_model(ring(6), 1.0);
    broken.hop.back() = 0.0;  // a ring without its wrap bond is an open chain
    CHECK(form_of(problem_of(broken)).kind == FormKind::uniform_open);
    broken.hop.back() = 0.3;
    CHECK(form_of(problem_of(broken)).kind == FormKind::general);
    CHECK(form_of(problem_of(broken)).parity_matters());
    CHECK_FALSE(form_of(xx_problem(open_chain(6), 1.0)).parity_matters());
}

TEST_CASE("a stop request ends the work") {
    std::stop_source source;
    source.request_stop();
    Context context;
    context.stop = source.get_token();
    const Batch batch{.problems = {xx_problem(ring(18), 1.0)},
                      .queries = {query(QuantityId::spectrum)}};
    CHECK_THROWS_AS(fermion_route().evaluate(batch, context), Interrupted);
}

TEST_CASE("the estimate grows with the work") {
    const auto plan = [](const Problem& problem, QuantityId id) {
        return fermion_route().plan({.problems = {problem}, .queries = {query(id)}});
    };
    const Coverage small = plan(xx_problem(ring(10), 1.0), QuantityId::ground_energy);
    const Coverage spectrum = plan(xx_problem(ring(20), 1.0), QuantityId::spectrum);
    CHECK(small.seconds > 0.0);
    CHECK(spectrum.seconds > 100 * small.seconds);
    CHECK(spectrum.bytes > 1e6 * 8);
}

}  // namespace
}  // namespace chainmark::test
