#include "fermion/limit_support.hpp"

// Ground states of infinite XY, Ising and alternating XX chains, against sums over momenta written
// out here, derivatives against each other, and both sides of every border.

namespace chainmark::test {
namespace {

constexpr QuantityId energy_id = QuantityId::ground_energy_per_site;
constexpr QuantityId m_id = QuantityId::magnetization;
constexpr QuantityId chi_id = QuantityId::susceptibility;

/// |found - expected| within the reported bound, and the bound within `widest`.
void check_bound(const Reference& found, Wide expected, double widest) {
    const double error = static_cast<double>(std::abs(value(found) - expected));
    CHECK_MESSAGE(error <= found.bound[0] + 2e-18, "error ", error, ", bound ", found.bound[0]);
    CHECK_MESSAGE(found.bound[0] <= widest, "bound ", found.bound[0]);
}

void check_xy(double j, double gamma, double h, int points, double widest) {
    INFO("J = " << j << ", gamma = " << gamma << ", h = " << h);
    const Problem problem = infinite_family("xy", {j, gamma}, h);
    // The couplings as the list holds them: J (1 +- gamma) are rounded to doubles.
    const Wide jx = static_cast<Wide>(j * (1 + gamma));
    const Wide jy = static_cast<Wide>(j * (1 - gamma));
    const XyBand band{(jx + jy) / 2, (jx - jy) / (jx + jy), h};
    const auto e = [&](Wide k) { return band.energy(k); };
    const auto m = [&](Wide k) { return -band.a(k) / e(k); };
    const auto chi = [&](Wide k) { return band.b(k) * band.b(k) / (e(k) * e(k) * e(k)); };
    check_bound(limit(problem, energy_id), -turn_mean(points, e) / 2, widest);
    check_bound(limit(problem, m_id), turn_mean(points, m) / 2, widest);
    check_bound(limit(problem, chi_id), turn_mean(points, chi) / 2, widest * 10);
}

TEST_CASE("XY and Ising chains with a gap, both sides of the border and of the factorizing line") {
    for (const double j : {1.0, -1.3}) {
        for (const double gamma : {0.25, 0.8, 1.0, 1.5, -0.5}) {
            for (const double h : {0.0, 0.5, 0.8, -1.7, 4.0}) {
                check_xy(j, gamma, h, 4096, 2e-15);
            }
        }
    }
}

TEST_CASE("next to the border between ordered and disordered phases") {
    // zeros of e at |Im k| of about 1e-4/gamma: 2^20 points leave exp(-80)
    for (const double h : {1.0 - 1e-4, 1.0 + 1e-4, -1.0 - 1e-4}) {
        check_xy(1.0, 0.7, h, 1 << 20, 2e-15);
    }
}

TEST_CASE("a weak pairing: the gap lies inside the band") {
    check_xy(1.0, 1e-4, 0.3, 1 << 20, 1e-14);
}

TEST_CASE("the Ising chain of either axis") {
    for (const double h : {0.2, 0.5, 0.9, -0.5}) {
        const Problem along_x = infinite_family("tfim", {1.0}, h);
        const Problem xy = infinite_family("xy", {0.5, 1.0}, h);
        const Problem along_y = infinite_family("xy", {0.5, -1.0}, h);
        for (const QuantityId id : {energy_id, m_id, QuantityId::gap}) {
            const double x = value(limit(along_x, id));
            CHECK(value(limit(xy, id)) == x);
            CHECK(value(limit(along_y, id)) == x);
        }
    }
}

double centred_slope(const std::function<double(double)>& f, double h, double step) {
    return (8 * (f(h + step) - f(h - step)) - (f(h + 2 * step) - f(h - 2 * step))) / (12 * step);
}

TEST_CASE("m = -de0/dh and the susceptibility dm/dh") {
    struct Row {
        const char* family;
        std::vector<double> values;
        double field;
    };
    for (const Row& row : {Row{"xy", {1.0, 0.4}, 0.6},
                           Row{"xy", {-1.0, 0.4}, 1.4},
                           Row{"tfim", {2.0}, 0.7},
                           Row{"tfim", {-2.0}, -1.6},
                           Row{"dimer_xx", {1.0, 0.3}, 0.6},
                           Row{"dimer_xx", {1.0, -0.3}, -0.45},
                           Row{"dimer_xx", {-1.0, 1.4}, 1.2},
                           Row{"dimer_xx", {1.0, 0.3}, 0.1},
                           Row{"xx", {1.0}, 0.4}}) {
        INFO(row.family << " at h = " << row.field);
        const auto at = [&](QuantityId id) {
            return [&, id](double h) {
                return value(limit(infinite_family(row.family, row.values, h), id));
            };
        };
        const double step = 1e-3;
        const Allowed difference{2e-11, "fourth-order difference, and rounding over the step"};
        CHECK_NEAR(at(m_id)(row.field), -centred_slope(at(energy_id), row.field, step), difference);
        CHECK_NEAR(at(chi_id)(row.field),
                   centred_slope(at(m_id), row.field, step),
                   allow(2e-8, difference.policy));
    }
}

TEST_CASE("alternating chains: momenta counted one by one") {
    // m and e0 by filling the modes of a very long ring: errors of order 1/N^2 in e0, 1/N in m.
    const int cells = 200000;
    for (const double delta : {0.3, -0.6, 1.0, 1.7}) {
        for (const double h : {0.0, 0.2, 0.55, -0.8, 1.2, 2.0}) {
            INFO("delta = " << delta << ", h = " << h);
            const DimerBand band{1.0, delta, h};
            double energy = 0.0;
            double m = 0.0;
            for (int n = 0; n < cells; ++n) {
                const double w = static_cast<double>(band.width(2 * wide_pi * (n + 0.5L) / cells));
                for (const double e : {w - h, -w - h}) {
                    energy -= std::abs(e) / 2;
                    m -= e > 0 ? 0.5 : -0.5;
                }
            }
            const Problem problem = infinite_family("dimer_xx", {1.0, delta}, h);
            CHECK_NEAR(value(limit(problem, energy_id)), energy / (2 * cells), allow(1e-9, "sum"));
            CHECK_NEAR(value(limit(problem, m_id)), m / (2 * cells), allow(2e-5, "sum"));
        }
    }
}

TEST_CASE("an alternating chain without alternation is the XX chain") {
    for (const double h : {0.0, 0.3, -0.9, 1.0, 1.4}) {
        const Problem plain = infinite_family("xx", {1.2}, h);
        const Problem same = infinite_family("dimer_xx", {1.2, 0.0}, h);
        const Problem nearly = infinite_family("dimer_xx", {1.2, 1e-12}, h);
        for (const QuantityId id : {energy_id, m_id}) {
            CHECK(limit(same, id).value.data == limit(plain, id).value.data);
            CHECK_NEAR(
                value(limit(nearly, id)), value(limit(plain, id)), allow(1e-11, "delta = 1e-12"));
        }
    }
}

std::string phase_of(const Problem& problem) {
    const Reference reference = limit(problem, QuantityId::phase);
    return reference.value.kind == Kind::text ? reference.value.text
                                              : to_string(reference.value.special_at(0));
}

double gap_of(const Problem& problem) {
    return value(limit(problem, QuantityId::gap));
}

TEST_CASE("phases and gaps of XY and Ising chains") {
    const auto xy = [](double gamma, double h) { return infinite_family("xy", {1.0, gamma}, h); };
    CHECK(phase_of(xy(0.5, 0.3)) == "ordered_x");
    CHECK(phase_of(xy(-0.5, 0.3)) == "ordered_y");
    CHECK(phase_of(xy(0.5, 1.2)) == "disordered");
    CHECK(phase_of(xy(0.1, 1.0)) == "critical");  // J (1 +- 0.1) are no doubles
    CHECK(phase_of(xy(0.7, -1.0)) == "critical");
    CHECK(phase_of(xy(0.0, 0.4)) == "critical");
    CHECK(phase_of(xy(0.0, 1.4)) == "saturated_up");
    CHECK(phase_of(infinite_family("tfim", {1.0}, 0.5)) == "critical");
    CHECK(phase_of(infinite_family("tfim", {1.0}, 0.49)) == "ordered_x");
    CHECK(phase_of(infinite_family("tfim", {-1.0}, -0.51)) == "disordered");
    CHECK(phase_of(infinite_family("tfim", {0.0}, 0.0)) == "undefined");
    // disordered: one flipped spin, |h| - |J|; ordered: a pair of domain walls
    CHECK_NEAR(gap_of(xy(0.5, 1.25)), 0.25, rounding(1.0, 8));
    CHECK_NEAR(gap_of(xy(0.5, 0.9)), 0.2, rounding(1.0, 8));
    CHECK(gap_of(xy(0.5, 1.0)) == 0.0);
    // inside: min e^2 = g^2 (1 - h^2/(1 - g^2)) at cos k = h/(1 - g^2)
    CHECK_NEAR(gap_of(xy(0.5, 0.3)), std::sqrt(1 - 0.09 / 0.75), rounding(1.0, 8));
    CHECK_NEAR(gap_of(infinite_family("tfim", {1.0}, 0.0)), 1.0, rounding(1.0, 4));
}

TEST_CASE("phases and gaps of alternating chains, on every side") {
    const auto at = [](double h) { return infinite_family("dimer_xx", {1.0, 0.25}, h); };
    CHECK(phase_of(at(0.1)) == "dimerized");
    CHECK(phase_of(at(0.25)) == "gap_edge");
    CHECK(phase_of(at(-0.5)) == "critical");
    CHECK(phase_of(at(1.0)) == "saturation_point");
    CHECK(phase_of(at(-1.5)) == "saturated_down");
    CHECK_NEAR(gap_of(at(0.1)), 0.15, rounding(1.0, 8));
    CHECK(gap_of(at(0.25)) == 0.0);
    CHECK(gap_of(at(0.5)) == 0.0);
    CHECK_NEAR(gap_of(at(-1.5)), 0.5, rounding(1.0, 8));
    CHECK(value(limit(at(0.1), m_id)) == 0.0);
    CHECK(value(limit(at(-1.5), m_id)) == -0.5);
}

TEST_CASE("what diverges or jumps is said, not sampled") {
    const auto chi = [](const Problem& problem) {
        return limit(problem, chi_id).value.special_at(0);
    };
    CHECK(chi(infinite_family("tfim", {1.0}, 0.5)) == Special::infinite);
    CHECK(chi(infinite_family("tfim", {1.0}, -0.5)) == Special::infinite);
    CHECK(chi(infinite_family("tfim", {1.0}, 0.4999)) == Special::none);
    CHECK(chi(infinite_family("xy", {1.0, 0.1}, 1.0)) == Special::infinite);
    CHECK(chi(infinite_family("dimer_xx", {1.0, 0.25}, 0.25)) == Special::infinite);
    CHECK(chi(infinite_family("dimer_xx", {1.0, 0.25}, -1.0)) == Special::infinite);
    CHECK(value(limit(infinite_family("dimer_xx", {1.0, 0.25}, 0.1), chi_id)) == 0.0);
    CHECK(value(limit(infinite_family("dimer_xx", {1.0, 0.25}, 1.1), chi_id)) == 0.0);
    // lone dimers of coupling 2: the triplet meets the singlet at h = 1 all over the chain
    const Problem dimers = infinite_family("dimer_xx", {1.0, 1.0}, 1.0);
    CHECK(chi(dimers) == Special::jump);
    const Reference m = limit(dimers, m_id);
    CHECK(value(m) == 0.25);
    CHECK(m.range == Range{{0.0, 0.5}});
    CHECK(value(limit(infinite_family("dimer_xx", {1.0, 1.0}, 1.1), m_id)) == 0.5);
    CHECK(value(limit(infinite_family("dimer_xx", {1.0, 1.0}, 0.9), m_id)) == 0.0);
}

TEST_CASE("Fermi momenta exist where a single-particle energy vanishes") {
    const auto fermi = [](const Problem& problem) {
        return limit(problem, QuantityId::fermi_momentum);
    };
    CHECK(value(fermi(infinite_family("tfim", {1.0}, 0.5))) == 0.0);
    CHECK_NEAR(value(fermi(infinite_family("tfim", {1.0}, -0.5))), pi, rounding(pi, 2));
    CHECK_NEAR(value(fermi(infinite_family("xy", {-1.0, 0.5}, 1.0))), pi, rounding(pi, 2));
    CHECK(fermi(infinite_family("xy", {1.0, 0.5}, 0.3)).value.special_at(0) == Special::undefined);
    const Answer refused = ask(
        limit_route(), infinite_family("dimer_xx", {1.0, 0.2}, 0.5), QuantityId::fermi_momentum);
    CHECK(std::holds_alternative<NotCovered>(refused));
}

}  // namespace
}  // namespace chainmark::test
