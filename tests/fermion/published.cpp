#include "fermion/support.hpp"

// Published closed forms, each recomputed here from the formula before the digits are compared.
//   [LSM] E. Lieb, T. Schultz, D. Mattis, Ann. Phys. (NY) 16, 407 (1961).
//   [K]   S. Katsura, Phys. Rev. 127, 1508 (1962).
//   [BCN] H. W. J. Bloete, J. L. Cardy, M. P. Nightingale, Phys. Rev. Lett. 56, 742 (1986).
// H = J sum (Sx Sx + Sy Sy) - h sum Sz throughout, J = 1 and h = 0 unless said.

namespace chainmark::test {
namespace {

using Wide = long double;
constexpr Wide wide_pi = std::numbers::pi_v<Wide>;

double energy(const Chain& chain, double coupling) {
    return value(fermion(xx_problem(chain, coupling), QuantityId::ground_energy));
}

void check_energy(const Chain& chain, double coupling, Wide formula) {
    const Reference found = fermion(long_xx_problem(chain, coupling), QuantityId::ground_energy);
    CHECK_NEAR(value(found),
               static_cast<double>(formula),
               bound(found.bound[0] + epsilon * std::abs(value(found))));
}

struct Printed {
    int sites;
    double energy;
    int decimals;
};

TEST_CASE("rings: ground-state energies [LSM, formula]") {
    const std::vector<Printed> printed = {{4, -1.414213562373095, 14},
                                          {7, -2.024458669761153, 14},
                                          {8, -2.613125929752753, 14},
                                          {10, -3.236067977499790, 14},
                                          {11, -3.371022253392850, 14},
                                          {12, -3.863703305156273, 14},
                                          {13, -4.027578225024054, 14},
                                          {14, -4.493959207434934, 14},
                                          {15, -4.678857653485160, 14},
                                          {16, -5.125830895483012, 14},
                                          {17, -5.326707364266408, 14},
                                          {18, -5.758770483143634, 14},
                                          {19, -5.972203447248176, 14},
                                          {20, -6.392453221499662, 14},
                                          {21, -6.616014906240953, 14},
                                          {22, -7.026674183332270, 14},
                                          {23, -7.258579358428785, 14},
                                          {24, -7.661297575540389, 14}};
    for (const Printed& row : printed) {
        CHECK_NEAR(energy(ring(row.sites), 1.0), row.energy, published(row.decimals));
        const Wide formula = row.sites % 2 == 0 ? -1 / std::sin(wide_pi / row.sites)
                                                : -std::cos(wide_pi / row.sites) /
                                                      (2 * std::sin(wide_pi / (2 * row.sites)));
        check_energy(ring(row.sites), 1.0, formula);
        const auto degeneracy =
            fermion(xx_problem(ring(row.sites), 1.0), QuantityId::ground_energy).degeneracy;
        CHECK(degeneracy == (row.sites % 2 == 0 ? 1 : 4));
    }
}

TEST_CASE("odd rings with J < 0: -1/(2 sin(pi/2L)) [LSM, derived]") {
    const std::vector<Printed> printed = {{5, -1.618033988749895, 14},
                                          {7, -2.246979603717467, 14},
                                          {9, -2.879385241571817, 14},
                                          {11, -3.513337091666135, 14}};
    for (const Printed& row : printed) {
        CHECK_NEAR(energy(ring(row.sites), -1.0), row.energy, published(row.decimals));
        check_energy(ring(row.sites), -1.0, -1 / (2 * std::sin(wide_pi / (2 * row.sites))));
    }
}

TEST_CASE("open chains [LSM, free ends]") {
    const std::vector<Printed> printed = {{2, -0.5, 14},
                                          {3, -0.707106781186548, 14},
                                          {4, -1.118033988749895, 14},
                                          {5, -1.366025403784439, 14},
                                          {6, -1.746979603717467, 14},
                                          {7, -2.013669746062924, 14},
                                          {8, -2.379385241571817, 14},
                                          {10, -3.013337091666135, 14},
                                          {12, -3.648114905279378, 14},
                                          {16, -4.918975723729710, 14},
                                          {20, -6.190744999827377, 14}};
    for (const Printed& row : printed) {
        CHECK_NEAR(energy(open_chain(row.sites), 1.0), row.energy, published(row.decimals));
        const Wide angle = wide_pi / (2 * (row.sites + 1));
        const Wide formula = row.sites % 2 == 0 ? 0.5L - 1 / (2 * std::sin(angle))
                                                : 0.5L - std::cos(angle) / (2 * std::sin(angle));
        check_energy(open_chain(row.sites), 1.0, formula);
    }
}

TEST_CASE("long chains keep their digits") {
    const int sites = 1'000'000;
    check_energy(ring(sites), 1.0, -1 / std::sin(wide_pi / sites));
    const int odd = sites - 1;
    check_energy(ring(odd), 1.0, -std::cos(wide_pi / odd) / (2 * std::sin(wide_pi / (2 * odd))));
    check_energy(open_chain(sites), 1.0, 0.5L - 1 / (2 * std::sin(wide_pi / (2 * (sites + 1)))));
}

struct ByParity {
    int sites;
    double even;
    double odd;
};

TEST_CASE("each parity of the up count has its own momenta [LSM, parity rule]") {
    const std::vector<ByParity> printed = {{6, -1.73205080756888, -2.00000000000000},
                                           {7, -2.02445866976115, -2.02445866976115},
                                           {8, -2.61312592975275, -2.41421356237309},
                                           {9, -2.70573706390489, -2.70573706390489},
                                           {10, -3.07768353717525, -3.23606797749979},
                                           {11, -3.37102225339285, -3.37102225339285},
                                           {12, -3.86370330515627, -3.73205080756888},
                                           {16, -5.12583089548301, -5.02733949212585},
                                           {20, -6.39245322149966, -6.31375151467504},
                                           {24, -7.66129757554039, -7.59575411272515}};
    for (const ByParity& row : printed) {
        Options options;
        options.count = 12;
        const Reference found =
            fermion(xx_problem(ring(row.sites), 1.0), QuantityId::levels, options);
        std::array<std::optional<double>, 2> lowest;
        for (std::size_t n = 0; n < found.bound.size(); ++n) {
            const double ups = found.labels[n].sz.value() + row.sites / 2.0;
            std::optional<double>& own = lowest[static_cast<std::size_t>(ups) % 2];
            own = own.value_or(found.value.real_at(n));
        }
        REQUIRE(lowest[0].has_value());
        REQUIRE(lowest[1].has_value());
        CHECK_NEAR(*lowest[0], row.even, published(13));
        CHECK_NEAR(*lowest[1], row.odd, published(13));
    }
}

/// What a program gives that fills one grid k = 2 pi (m + shift)/L for every N.
double one_grid_energy(int sites, double shift) {
    double sum = 0.0;
    for (int m = 0; m < sites; ++m) {
        sum += std::min(0.0, std::cos(2 * pi * (m + shift) / sites));
    }
    return sum;
}

TEST_CASE("one momentum grid for all N gives other numbers") {
    CHECK_NEAR(one_grid_energy(4, 0.0), -1.0, rounding(1.0, 8));
    CHECK_NEAR(energy(ring(4), 1.0), -std::sqrt(2.0), rounding(1.0, 8));
    CHECK_NEAR(one_grid_energy(6, 0.5), -std::sqrt(3.0), rounding(1.0, 8));
    CHECK_NEAR(energy(ring(6), 1.0), -2.0, rounding(1.0, 8));
}

TEST_CASE("corrections of the energy with the length [BCN, formula]") {
    // Rings: E0/L = -1/pi - pi/(6 L^2) - 7 pi^3/(360 L^4) - O(L^-6), by expansion of -1/(L
    // sin(pi/L)).
    const double sites = 200;
    const double per_site = energy(ring(200), 1.0) / sites;
    CHECK_NEAR((per_site + 1 / pi) * sites * sites, -0.523598775598299, allow(2e-5, "next order"));
    CHECK_NEAR(((per_site + 1 / pi) * sites * sites + pi / 6) * sites * sites,
               -0.602899824339217,
               allow(1e-4, "next order and cancellation"));
    // Open chains: E0 = -L/pi + (1/2 - 1/pi) - pi/(24 L) + O(L^-2).
    const double open = energy(open_chain(200), 1.0);
    CHECK_NEAR(
        (open + sites / pi - 0.181690113816) * sites, -0.1308996939, allow(1e-3, "next order"));
}

TEST_CASE("zz correlations of a ring of twelve [LSM, finite-ring form, derived]") {
    // <Sz_0 Sz_r> = -1/(L sin(pi r/L))^2 for odd r, 0 for even r > 0.
    Options options;
    for (int r = 1; r < 12; ++r) {
        options.distance.push_back(r);
    }
    const Reference found =
        fermion(xx_problem(ring(12), 1.0), QuantityId::spin_correlation, options);
    CHECK_NEAR(value(found), -0.103668077988024, published(14));
    for (int r = 1; r < 12; ++r) {
        const Wide sine = 12 * std::sin(wide_pi * r / 12);
        CHECK_NEAR(found.value.real_at(at(r - 1)),
                   r % 2 == 1 ? static_cast<double>(-1 / (sine * sine)) : 0.0,
                   bound(found.bound[at(r - 1)] + epsilon * 0.11));
    }
}

TEST_CASE("a ring of 10^6 sites beside the infinite chain") {
    // [K]: m = arcsin(h/J)/pi; the filling of a finite ring differs by at most one spin.
    const int sites = 1'000'000;
    const Reference m = fermion(long_xx_problem(ring(sites), 1.0, 0.25), QuantityId::magnetization);
    CHECK_NEAR(value(m), 0.080430623255166, allow(1.0 / sites, "one spin"));
    Options options;
    options.distance = {1, 2, 3};
    const Reference zz =
        fermion(long_xx_problem(ring(sites), 1.0), QuantityId::spin_correlation, options);
    for (const int r : {1, 3}) {  // [LSM]: -1/(pi r)^2, with corrections of order L^-2
        CHECK_NEAR(zz.value.real_at(at(r - 1)),
                   -1 / (pi * pi * r * r),
                   allow(4.0 / sites / sites + 1e-15, "finite size"));
    }
    CHECK_NEAR(zz.value.real_at(1), 0.0, bound(zz.bound[1]));
}

}  // namespace
}  // namespace chainmark::test
