#include "chainmark/fermion/spin_strings.hpp"

#include <algorithm>
#include <array>

#include "chainmark/base/error.hpp"

namespace chainmark::fermion {
namespace {

using Complex = std::complex<double>;

constexpr std::array<Axis, 3> all_axes = {Axis::x, Axis::y, Axis::z};

/// sum_a along_a sigma_a at a site.
struct SiteSpin {
    int site = 0;
    std::array<Complex, 3> along{};
};

SiteSpin component(Axis axis, int site) {
    SiteSpin spin{.site = site};
    spin.along[static_cast<std::size_t>(axis)] = 0.5;
    return spin;
}

SiteSpin ladder(int site, bool raising) {
    const Complex y(0.0, raising ? 0.5 : -0.5);
    return {.site = site, .along = {0.5, y, 0.0}};
}

/// sx -> cos sx + sin sy, sy -> cos sy - sin sx for every turn around the ring.
SiteSpin brought_back(SiteSpin spin, const Chain& chain) {
    const Complex phase = chain.wrap_phase();  // exp(-i twist)
    while (spin.site >= chain.length()) {
        spin.site -= chain.length();
        const auto [x, y, z] = spin.along;
        spin.along = {phase.real() * x + phase.imag() * y, phase.real() * y - phase.imag() * x, z};
    }
    return spin;
}

/// sigma_a sigma_b = delta_ab + i epsilon_abc sigma_c at one site.
void add_product_at_site(std::vector<PauliTerm>& terms, const SiteSpin& a, const SiteSpin& b) {
    Complex identity;
    std::array<Complex, 3> cross{};
    for (std::size_t k = 0; k < 3; ++k) {
        identity += a.along[k] * b.along[k];
        const std::size_t l = (k + 1) % 3;
        const std::size_t m = (k + 2) % 3;
        cross[m] = Complex(0, 1) * (a.along[k] * b.along[l] - a.along[l] * b.along[k]);
    }
    if (identity != 0.0) {
        terms.push_back({identity, {}});
    }
    for (std::size_t k = 0; k < 3; ++k) {
        if (cross[k] != 0.0) {
            terms.push_back({cross[k], {{a.site, all_axes[k]}}});
        }
    }
}

void add_product(std::vector<PauliTerm>& terms, const SiteSpin& a, const SiteSpin& b) {
    if (a.site == b.site) {
        add_product_at_site(terms, a, b);
        return;
    }
    const SiteSpin& first = a.site < b.site ? a : b;
    const SiteSpin& second = a.site < b.site ? b : a;
    for (std::size_t k = 0; k < 3; ++k) {
        for (std::size_t l = 0; l < 3; ++l) {
            const Complex weight = first.along[k] * second.along[l];
            if (weight != 0.0) {
                terms.push_back({weight, {{first.site, all_axes[k]}, {second.site, all_axes[l]}}});
            }
        }
    }
}

std::vector<Axis> axes_of(Axes axes) {
    switch (axes) {
        case Axes::xx:
            return {Axis::x};
        case Axes::yy:
            return {Axis::y};
        case Axes::zz:
            return {Axis::z};
        default:
            return {Axis::x, Axis::y, Axis::z};
    }
}

}  // namespace

std::vector<PauliTerm> pair_terms(Axes axes, const Chain& chain, int i, int j) {
    std::vector<PauliTerm> terms;
    if (axes == Axes::plus_minus) {
        add_product(terms, ladder(i, true), brought_back(ladder(j, false), chain));
        return terms;
    }
    for (const Axis axis : axes_of(axes)) {
        add_product(terms, component(axis, i), brought_back(component(axis, j), chain));
    }
    return terms;
}

double pair_norm(Axes axes) {
    switch (axes) {
        case Axes::plus_minus:
            return 1.0;
        case Axes::dot:
            return 0.75;
        default:
            return 0.25;
    }
}

PauliTerm order_string(Axis axis, const Chain& chain, int i, int j) {
    CHAINMARK_EXPECTS(i <= j && j < i + chain.length());
    PauliTerm term{0.25, {}};
    if (i == j) {
        return term;
    }
    for (int k = i; k <= j; ++k) {
        const bool wrapped = k >= chain.length();
        term.string.push_back({wrapped ? k - chain.length() : k, axis});
        if (wrapped && axis != Axis::z) {
            CHAINMARK_EXPECTS(chain.wrap_phase().imag() == 0.0);
            term.coefficient *= chain.wrap_phase().real();
        }
    }
    std::sort(term.string.begin(), term.string.end(), [](const auto& a, const auto& b) {
        return a.site < b.site;
    });
    return term;
}

}  // namespace chainmark::fermion
