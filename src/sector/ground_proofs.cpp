#include "chainmark/sector/ground_proofs.hpp"

#include <algorithm>
#include <cmath>
#include <limits>
#include <numeric>

#include "chainmark/base/numerics.hpp"

namespace chainmark::sector {
namespace {

/// One equation over the integers mod 2: the sum of a_j over the bits of `sites` is `value`.
struct Equation {
    std::uint64_t sites;
    bool value;
};

/// Solves by elimination; free unknowns are 0. Nothing where the equations contradict each other.
std::optional<std::uint64_t> solve_mod_2(std::vector<Equation> equations, int unknowns) {
    std::size_t used = 0;
    std::vector<int> pivots;
    for (int j = 0; j < unknowns; ++j) {
        const std::uint64_t bit = std::uint64_t{1} << j;
        const auto begin = equations.begin() + static_cast<std::ptrdiff_t>(used);
        const auto pivot = std::find_if(
            begin, equations.end(), [bit](const Equation& e) { return (e.sites & bit) != 0; });
        if (pivot == equations.end()) {
            continue;
        }
        std::swap(*begin, *pivot);
        const Equation row = equations[used];
        for (std::size_t i = 0; i < equations.size(); ++i) {
            if (i != used && (equations[i].sites & bit) != 0) {
                equations[i].sites ^= row.sites;
                equations[i].value = equations[i].value != row.value;
            }
        }
        pivots.push_back(j);
        ++used;
    }
    std::uint64_t solution = 0;
    for (std::size_t i = 0; i < equations.size(); ++i) {
        if (i < used) {
            solution |= equations[i].value ? std::uint64_t{1} << pivots[i] : 0;
        } else if (equations[i].value) {
            return std::nullopt;
        }
    }
    return solution;
}

/// Counts, for every pair of sites, the strings that move one quantum from one to the other.
class Exchanges {
public:
    explicit Exchanges(const Chain& chain)
        : length_(chain.length()),
          needed_(chain.two_s * chain.two_s),
          seen_(static_cast<std::size_t>(length_) * static_cast<std::size_t>(length_), 0) {}

    void add(const OperatorString& string) {
        if (string.size() == 2 && string[0].op.raises_by() * string[1].op.raises_by() == -1) {
            const bool first_up = string[0].op.raises_by() > 0;
            const int up = string[first_up ? 0 : 1].site;
            const int down = string[first_up ? 1 : 0].site;
            ++seen_[place(up, down)];
        }
    }

    /// Whether pairs that can exchange a quantum whatever their digits join all sites. Then a
    /// quantum can be moved along any path, and all distributions of the quanta are connected.
    bool join_all_sites() const {
        std::vector<bool> reached(static_cast<std::size_t>(length_), false);
        std::vector<int> open = {0};
        reached[0] = true;
        for (std::size_t next = 0; next < open.size(); ++next) {
            for (int j = 0; j < length_; ++j) {
                if (!reached[static_cast<std::size_t>(j)] && exchange(open[next], j)) {
                    reached[static_cast<std::size_t>(j)] = true;
                    open.push_back(j);
                }
            }
        }
        return open.size() == static_cast<std::size_t>(length_);
    }

private:
    bool exchange(int i, int j) const {
        return seen_[place(i, j)] == needed_ && seen_[place(j, i)] == needed_;
    }

    std::size_t place(int up, int down) const {
        return static_cast<std::size_t>(up) * static_cast<std::size_t>(length_) +
               static_cast<std::size_t>(down);
    }

    int length_;
    int needed_;  ///< pairs of digits with room below and above
    std::vector<int> seen_;
};

}  // namespace

SectorHamiltonian::SectorHamiltonian(const Chain& on,
                                     const Symmetries& found,
                                     const std::vector<Term>& strings)
    : chain(on),
      symmetries(found),
      terms(symmetric_terms(on, strings, found)),
      packed(Packing(on), terms),
      sign_rotation(find_sign_rotation(on, found, terms)) {}

std::optional<SignRotation> find_sign_rotation(const Chain& chain,
                                               const Symmetries& symmetries,
                                               const std::vector<Term>& terms) {
    if (symmetries.conserved != Conserved::up_count || !symmetries.real) {
        return std::nullopt;
    }
    const int length = chain.length();
    std::vector<Equation> equations;
    Exchanges exchanges(chain);
    for (const Term& term : terms) {
        Equation equation{0, term.coefficient.real() > 0};
        bool off_diagonal = false;
        bool diagonal_factor = false;
        for (const SiteFactor& factor : term.string) {
            off_diagonal = off_diagonal || !factor.op.is_diagonal();
            diagonal_factor = diagonal_factor || factor.op.is_diagonal();
            if (factor.op.raises_by() % 2 != 0) {
                equation.sites ^= std::uint64_t{1} << factor.site;
            }
        }
        if (!off_diagonal) {
            continue;
        }
        if (diagonal_factor) {
            return std::nullopt;  // its sign depends on the configuration
        }
        equations.push_back(equation);
        exchanges.add(term.string);
    }
    if (!exchanges.join_all_sites()) {
        return std::nullopt;
    }
    const auto solution = solve_mod_2(std::move(equations), length);
    if (!solution) {
        return std::nullopt;
    }
    SignRotation rotation;
    for (int j = 0; j < length; ++j) {
        rotation.rotated.push_back(static_cast<int>((*solution >> j) & 1));
    }
    return rotation;
}

namespace {

bool is_odd(const SignRotation& rotation, const Packing& packing, Word word) {
    int sum = 0;
    for (int j = 0; j < packing.length; ++j) {
        sum += rotation.rotated[static_cast<std::size_t>(j)] * packing.digit(word, j);
    }
    return sum % 2 != 0;
}

/// A configuration of the given digit sum: quanta as low as they go.
Word filled(const Packing& packing, int up_count) {
    Word word = 0;
    for (int j = 0; j < packing.length && up_count > 0; ++j) {
        const int digit = std::min(packing.two_s, up_count);
        word |= packing.place(digit, j);
        up_count -= digit;
    }
    return word;
}

}  // namespace

bool holds_positive_state(const SignRotation& rotation, const Sector& sector) {
    const Group& group = sector.group;
    const Packing& packing = group.packing;
    const std::vector<std::complex<double>> chi = characters(group, sector.label.irrep);
    const Word word = filled(packing, sector.label.value);
    const bool odd = is_odd(rotation, packing, word);
    // psi(s) = sign chi(h) psi(h s) for every generator, with psi(s) = (-1)^(sum a n) up to a
    // positive factor.
    const auto agrees = [&](Word image, int map, bool wraps) {
        const bool negative = (odd != is_odd(rotation, packing, image)) != wraps;
        return std::abs(chi[static_cast<std::size_t>(map)] - (negative ? -1.0 : 1.0)) <
               0.5 / packing.length;
    };
    bool holds = true;
    if (group.step != 0 && group.translations() > 1) {
        const Word carried = word >> ((packing.length - group.step) * packing.width);
        holds = agrees(packing.rotated(word, group.step),
                       group.number(1, 0, 0),
                       group.wrap_sign && packing.digit_sum(carried) % 2 != 0);
    }
    if (group.reflection) {
        holds = holds && agrees(packing.reversed(word), group.number(0, 1, 0), false);
    }
    if (group.inversion) {
        holds = holds && agrees(packing.inverted(word), group.number(0, 0, 1), false);
    }
    return holds;
}

namespace {

/// The element of S+ or S- that |to><from| stands for: sqrt(S(S+1) - m m').
double ladder_element(const SiteOperator& op, int two_s) {
    const double spin = two_s / 2.0;
    return std::sqrt(spin * (spin + 1) - (op.from - spin) * (op.to - spin));
}

/// Collects J of the exchange and J_z over one cut bond; false for any other term across it.
class CutBond {
public:
    explicit CutBond(int two_s) : two_s_(two_s) {}

    bool add(const Term& term) {
        const SiteOperator& a = term.string[0].op;
        const SiteOperator& b = term.string[1].op;
        const double coefficient = term.coefficient.real();
        if (a == SiteOperator::z && b == SiteOperator::z) {
            return coefficient >= 0;
        }
        if (a.is_diagonal() || b.is_diagonal() || std::abs(a.raises_by()) != 1 ||
            a.raises_by() + b.raises_by() != 0) {
            return false;
        }
        const double j = 2 * coefficient / (ladder_element(a, two_s_) * ladder_element(b, two_s_));
        smallest_ = std::min(smallest_, j);
        largest_ = std::max(largest_, j);
        ++exchanges_;
        return true;
    }

    /// Whether the exchange is one J >= 0 for all digits.
    bool is_positive() const {
        return exchanges_ == 0 || (exchanges_ == 2 * two_s_ * two_s_ && smallest_ >= 0 &&
                                   largest_ - smallest_ <= 16 * epsilon * largest_);
    }

private:
    int two_s_;
    int exchanges_ = 0;
    double smallest_ = std::numeric_limits<double>::infinity();
    double largest_ = 0.0;
};

}  // namespace

bool lowest_at_zero_sz(const SectorHamiltonian& hamiltonian) {
    const int length = hamiltonian.chain.length();
    const Symmetries& symmetries = hamiltonian.symmetries;
    if (length % 2 != 0 || !symmetries.real || !symmetries.reflection || !symmetries.inversion ||
        symmetries.conserved != Conserved::up_count) {
        return false;
    }
    std::vector<CutBond> cuts(static_cast<std::size_t>(length) / 2,
                              CutBond(hamiltonian.chain.two_s));
    for (const Term& term : hamiltonian.terms) {
        const int first = term.string.front().site;
        const int last = term.string.back().site;
        const bool crosses = first < length / 2 && last >= length / 2;
        if (crosses && (term.string.size() != 2 || first + last != length - 1 ||
                        !cuts[static_cast<std::size_t>(first)].add(term))) {
            return false;
        }
    }
    return std::all_of(
        cuts.begin(), cuts.end(), [](const CutBond& cut) { return cut.is_positive(); });
}

Excluded excluded(const SectorHamiltonian& hamiltonian, int up_count, double field) {
    const Symmetries& symmetries = hamiltonian.symmetries;
    if (symmetries.conserved != Conserved::up_count) {
        return Excluded::no;
    }
    const double sz = up_count - hamiltonian.chain.length() * hamiltonian.chain.spin();
    if (symmetries.inversion && (sz * field < 0 || (field == 0 && sz < 0))) {
        return Excluded::by_inversion;
    }
    if (symmetries.rotation && field == 0 && std::abs(sz) > 0.5) {
        return Excluded::by_spin;
    }
    if (field == 0 && sz != 0 && lowest_at_zero_sz(hamiltonian)) {
        return Excluded::by_positivity;
    }
    return Excluded::no;
}

double lower_bound_of(const SectorHamiltonian& hamiltonian, int up_count) {
    constexpr double nothing = -std::numeric_limits<double>::infinity();
    if (hamiltonian.chain.two_s != 1) {
        return nothing;
    }
    const auto length = static_cast<std::size_t>(hamiltonian.chain.length());
    double empty = 0.0;  // diagonal element of the empty chain, and of the full one
    double full = 0.0;
    double scale = 0.0;
    std::vector<double> by_up(length, 0.0);    // change a row by an up spin at a site
    std::vector<double> by_down(length, 0.0);  // or by a down spin
    for (const Term& term : hamiltonian.terms) {
        const double size =
            std::abs(term.coefficient) *
            std::pow(0.5,
                     std::count_if(term.string.begin(), term.string.end(), [](const SiteFactor& f) {
                         return f.op.is_diagonal();
                     }));
        scale += size;
        const bool diagonal = std::all_of(term.string.begin(),
                                          term.string.end(),
                                          [](const SiteFactor& f) { return f.op.is_diagonal(); });
        if (diagonal) {
            full += term.coefficient.real() > 0 ? size : -size;
            const double down_sign = term.string.size() % 2 == 0 ? 1.0 : -1.0;
            empty += down_sign * (term.coefficient.real() > 0 ? size : -size);
            for (const SiteFactor& factor : term.string) {
                by_up[static_cast<std::size_t>(factor.site)] += 2 * size;
                by_down[static_cast<std::size_t>(factor.site)] += 2 * size;
            }
            continue;
        }
        // A string acts on a row only if its first site to be lowered is up (raised: down).
        const auto lowered =
            std::find_if(term.string.begin(), term.string.end(), [](const SiteFactor& f) {
                return f.op == SiteOperator::minus;
            });
        const auto raised =
            std::find_if(term.string.begin(), term.string.end(), [](const SiteFactor& f) {
                return f.op == SiteOperator::plus;
            });
        if (lowered == term.string.end() || raised == term.string.end()) {
            return nothing;
        }
        by_up[static_cast<std::size_t>(lowered->site)] += size;
        by_down[static_cast<std::size_t>(raised->site)] += size;
    }
    const auto bound = [&](double start, std::vector<double> by_site, std::size_t count) {
        std::sort(by_site.begin(), by_site.end(), std::greater<>());
        return std::accumulate(by_site.begin(),
                               by_site.begin() + static_cast<std::ptrdiff_t>(count),
                               start,
                               std::minus<>());
    };
    const auto ups = static_cast<std::size_t>(up_count);
    return std::max(bound(empty, by_up, ups), bound(full, by_down, length - ups)) -
           64 * epsilon * scale * static_cast<double>(length);
}

}  // namespace chainmark::sector
