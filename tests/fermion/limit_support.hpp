#pragma once

#include <functional>
#include <vector>

#include "fermion/support.hpp"

/// Infinite chains for tests, and integrals over momenta by the plainest rule there is.
namespace chainmark::test {

using Wide = long double;
inline constexpr Wide wide_pi = std::numbers::pi_v<Wide>;

/// A family on the infinite chain, beside finite chains like `beside`.
inline Problem infinite_family(const char* name,
                               const std::vector<double>& values,
                               double field,
                               std::optional<double> temperature = {},
                               const Chain& beside = ring(8)) {
    Chain chain = beside;
    chain.sites.reset();
    const Family* family = find_family(name);
    return {.chain = chain,
            .terms = std::make_shared<TermList>(
                build_terms(chain, family->terms(values, chain), Coincident::refuse, family->cell)
                    .value()),
            .field = field,
            .temperature = temperature};
}

inline Reference limit(const Problem& problem, QuantityId id, const Options& options = {}) {
    return get(limit_route(), problem, id, options);
}

/// (1/pi) int_0^pi f(k) dk by equal steps over a whole turn. For a function that is periodic and
/// analytic within `width` of the real axis the error is of the order exp(-points width).
inline Wide turn_mean(int points, const std::function<Wide(Wide)>& f) {
    Wide sum = 0.0L;
    Wide lost = 0.0L;
    for (int i = 0; i < points; ++i) {
        const Wide x = f(2 * wide_pi * (i + 0.5L) / points) - lost;  // Kahan
        const Wide next = sum + x;
        lost = (next - sum) - x;
        sum = next;
    }
    return sum / points;
}

/// e(k) = |J cos k - h + i J gamma sin k| of the family xy.
struct XyBand {
    Wide j, gamma, h;

    Wide a(Wide k) const { return j * std::cos(k) - h; }
    Wide b(Wide k) const { return j * gamma * std::sin(k); }
    Wide energy(Wide k) const { return std::hypot(a(k), b(k)); }
};

/// e(k) = +-|J/2 (1 + delta + (1 - delta) exp(ik))| - h of the family dimer_xx.
struct DimerBand {
    Wide j, delta, h;

    Wide width(Wide k) const {
        return std::abs(j) / 2 *
               std::hypot(1 + delta + (1 - delta) * std::cos(k), (1 - delta) * std::sin(k));
    }
};

}  // namespace chainmark::test
