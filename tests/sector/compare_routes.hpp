#pragma once

#include <algorithm>
#include <cmath>
#include <string>
#include <variant>
#include <vector>

#include "chainmark/base/numerics.hpp"
#include "support/ask.hpp"
#include "support/near.hpp"
#include "support/random_lists.hpp"

/// Route sector against route dense, which shares no code with it.
namespace chainmark::test {

inline std::string reason_of(const Answer& answer) {
    if (const auto* refused = std::get_if<NotCovered>(&answer)) {
        return "not covered: " + refused->reason;
    }
    if (const auto* undecided = std::get_if<Undecided>(&answer)) {
        return "undecided: " + undecided->reason;
    }
    return {};
}

/// Largest width of a bound that is still useful at the default tolerance of 1e-10.
inline constexpr double useful = 5e-11;
/// Where levels lie close, bounds are wider in every route: no more than so many times those of
/// the other.
inline constexpr double alike = 100;

inline void compare_references(const Reference& a, const Reference& b, double widest = useful) {
    REQUIRE(a.value.data.size() == b.value.data.size());
    CHECK(a.value.complex == b.value.complex);
    for (std::size_t i = 0; i < a.value.data.size(); ++i) {
        CHECK(a.value.special_at(i) == b.value.special_at(i));
        if (a.value.special_at(i) != Special::none) {
            continue;
        }
        const double bounds = a.bound[i] + b.bound[i] + 1e-300;
        CHECK_NEAR(a.value.data[i].real(), b.value.data[i].real(), bound(bounds));
        CHECK_NEAR(a.value.data[i].imag(), b.value.data[i].imag(), bound(bounds));
        CHECK(a.bound[i] < std::max(widest, alike * b.bound[i]));
    }
    if (a.degeneracy && b.degeneracy) {
        CHECK(*a.degeneracy == *b.degeneracy);
    }
    if (a.range && b.range) {
        REQUIRE(a.range->size() == b.range->size());
        for (std::size_t i = 0; i < a.range->size(); ++i) {
            const double bounds = std::max(1e-12, a.bound[i] + b.bound[i]);
            CHECK_NEAR((*a.range)[i].first, (*b.range)[i].first, bound(bounds));
            CHECK_NEAR((*a.range)[i].second, (*b.range)[i].second, bound(bounds));
        }
    }
}

/// Both routes must have answers to every question, equal within their bounds, or both have none.
inline void compare_routes(const Route& sector,
                           const Route& dense,
                           const std::vector<Problem>& problems,
                           const std::vector<Query>& questions,
                           double widest = useful) {
    const Batch batch{problems, questions};
    const Answers a = sector.evaluate(batch, context());
    const Answers b = dense.evaluate(batch, context());
    for (std::size_t p = 0; p < problems.size(); ++p) {
        for (std::size_t q = 0; q < questions.size(); ++q) {
            const Answer& ours = a[p][q];
            const Answer& theirs = b[p][q];
            CAPTURE(p);
            INFO(questions[q].spec->name, " ", to_string(questions[q].options.axes));
            INFO("sector: ", reason_of(ours), "  dense: ", reason_of(theirs));
            CHECK(ours.index() == theirs.index());
            if (std::holds_alternative<Reference>(ours) &&
                std::holds_alternative<Reference>(theirs)) {
                compare_references(std::get<Reference>(ours), std::get<Reference>(theirs), widest);
            }
        }
    }
}

/// use(chain, keeps, uniform) for chains of S = 1/2 (`length` sites), 1 and 3/2 with every symmetry
/// class of random_problem: open, rings, antiperiodic and twisted rings (the twist where Sz is
/// conserved; S = 3/2 open alone).
template <class Use>
void for_varied_chains(int length, Use&& use) {
    for (const int two_s : {1, 2, 3}) {
        const int sites = two_s == 1 ? length : two_s == 2 ? 5 : 4;
        for (const Keeps keeps : {Keeps::sz, Keeps::parity, Keeps::nothing}) {
            for (const bool uniform : {true, false}) {
                for (const double twist : {-1.0, 0.0, pi, 0.4}) {
                    if ((keeps != Keeps::sz && twist == 0.4) || (two_s == 3 && twist >= 0)) {
                        continue;
                    }
                    Chain chain = twist < 0 ? open_chain(sites) : ring(sites, twist);
                    chain.two_s = two_s;
                    CAPTURE(two_s);
                    CAPTURE(static_cast<int>(keeps));
                    CAPTURE(uniform);
                    CAPTURE(twist);
                    use(chain, keeps, uniform);
                }
            }
        }
    }
}

}  // namespace chainmark::test
