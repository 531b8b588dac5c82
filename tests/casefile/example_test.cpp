#include <fmt/format.h>

#include "casefile/case_text.hpp"
#include "chainmark/base/numerics.hpp"

using namespace chainmark;
using namespace chainmark::test;

namespace {

const std::string full_case = R"(format = 1
title  = "Magnetization of an XX ring through saturation"
[system]
sites       = [8, 11, 12]
boundary    = "periodic"
spin        = "1/2"
[parameters]
Jxy  = [0.5, 1.0]
seed = { from = 1, to = 20, step = 1 }
[hamiltonian]
family = "xx"
J = 1.0
h = { from = 0.0, to = 1.2, count = 25 }
[[hamiltonian.term]]
operators = ["S+", "S-"]
offsets   = [0, 2]
coupling  = { parameter = "Jxy", factor = 0.5 }
add_conjugate = true
[[hamiltonian.term]]
operators = ["Sz"]
offsets   = [0]
coupling  = { uniform = [-1, 1], seed = "seed" }
[grid]
combine = "product"
[[quantity]]
name  = "ground_energy"
[[quantity]]
name  = "spin_correlation"
label = "czz"
axes  = "zz"
distance  = [1, 2, 3]
tolerance = { absolute = 1e-9 }
[[quantity]]
name = "levels"
count = 4
[tolerance]
absolute = 1e-8
relative = 1e-7
[routes]
use = ["sector", "fermion", "limit"]
)";

std::vector<std::string> axis_names(const Case& c) {
    std::vector<std::string> names;
    for (const GridAxis& axis : c.axes) {
        names.push_back(axis.name);
    }
    return names;
}

using Names = std::vector<std::string>;

}  // namespace

TEST_CASE("a full case: chain and grid") {
    const Case c = case_of(full_case);
    CHECK(c.source == "c.toml");
    CHECK(c.name == "c");
    CHECK(c.title == "Magnetization of an XX ring through saturation");
    CHECK(c.boundary == BoundaryKind::ring);
    CHECK(c.twist == 0.0);
    CHECK(c.coincident == Coincident::refuse);
    REQUIRE(c.family != nullptr);
    CHECK(c.family->name == "xx");
    CHECK(axis_names(c) == Names{"sites", "Jxy", "seed", "J", "h"});
    CHECK(c.axis("sites").values == std::vector<double>{8, 11, 12});
    CHECK(c.axis("seed").values.size() == 20);
    CHECK(c.axis("seed").values.back() == 20.0);
    CHECK(c.axis("h").values.size() == 25);
    CHECK(c.axis("h").values[3] == 0.15);
    CHECK(c.axis("h").values.back() == 1.2);
    CHECK(to_string(c.axis("h").where) == "c.toml:13:5");
    CHECK(to_string(c.system_place) == "c.toml:3:2");
    CHECK_FALSE(c.zip);
    CHECK(c.routes == std::vector<RouteId>{RouteId::sector, RouteId::fermion, RouteId::limit});
}

TEST_CASE("a full case: terms") {
    const Case c = case_of(full_case);
    REQUIRE(c.terms.size() == 2);
    CHECK(c.terms[0].factors.size() == 2);
    CHECK(c.terms[0].factors[0].entries == SiteMatrix::raising().entries);
    CHECK(c.terms[0].factors[1].entries == SiteMatrix::lowering().entries);
    CHECK(c.terms[0].offsets == std::vector<int>{0, 2});
    CHECK(c.terms[0].add_conjugate);
    CHECK_FALSE(c.terms[0].fixed);
    CHECK(to_string(c.terms[0].where) == "c.toml:14:1");
    const auto& scaled = std::get<ParameterCoupling>(c.terms[0].coupling);
    CHECK(scaled.parameter == "Jxy");
    CHECK(scaled.factor == 0.5);
    const auto& random = std::get<RandomCoupling>(c.terms[1].coupling);
    CHECK(random.low == -1.0);
    CHECK(random.high == 1.0);
    CHECK(std::get<std::string>(random.seed) == "seed");
}

TEST_CASE("a full case: quantities and tolerances") {
    const Case c = case_of(full_case);
    REQUIRE(c.quantities.size() == 3);
    CHECK(c.quantities[0].query.label == "ground_energy");
    CHECK_FALSE(c.quantities[0].tolerance.has_value());
    CHECK(to_string(c.quantities[0].where) == "c.toml:25:1");
    const CaseQuantity& correlation = c.quantities[1];
    CHECK(correlation.query.spec->id == QuantityId::spin_correlation);
    CHECK(correlation.query.label == "czz");
    CHECK(correlation.query.options.distance == std::vector<int>{1, 2, 3});
    CHECK(correlation.tolerance == Tolerance{1e-9, 1e-7});
    CHECK(c.quantities[2].query.options.count == 4);
    CHECK(c.tolerance == Tolerance{1e-8, 1e-7});
}

TEST_CASE("defaults of a short case") {
    const Case c = case_of(small_case);
    CHECK(c.title == "c");
    CHECK(c.boundary == BoundaryKind::ring);
    CHECK(c.tolerance == Tolerance{});
    CHECK(c.routes.empty());
    CHECK(axis_names(c) == Names{"sites", "J", "h"});
    CHECK(c.axis("h").values == std::vector<double>{0.0});
}

TEST_CASE("the axes stand in written order, not in that of the alphabet") {
    const Case c = case_of(R"(format = 1
[hamiltonian]
h = [0.1, 0.2]
J = [1.0, 2.0]
family = "xx"
[[hamiltonian.term]]
operators = ["Sx"]
offsets = [0]
coupling = { parameter = "b" }
[[hamiltonian.term]]
operators = ["Sx"]
offsets = [0]
coupling = { parameter = "a" }
[[quantity]]
name = "gap"
[system]
sites = [8, 9]
[parameters]
b = [1, 2]
a = 3
)");
    CHECK(axis_names(c) == Names{"h", "J", "sites", "b", "a"});
}

TEST_CASE("the effective case reads back to the same case") {
    const Case c = case_of(full_case);
    const Case again = case_of(c.effective);
    CHECK(axis_names(again) == axis_names(c));
    for (std::size_t i = 0; i < c.axes.size(); ++i) {
        CHECK(again.axes[i].values == c.axes[i].values);
    }
    CHECK(again.effective == c.effective);
    CHECK(again.title == c.title);
    CHECK(again.terms.size() == c.terms.size());
    CHECK(again.quantities[1].tolerance == c.quantities[1].tolerance);
}

TEST_CASE("the effective case keeps odd titles and new axes in their order") {
    const Case c = case_of(small_case, {{"h", "[0.5, 1e-20, -3]"}, {"title", R"('a"b\c')"}});
    const Case again = case_of(c.effective);
    CHECK(again.title == "a\"b\\c");
    CHECK(axis_names(again) == Names{"sites", "J", "h"});
    CHECK(again.axis("h").values == std::vector<double>{0.5, 1e-20, -3});
}

TEST_CASE("all errors of a file at once, from top to bottom") {
    const Errors errors = errors_of(R"(format = 1
[sistem]
sites = 3
[hamiltonian]
family = "xxy"
[[quantity]]
nmae = "gap"
[[quantity]]
name = "gpa"
[routes]
use = ["sectr"]
[tolerance]
absolute = -1
)");
    INFO(listing(errors));
    std::vector<std::string> places;
    for (const Error& error : errors) {
        places.push_back(error_id(error.code) + " " + to_string(error.where));
    }
    CHECK(places == Names{"missing_key c.toml",
                          "unknown_key c.toml:2:2",
                          "unknown_name c.toml:5:10",
                          "missing_key c.toml:6:1",
                          "unknown_name c.toml:9:8",
                          "unknown_name c.toml:11:8",
                          "bad_value c.toml:13:12"});
}

TEST_CASE("a flood of errors is cut off and says so") {
    std::string text;
    for (int i = 0; i < 3000; ++i) {
        text += fmt::format("k{} = 1\n", i);
    }
    const Errors errors = errors_of(text + small_case);
    REQUIRE(errors.size() == 1001);
    CHECK(errors.back().found == "there are 3000 errors");
}
