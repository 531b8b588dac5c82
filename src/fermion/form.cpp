#include "chainmark/fermion/form.hpp"

#include <algorithm>
#include <cmath>
#include <cstdint>
#include <optional>
#include <utility>

#include <fmt/format.h>

#include "chainmark/base/numerics.hpp"

namespace chainmark::fermion {
namespace {

std::size_t at(int i) {
    return static_cast<std::size_t>(i);
}

/// (-1/2)^n
Real half_power(int n) {
    return std::ldexp(n % 2 == 0 ? 1.0L : -1.0L, -n);
}

/// What a string consists of.
struct Anatomy {
    int ladders = 0;
    int inner = 0;  ///< Sz between the first two S+-
    int outer = 0;  ///< other Sz
    SiteFactor first = {};
    SiteFactor second = {};
};

Anatomy anatomy_of(const OperatorString& string) {
    Anatomy anatomy;
    for (const SiteFactor& factor : string) {
        if (factor.op == SiteOperator::z) {
            ++(anatomy.ladders == 1 ? anatomy.inner : anatomy.outer);
        } else if (++anatomy.ladders == 1) {
            anatomy.first = factor;
        } else if (anatomy.ladders == 2) {
            anatomy.second = factor;
        }
    }
    if (anatomy.ladders == 1) {
        anatomy.outer += std::exchange(anatomy.inner, 0);
    }
    return anatomy;
}

/// Collects the strings of a list.
class Reader {
public:
    explicit Reader(const Chain& chain) : sites_(chain.length()) {
        form_.chain = chain;
        form_.onsite.resize(at(sites_));
    }

    /// Why a string is not a part of the form; empty where it is.
    std::string add(const Term& term) {
        const Anatomy anatomy = anatomy_of(term.string);
        if (anatomy.ladders == 0) {
            return add_diagonal(term);
        }
        if (anatomy.ladders % 2 != 0) {
            return "changes the parity of the number of up spins";
        }
        return anatomy.ladders == 2 ? add_bond(term, anatomy)
                                    : "is an interaction of the fermions (of more than two of "
                                      "them)";
    }

    QuadraticForm finish(double constant) {
        form_.constant = constant;
        merge_bonds();
        return std::move(form_);
    }

private:
    std::string add_diagonal(const Term& term) {
        const int count = static_cast<int>(term.string.size());
        const Real value = term.coefficient.real();
        if (count == 1) {
            form_.onsite[at(term.string.front().site)] += value;
        } else if (count == sites_) {
            form_.constant_times_parity += half_power(count) * value;
        } else if (count == sites_ - 1) {
            form_.onsite_times_parity.resize(at(sites_));
            form_.onsite_times_parity[at(missing_site(term.string))] +=
                half_power(count - 1) * value;
        } else {
            return "is an interaction of the fermions";
        }
        return "";
    }

    static int missing_site(const OperatorString& string) {
        int site = 0;
        while (at(site) < string.size() && string[at(site)].site == site) {
            ++site;
        }
        return site;
    }

    std::string add_bond(const Term& term, const Anatomy& anatomy) {
        const int i = anatomy.first.site;
        const int j = anatomy.second.site;
        const bool plain = anatomy.inner == j - i - 1 && anatomy.outer == 0;
        const bool wrapping = anatomy.inner == 0 && anatomy.outer == sites_ - 1 - (j - i);
        if (!plain && !wrapping) {
            return fmt::format(
                "joins sites {0} and {1}, but has an Sz neither exactly on the sites between them "
                "nor exactly on those outside, so the fermions there enter its sign",
                i,
                j);
        }
        if (anatomy.first.op == SiteOperator::minus) {
            return "";  // the conjugate of a string that is read
        }
        const auto factor = static_cast<double>(half_power(anatomy.inner + anatomy.outer));
        Bond bond = plain ? Bond{.first = i, .range = j - i, .hop = {}, .pair = {}}
                          : Bond{.first = j, .range = sites_ - (j - i), .hop = {}, .pair = {}};
        if (anatomy.second.op == SiteOperator::plus) {
            bond.pair = factor * term.coefficient;
        } else {
            bond.hop = factor * (plain ? term.coefficient : std::conj(term.coefficient));
        }
        form_.bonds.push_back(bond);
        return "";
    }

    void merge_bonds() {
        std::vector<Bond>& bonds = form_.bonds;
        const auto key = [](const Bond& bond) {
            return (std::int64_t{bond.range} << 32) + bond.first;
        };
        std::sort(bonds.begin(), bonds.end(), [&](const Bond& a, const Bond& b) {
            return key(a) < key(b);
        });
        std::size_t kept = 0;
        for (std::size_t i = 0; i < bonds.size(); ++i) {
            if (kept > 0 && key(bonds[kept - 1]) == key(bonds[i])) {
                bonds[kept - 1].hop += bonds[i].hop;
                bonds[kept - 1].pair += bonds[i].pair;
            } else {
                bonds[kept++] = bonds[i];
            }
        }
        bonds.resize(kept);
    }

    int sites_;
    QuadraticForm form_;
};

template <class T>
bool all_equal(const std::vector<T>& values) {
    return std::all_of(
        values.begin(), values.end(), [&](const T& value) { return value == values.front(); });
}

/// How far a bond is from the first of its range; wrapping ones carry
///   S+_{j+L} = exp(-i twist) S+_j.
Real deviation(const QuadraticForm& form, const Bond& first, const Bond& bond) {
    using Wide = std::complex<Real>;
    if (!form.wraps(bond) && bond.hop == first.hop && bond.pair == first.pair) {
        return 0.0L;
    }
    Wide phase = 1.0L;
    if (form.wraps(bond)) {
        const std::complex<double> exact = form.chain.wrap_phase();
        phase = exact.imag() == 0.0 ? Wide(exact.real())
                                    : std::polar(1.0L, -static_cast<Real>(form.chain.twist));
    }
    return std::abs(Wide(bond.hop) - Wide(first.hop) * std::conj(phase)) +
           std::abs(Wide(bond.pair) - Wide(first.pair) * phase);
}

/// The deviation of all bonds of a ring where every range has L equal ones; nothing where not.
std::optional<Real> ring_deviation(const QuadraticForm& form) {
    constexpr Real rounding = 4 * epsilon;
    const auto sites = at(form.length());
    if (form.bonds.size() % sites != 0) {
        return std::nullopt;
    }
    Real sum = 0.0L;
    for (std::size_t i = 0; i < form.bonds.size(); ++i) {
        const Bond& first = form.bonds[i - i % sites];
        const Bond& bond = form.bonds[i];
        const Real own = deviation(form, first, bond);
        const bool exact = !form.wraps(bond) && own > 0;
        if (bond.range != first.range || exact ||
            own > rounding * (std::abs(first.hop) + std::abs(first.pair))) {
            return std::nullopt;
        }
        sum += own;
    }
    return sum;
}

bool is_uniform_open(const QuadraticForm& form) {
    const auto bonds = at(form.length() - 1);
    return form.conserves_number() && !form.parity_matters() &&
           (form.bonds.empty() || form.bonds.size() == bonds) &&
           std::all_of(form.bonds.begin(), form.bonds.end(), [&](const Bond& bond) {
               return bond.range == 1 && bond.hop == form.bonds.front().hop;
           });
}

void classify(QuadraticForm& form) {
    if (!all_equal(form.onsite) || !form.onsite_times_parity.empty()) {
        return;
    }
    const bool real_phase = form.chain.wrap_phase().imag() == 0.0;
    if (form.chain.is_ring() && form.length() >= 3 && (form.conserves_number() || real_phase)) {
        if (const std::optional<Real> deviation = ring_deviation(form)) {
            form.kind = FormKind::uniform_ring;
            form.wrap_deviation = *deviation;
            return;
        }
    }
    if (is_uniform_open(form)) {
        form.kind = FormKind::uniform_open;
    }
}

}  // namespace

bool QuadraticForm::conserves_number() const {
    return std::all_of(
        bonds.begin(), bonds.end(), [](const Bond& bond) { return bond.pair == 0.0; });
}

bool QuadraticForm::parity_matters() const {
    return kind == FormKind::uniform_ring || !onsite_times_parity.empty() ||
           std::any_of(bonds.begin(), bonds.end(), [&](const Bond& bond) { return wraps(bond); });
}

Real QuadraticForm::field_at(int site, UpCount up_count) const {
    const Real extra = onsite_times_parity.empty() ? 0.0L : onsite_times_parity[at(site)];
    return onsite[at(site)] + static_cast<Real>(parity_of(up_count)) * extra;
}

Real QuadraticForm::constant_of(UpCount up_count) const {
    return constant + static_cast<Real>(parity_of(up_count)) * constant_times_parity;
}

std::vector<Bond> QuadraticForm::bonds_of_first_site() const {
    std::vector<Bond> first;
    for (const Bond& bond : bonds) {
        if (bond.first == 0) {
            first.push_back(bond);
        }
    }
    return first;
}

void QuadraticForm::add_field(double field) {
    for (Real& value : onsite) {
        value -= static_cast<Real>(field);
    }
}

tl::expected<QuadraticForm, std::string> recognise(const Chain& chain, const TermList& terms) {
    if (chain.two_s != 1) {
        return tl::unexpected(std::string("needs spin 1/2"));
    }
    Reader reader(chain);
    for (const Term& term : terms.terms) {
        const std::string why = reader.add(term);
        if (!why.empty()) {
            return tl::unexpected(
                fmt::format("no free fermions: the string {} {}", to_string(term.string), why));
        }
    }
    QuadraticForm form = reader.finish(terms.constant);
    classify(form);
    return form;
}

}  // namespace chainmark::fermion
