#include <algorithm>
#include <set>

#include <doctest/doctest.h>

#include "chainmark/reference/quantity.hpp"

using namespace chainmark;

namespace {

bool takes(const QuantitySpec& spec, OptionId option) {
    return std::find(spec.options.begin(), spec.options.end(), option) != spec.options.end();
}

}  // namespace

TEST_CASE("names and ids of quantities are unique and lead to each other") {
    std::set<std::string> names;
    std::set<QuantityId> ids;
    for (const QuantitySpec& spec : quantities()) {
        CHECK(names.insert(spec.name).second);
        CHECK(ids.insert(spec.id).second);
        CHECK(find_quantity(spec.name) == &spec);
        CHECK(&spec_of(spec.id) == &spec);
        CHECK_FALSE(spec.sentence.empty());
    }
    CHECK(find_quantity("energ") == nullptr);
}

TEST_CASE("totals have a twin per site, which exists on the infinite chain") {
    for (const char* total :
         {"ground_energy", "energy", "free_energy", "entropy", "specific_heat"}) {
        const QuantitySpec* spec = find_quantity(total);
        const QuantitySpec* twin = find_quantity(std::string(total) + "_per_site");
        REQUIRE(spec != nullptr);
        REQUIRE(twin != nullptr);
        CHECK(spec->where == Where::finite);
        CHECK(spec->on_infinite == twin->name);
        CHECK(twin->where == Where::both);
        CHECK(spec->when == twin->when);
    }
}

TEST_CASE("what exists at a temperature") {
    std::set<std::string> thermal;
    std::set<std::string> either;
    for (const QuantitySpec& spec : quantities()) {
        if (spec.when == When::thermal) {
            thermal.insert(spec.name);
        } else if (spec.when == When::either) {
            either.insert(spec.name);
        }
    }
    CHECK(either == std::set<std::string>{"magnetization", "susceptibility", "spin_correlation"});
    CHECK(thermal.size() == 8);
    CHECK(thermal.count("free_energy_per_site") == 1);
}

TEST_CASE("options that go together") {
    for (const QuantitySpec& spec : quantities()) {
        CHECK(takes(spec, OptionId::distance) == takes(spec, OptionId::pairs));
        CHECK(takes(spec, OptionId::block) == takes(spec, OptionId::order));
        CHECK(takes(spec, OptionId::block) == takes(spec, OptionId::log));
        CHECK_FALSE((takes(spec, OptionId::axis) && takes(spec, OptionId::axes)));
        CHECK_FALSE((takes(spec, OptionId::sector) && spec.when != When::ground_state));
    }
}

TEST_CASE("words of the case format") {
    CHECK(to_string(Axes::plus_minus) == "+-");
    CHECK(to_string(Axes::dot) == "dot");
    CHECK(to_string(OptionId::log) == "log");
    CHECK(to_string(OptionId::sector) == "sector");
    CHECK(to_string(When::either) == "either");
}

TEST_CASE("labels and options compare by value") {
    CHECK(Labels{.sz = 1.0} != Labels{});
    CHECK(Labels{.inversion = 1} != Labels{.reflection = 1});
    Options options;
    CHECK(options == Options{});
    options.sector = Labels{};
    CHECK(options != Options{});
}
