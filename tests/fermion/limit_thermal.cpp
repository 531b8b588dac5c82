#include "fermion/limit_support.hpp"

// Infinite chains at T > 0, against sums over momenta, thermodynamic relations and limits.

namespace chainmark::test {
namespace {

constexpr QuantityId free_id = QuantityId::free_energy_per_site;
constexpr QuantityId energy_id = QuantityId::energy_per_site;
constexpr QuantityId entropy_id = QuantityId::entropy_per_site;
constexpr QuantityId heat_id = QuantityId::specific_heat_per_site;
constexpr QuantityId m_id = QuantityId::magnetization;
constexpr QuantityId chi_id = QuantityId::susceptibility;

struct Row {
    const char* family;
    std::vector<double> values;
    double field;
};

const std::vector<Row> rows = {{"xx", {1.0}, 0.3},
                               {"xx", {-1.0}, 1.0},
                               {"xy", {1.0, 0.4}, 0.6},
                               {"tfim", {2.0}, -1.0},
                               {"tfim", {2.0}, 0.4},
                               {"dimer_xx", {1.0, 0.3}, 0.3},
                               {"dimer_xx", {1.0, 0.3}, 0.65},
                               {"xx", {0.0}, 0.7}};

double at(const Row& row, QuantityId id, double temperature, double shift = 0.0) {
    return value(
        limit(infinite_family(row.family, row.values, row.field + shift, temperature), id));
}

TEST_CASE("f, e, s, c of the XY chain against sums over momenta") {
    for (const double temperature : {0.05, 0.4, 3.0}) {
        for (const double h : {0.3, 1.0, 1.6}) {
            const XyBand band{1.0L, 0.5L, h};
            const Wide t = temperature;
            const auto mean = [&](auto&& f) {
                return turn_mean(8192, [&](Wide k) { return f(band.energy(k) / (2 * t)); });
            };
            const Problem problem = infinite_family("xy", {1.0, 0.5}, h, temperature);
            const auto check = [&](QuantityId id, Wide expected) {
                const Reference found = limit(problem, id);
                const double error = static_cast<double>(std::abs(value(found) - expected));
                CHECK(error <= found.bound[0] + 2e-18);
                CHECK(found.bound[0] < 1e-14);
            };
            check(free_id, -t * mean([](Wide x) { return x + std::log1p(std::exp(-2 * x)); }));
            check(energy_id, -t * mean([](Wide x) { return x * std::tanh(x); }));
            check(heat_id, mean([](Wide x) { return x / std::cosh(x) * (x / std::cosh(x)); }));
        }
    }
}

TEST_CASE("thermodynamic relations") {
    for (const Row& row : rows) {
        for (const double temperature : {0.2, 1.0}) {
            INFO(row.family << " at h = " << row.field << ", T = " << temperature);
            const double step = 1e-3 * temperature;
            const auto slope = [&](QuantityId id) {
                const auto f = [&](double t) { return at(row, id, t); };
                return (8 * (f(temperature + step) - f(temperature - step)) -
                        (f(temperature + 2 * step) - f(temperature - 2 * step))) /
                       (12 * step);
            };
            const auto field_slope = [&](QuantityId id) {
                const auto f = [&](double h) { return at(row, id, temperature, h); };
                return (8 * (f(step) - f(-step)) - (f(2 * step) - f(-2 * step))) / (12 * step);
            };
            const Allowed difference{3e-11, "fourth-order difference, and rounding over the step"};
            CHECK_NEAR(
                at(row, free_id, temperature),
                at(row, energy_id, temperature) - temperature * at(row, entropy_id, temperature),
                rounding(2.0, 4));
            CHECK_NEAR(at(row, entropy_id, temperature), -slope(free_id), difference);
            CHECK_NEAR(at(row, heat_id, temperature), slope(energy_id), difference);
            CHECK_NEAR(at(row, m_id, temperature), -field_slope(free_id), difference);
            CHECK_NEAR(at(row, chi_id, temperature), field_slope(m_id), difference);
        }
    }
}

TEST_CASE("low temperatures come to the ground state, high ones to free spins") {
    for (const Row& row : rows) {
        INFO(row.family << " at h = " << row.field);
        const Problem ground = infinite_family(row.family, row.values, row.field);
        const double e0 = value(limit(ground, QuantityId::ground_energy_per_site));
        const double m0 = value(limit(ground, m_id));
        CHECK_NEAR(at(row, free_id, 1e-6), e0, allow(1e-9, "T^(3/2) at a quadratic edge"));
        CHECK_NEAR(at(row, energy_id, 1e-6), e0, allow(1e-9, "T^(3/2) at a quadratic edge"));
        CHECK_NEAR(at(row, m_id, 1e-6), m0, allow(1e-3, "T^(1/2) at a quadratic edge"));
        CHECK_NEAR(at(row, entropy_id, 1e6), std::log(2.0), allow(1e-11, "1/T^2"));
        CHECK_NEAR(1e6 * at(row, chi_id, 1e6), 0.25, allow(1e-6, "1/T"));
    }
}

TEST_CASE(
    "specific heat of a gapless chain: c -> pi T/(3 v) [Affleck; Bloete, Cardy, Nightingale "
    "1986]") {
    // central charge 1 with v = sqrt(J^2 - h^2) (XX); 1/2 with v = J/2 (Ising, h = J/2)
    for (const double h : {0.0, 0.6}) {
        const double v = std::sqrt(1 - h * h);
        CHECK_NEAR(at({"xx", {1.0}, h}, heat_id, 1e-5) / 1e-5, pi / (3 * v), allow(1e-8, "T^2"));
        CHECK_NEAR(at({"xx", {1.0}, h}, entropy_id, 1e-9) / 1e-9, pi / (3 * v), allow(1e-8, "T^2"));
    }
    CHECK_NEAR(at({"tfim", {2.0}, 1.0}, heat_id, 1e-5) / 1e-5, pi / 6, allow(1e-8, "T^2"));
}

TEST_CASE("temperatures that the momenta cannot resolve get no answer") {
    const Problem cold = infinite_family("xx", {1.0}, 0.3, 1e-13);
    CHECK(std::holds_alternative<Undecided>(ask(limit_route(), cold, heat_id)));
    CHECK(std::isfinite(at({"xx", {1.0}, 0.3}, heat_id, 3e-12)));
    CHECK(std::isfinite(at({"tfim", {1.0}, 0.3}, heat_id, 1e90)));
}

TEST_CASE("zz at a temperature: the susceptibility is the sum of connected correlations over T") {
    // chi T = sum_r <Sz_0 Sz_r>_c where Sz is conserved
    for (const Row& row : {Row{"xx", {1.0}, 0.3}, Row{"dimer_xx", {1.0, 0.3}, 0.65}}) {
        Options options;
        options.connected = true;
        for (int r = 0; r <= 60; ++r) {
            options.distance.push_back(r);
        }
        const double temperature = 0.8;
        const Reference zz = limit(infinite_family(row.family, row.values, row.field, temperature),
                                   QuantityId::spin_correlation,
                                   options);
        double sum = zz.value.real_at(0);
        for (std::size_t r = 1; r < zz.value.data.size(); ++r) {
            sum += 2 * zz.value.real_at(r);
        }
        CHECK_NEAR(
            sum / temperature, at(row, chi_id, temperature), allow(1e-13, "rest of the sum"));
    }
}

}  // namespace
}  // namespace chainmark::test
