#include "chainmark/operators/site_operator.hpp"

#include <array>
#include <cstddef>

#include <fmt/format.h>

#include "chainmark/base/error.hpp"
#include "chainmark/base/numerics.hpp"

namespace chainmark {
namespace {

constexpr std::size_t most_states = largest_two_s + 1;

/// [two_s][degree][digit]
using GramTable =
    std::array<std::array<std::array<long double, most_states>, most_states>, most_states>;

/// The integers are exact (below 2^38), so every value is off by its last rounding alone.
long double computed_gram_value(int two_s, int degree, int digit) {
    std::int64_t sum = 0;
    long double factorial = 1.0L;
    for (int i = 0; i <= degree; ++i) {
        const std::int64_t part =
            binomial(two_s - i, degree - i) * binomial(degree + i, degree) * binomial(digit, i);
        sum += (degree - i) % 2 == 0 ? part : -part;
        factorial *= i == 0 ? 1 : i;
    }
    return factorial * static_cast<long double>(sum) /
           static_cast<long double>(binomial(2 * degree, degree));
}

GramTable gram_table() {
    GramTable table{};
    for (int two_s = 0; two_s <= largest_two_s; ++two_s) {
        for (int degree = 0; degree <= two_s; ++degree) {
            for (int digit = 0; digit <= two_s; ++digit) {
                table[static_cast<std::size_t>(two_s)][static_cast<std::size_t>(degree)]
                     [static_cast<std::size_t>(digit)] = computed_gram_value(two_s, degree, digit);
            }
        }
    }
    return table;
}

}  // namespace

SiteOperator conjugate(SiteOperator op) {
    return {op.degree, op.from, op.to};
}

long double wide_gram_value(int two_s, int degree, int digit) {
    CHAINMARK_EXPECTS(degree >= 0 && degree <= two_s && two_s <= largest_two_s && digit >= 0 &&
                      digit <= two_s);
    static const GramTable table = gram_table();
    const auto at = [](int i) { return static_cast<std::size_t>(i); };
    return table[at(two_s)][at(degree)][at(digit)];
}

double gram_value(int two_s, int degree, int digit) {
    return static_cast<double>(wide_gram_value(two_s, degree, digit));
}

std::string magnetic_number(int two_s, int digit) {
    const int doubled = 2 * digit - two_s;
    if (doubled == 0) {
        return "0";
    }
    return doubled % 2 == 0 ? fmt::format("{:+}", doubled / 2) : fmt::format("{:+}/2", doubled);
}

std::string to_string(SiteOperator op, int two_s) {
    if (op.is_diagonal()) {
        return op.degree == 1 ? "Sz" : fmt::format("Sz[{}]", op.degree);
    }
    if (two_s == 1) {
        return op == SiteOperator::plus ? "S+" : "S-";
    }
    return fmt::format("|{}><{}|", magnetic_number(two_s, op.to), magnetic_number(two_s, op.from));
}

}  // namespace chainmark
