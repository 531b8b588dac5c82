#include "chainmark/fermion/infinite_chain.hpp"

#include <algorithm>
#include <array>
#include <cmath>

#include <fmt/format.h>

namespace chainmark::fermion {
namespace {

/// Coefficients of one bond: hop (S+ S- + h.c.) + pair (S+ S+ + h.c.).
struct Bond {
    Real hop = 0.0L;
    Real pair = 0.0L;

    Real jx() const { return 2 * (hop + pair); }
    Real jy() const { return 2 * (hop - pair); }
};

const std::string covered =
    "only nearest-neighbour XX, XY and transverse-field Ising chains in a "
    "uniform field and alternating XX chains are covered";

/// Adds a term to the bond it belongs to; otherwise says why it belongs to none.
std::string add(std::array<Bond, 2>& bonds, const Term& term) {
    const OperatorString& string = term.string;
    const auto is_ladder = [](SiteOperator op) {
        return op == SiteOperator::plus || op == SiteOperator::minus;
    };
    const bool is_bond = string.size() == 2 && string[1].site == string[0].site + 1 &&
                         is_ladder(string[0].op) && is_ladder(string[1].op);
    if (!is_bond) {
        return fmt::format("{}; the string {} does not belong to them", covered, to_string(string));
    }
    if (term.coefficient.imag() != 0.0) {
        return fmt::format(
            "{}; the string {} has a complex coefficient", covered, to_string(string));
    }
    Bond& bond = bonds[static_cast<std::size_t>(string[0].site)];
    Real& coefficient = string[0].op == string[1].op ? bond.pair : bond.hop;
    coefficient = static_cast<Real>(term.coefficient.real());  // its conjugate has the same
    return "";
}

}  // namespace

Real InfiniteChain::band_bottom() const {
    return alternating ? std::abs(std::abs(jx) - std::abs(j_odd)) / 2 : 0.0L;
}

Real InfiniteChain::band_top() const {
    return alternating ? (std::abs(jx) + std::abs(j_odd)) / 2 : std::abs(jx);
}

Real InfiniteChain::scale() const {
    return std::abs(field) + std::max({std::abs(jx), std::abs(jy), band_top()});
}

bool coincide(Real a, Real b, Real scale) {
    return std::abs(a - b) <= 4 * double_rounding * std::abs(scale);
}

tl::expected<InfiniteChain, std::string> recognise_infinite(const Problem& problem) {
    if (!problem.chain.is_infinite()) {
        return tl::unexpected<std::string>("needs the infinite chain");
    }
    if (problem.chain.two_s != 1) {
        return tl::unexpected<std::string>("needs spin 1/2");
    }
    const int cell = problem.terms->cell;
    if (cell > 2) {
        return tl::unexpected(
            fmt::format("{}; these couplings repeat after {} sites", covered, cell));
    }
    const SplitField split = split_uniform_field(*problem.terms, problem.chain);
    std::array<Bond, 2> bonds;
    for (const Term& term : split.rest.terms) {
        if (const std::string refusal = add(bonds, term); !refusal.empty()) {
            return tl::unexpected(refusal);
        }
    }
    const Bond& second = bonds[cell == 2 ? 1 : 0];
    InfiniteChain chain{.alternating = bonds[0].hop != second.hop || bonds[0].pair != second.pair,
                        .jx = bonds[0].jx(),
                        .jy = bonds[0].jy(),
                        .j_odd = 0.0L,
                        .field = static_cast<Real>(problem.field) + split.field,
                        .constant = static_cast<Real>(split.rest.constant) / cell};
    if (chain.alternating) {
        if (bonds[0].pair != 0.0L || second.pair != 0.0L) {
            return tl::unexpected(fmt::format(
                "{}; these alternate and do not conserve Sz (string {})", covered, "S+_0 S+_1"));
        }
        chain.j_odd = second.jx();
    }
    return chain;
}

}  // namespace chainmark::fermion
