#pragma once

#include <cmath>
#include <vector>

#include "support/random_lists.hpp"

/// Chains and closed forms that several tests of `dense` use.
namespace chainmark::test {

inline Chain with_spin(Chain chain, int two_s) {
    chain.two_s = two_s;
    return chain;
}

/// -sum_j (field_x Sx_j) as terms and field_z as the problem's field: spins that do not interact.
inline Problem free_spins(int length, int two_s, double field_x, double field_z) {
    const Chain chain = with_spin(open_chain(length), two_s);
    const std::vector<PlacedTerm> terms = {
        {.factors = {SiteMatrix::sx(two_s)}, .offsets = {0}, .coupling = {-field_x}}};
    const Result<TermList> list = build_terms(chain, terms, Coincident::refuse, 1);
    return {chain, std::make_shared<const TermList>(list.value()), field_z};
}

/// One spin in a field of size h at the temperature T: ln sum_m exp(m h/T) and its derivatives by
/// x = h/T, from the sum over m itself.
struct FreeSpin {
    long double log_sum = 0.0L;
    long double mean = 0.0L;      ///< <m>, the Brillouin function times S
    long double variance = 0.0L;  ///< <m^2> - <m>^2
    long double entropy = 0.0L;   ///< -sum p ln p

    FreeSpin(int two_s, double h, double temperature) {
        const long double x = static_cast<long double>(h) / temperature;
        const long double top = two_s / 2.0L * x;
        long double sum = 0.0L;
        long double first = 0.0L;
        for (int digit = 0; digit <= two_s; ++digit) {
            const long double m = digit - two_s / 2.0L;
            sum += std::exp(m * x - top);
            first += m * std::exp(m * x - top);
        }
        mean = first / sum;
        for (int digit = 0; digit <= two_s; ++digit) {
            const long double m = digit - two_s / 2.0L;
            const long double p = std::exp(m * x - top) / sum;
            variance += (m - mean) * (m - mean) * p;
            entropy -= p * ((m * x - top) - std::log(sum));
        }
        log_sum = std::log(sum) + top;
    }
};

}  // namespace chainmark::test
