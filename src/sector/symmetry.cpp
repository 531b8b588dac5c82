#include "chainmark/sector/symmetry.hpp"

#include <algorithm>
#include <cmath>
#include <map>
#include <tuple>

#include <fmt/format.h>

#include "chainmark/base/numerics.hpp"
#include "chainmark/operators/rotation.hpp"
#include "chainmark/sector/halves_basis.hpp"
#include "chainmark/sector/term_maps.hpp"

namespace chainmark::sector {
namespace {

using Complex = std::complex<double>;
using Coefficients = std::map<OperatorString, Complex>;

/// Letters of a translation by several sites are words of so many bits at most.
constexpr int largest_letter_bits = 12;

Coefficients coefficients_of(const std::vector<Term>& terms) {
    Coefficients result;
    for (const Term& term : terms) {
        result.emplace(term.string, term.coefficient);
    }
    return result;
}

/// Which string a map takes to one with another coefficient; empty where the list is invariant.
template <class Map>
std::string broken_by(const TermList& terms, const Chain& chain, double rounding, Map&& map) {
    const Coefficients coefficients = coefficients_of(terms.terms);
    for (const Term& term : terms.terms) {
        const Term moved = map(term);
        const auto at = coefficients.find(moved.string);
        if (at == coefficients.end() || std::abs(at->second - moved.coefficient) > rounding) {
            return fmt::format(
                "{} and {} {}",
                to_string(term.string, chain.two_s),
                to_string(moved.string, chain.two_s),
                moved.string == term.string ? "would change sign" : "have different coefficients");
        }
    }
    return {};
}

void find_translation(Symmetries& found, const Chain& chain, const TermList& terms) {
    if (!chain.is_ring()) {
        found.why_no_translation = "the chain is open";
        return;
    }
    const int length = chain.length();
    const int width = Packing::width_of(chain.two_s);
    // A phase exp(i twist) that is not +-1 carries a rounding of its own.
    const double rounding = 8 * epsilon * largest_coupling(terms);
    for (int step = 1; step < length && step * width <= largest_letter_bits; ++step) {
        if (length % step != 0) {
            continue;
        }
        const std::string broken = broken_by(terms, chain, rounding, [&](const Term& term) {
            return translated(term, chain, step, chain.wrap_phase());
        });
        if (broken.empty()) {
            found.step = step;
            found.wrap_sign = chain.wrap_phase() == Complex(-1.0);
            if (chain.wrap_phase().imag() != 0.0) {
                found.gauge = chain.twist / length;
                found.real = false;
            }
            return;
        }
        if (step == 1) {
            found.why_no_translation = broken;
        }
    }
}

void find_inversion(Symmetries& found, const Chain& chain, const TermList& terms) {
    if (chain.twist != 0.0) {
        found.why_no_inversion = "not used on a twisted ring";
        return;
    }
    found.why_no_inversion =
        broken_by(terms, chain, 0.0, [&](const Term& term) { return inverted(term, chain); });
    found.inversion = found.why_no_inversion.empty();
}

void find_reflection(Symmetries& found, const Chain& chain, const TermList& terms) {
    found.why_no_reflection = found.gauge != 0.0
                                  ? "turns the twist around"
                                  : broken_by(terms, chain, 0.0, [&](const Term& term) {
                                        return reflected(term, chain);
                                    });
    found.reflection = found.why_no_reflection.empty();
}

}  // namespace

Symmetries find_symmetries(const Chain& chain, const TermList& terms) {
    Symmetries found;
    found.conserved = Conserved::up_count;
    for (const Term& term : terms.terms) {
        const int change = raises_by(term.string);
        if (change != 0 && found.why_no_sz.empty()) {
            found.why_no_sz = fmt::format("{} changes it", to_string(term.string, chain.two_s));
            found.conserved = Conserved::parity;
        }
        if (change % 2 != 0 && found.why_no_parity.empty()) {
            found.why_no_parity = fmt::format("{} changes it", to_string(term.string, chain.two_s));
        }
        if (term.coefficient.imag() != 0.0 && found.why_not_real.empty()) {
            found.why_not_real =
                fmt::format("{} has a complex coefficient", to_string(term.string, chain.two_s));
        }
    }
    if (!found.why_no_parity.empty()) {
        found.conserved = Conserved::nothing;
    }
    found.real = found.why_not_real.empty();
    find_translation(found, chain, terms);
    find_reflection(found, chain, terms);
    find_inversion(found, chain, terms);
    found.rotation = is_rotation_invariant(terms, chain);
    if (!found.rotation) {
        found.why_no_rotation =
            chain.twist != 0.0 ? "the ring is twisted" : "H does not commute with total S+";
    }
    return found;
}

std::vector<Term> symmetric_terms(const Chain& chain,
                                  const std::vector<Term>& terms,
                                  const Symmetries& symmetries) {
    std::vector<Term> result = terms;
    if (symmetries.gauge == 0.0) {
        return result;
    }
    for (Term& term : result) {
        double angle = 0.0;
        for (const SiteFactor& factor : term.string) {
            angle -= symmetries.gauge * factor.site * factor.op.raises_by();
        }
        term.coefficient *= std::polar(1.0, angle);
    }
    // Now plain translation leaves the list alone, up to rounding; take one coefficient for all.
    std::map<OperatorString, std::size_t> place;
    for (std::size_t i = 0; i < result.size(); ++i) {
        place.emplace(result[i].string, i);
    }
    std::vector<bool> settled(result.size(), false);
    for (std::size_t i = 0; i < result.size(); ++i) {
        Term moved = result[i];
        while (!settled[place.at(moved.string)]) {
            const std::size_t at = place.at(moved.string);
            settled[at] = true;
            result[at].coefficient = moved.coefficient;
            const auto conjugated = place.find(conjugate(moved.string));
            if (!settled[conjugated->second]) {
                settled[conjugated->second] = true;
                result[conjugated->second].coefficient = std::conj(moved.coefficient);
            }
            moved = translated(moved, chain, symmetries.step, 1.0);
        }
    }
    return result;
}

int mirrored_momentum(int momentum, int wrapped_up, int translations) {
    const int n = ((-momentum - wrapped_up) % translations + translations) % translations;
    return n > translations / 2 ? n - translations : n;
}

int inverted_value(Conserved conserved, int value, const Packing& packing) {
    const int full = packing.length * packing.two_s;
    switch (conserved) {
        case Conserved::up_count:
            return full - value;
        case Conserved::parity:
            return (full + value) % 2;
        case Conserved::nothing:
            break;
    }
    return value;
}

namespace {

/// Whether T has real eigenvalues in the representation, so that reflection commutes with it.
bool is_its_own_mirror(const Symmetries& symmetries, int length, const Irrep& irrep) {
    return (2LL * irrep.momentum + irrep.wrapped_up) * symmetries.step % length == 0;
}

std::vector<int> values_of(Conserved conserved, const Packing& packing) {
    const int count = conserved == Conserved::up_count ? packing.length * packing.two_s + 1
                      : conserved == Conserved::parity ? 2
                                                       : 1;
    std::vector<int> values;
    for (int value = 0; value < count; ++value) {
        values.push_back(value);
    }
    return values;
}

/// The sectors of one up count (or parity).
std::vector<Sector> sectors_of_value(const Symmetries& symmetries,
                                     const Packing& packing,
                                     int value) {
    Group group{packing, symmetries.step};
    group.wrap_sign = symmetries.wrap_sign;
    const bool inversion =
        symmetries.inversion && inverted_value(symmetries.conserved, value, packing) == value;
    std::vector<Sector> sectors;
    const int translations = group.translations();
    for (int n = -((translations - 1) / 2); n <= translations / 2; ++n) {
        Irrep irrep;
        irrep.momentum = n;
        irrep.wrapped_up = symmetries.wrap_sign ? value : 0;
        group.reflection =
            symmetries.reflection &&
            (symmetries.step == 0 || is_its_own_mirror(symmetries, packing.length, irrep));
        group.inversion = inversion;
        for (const int reflection : group.reflection ? std::vector{1, -1} : std::vector{1}) {
            for (const int inverse : group.inversion ? std::vector{1, -1} : std::vector{1}) {
                irrep.reflection = reflection;
                irrep.inversion = inverse;
                sectors.push_back({{symmetries.conserved, value, irrep}, group});
            }
        }
    }
    return sectors;
}

}  // namespace

std::vector<Sector> sectors_of(const Chain& chain, const Symmetries& symmetries) {
    const Packing packing(chain);
    std::vector<Sector> sectors;
    for (const int value : values_of(symmetries.conserved, packing)) {
        for (Sector& sector : sectors_of_value(symmetries, packing, value)) {
            sectors.push_back(sector);
        }
    }
    const auto find = [&](const SectorLabel& label) {
        return static_cast<std::size_t>(
            std::find_if(sectors.begin(),
                         sectors.end(),
                         [&](const Sector& other) { return other.label == label; }) -
            sectors.begin());
    };
    for (std::size_t i = 0; i < sectors.size(); ++i) {
        Sector& sector = sectors[i];
        SectorLabel label = sector.label;
        const int opposite = inverted_value(symmetries.conserved, label.value, packing);
        if (symmetries.inversion && opposite > label.value) {
            label.value = opposite;
            sector.inverted = true;
        }
        const int mirrored = mirrored_momentum(
            label.irrep.momentum, label.irrep.wrapped_up, sector.group.translations());
        if (mirrored > label.irrep.momentum && (symmetries.real || symmetries.reflection)) {
            label.irrep.momentum = mirrored;
            (symmetries.real ? sector.conjugated : sector.reflected) = true;
        }
        sector.twin = find(label);
    }
    return sectors;
}

Labels labels_of(const Chain& chain, const Symmetries& symmetries, const Sector& sector) {
    Labels labels;
    if (symmetries.conserved == Conserved::up_count) {
        labels.sz = sector.label.value - chain.length() * chain.spin();
    } else if (symmetries.conserved == Conserved::parity) {
        labels.parity = sector.label.value == 0 ? 1 : -1;
    }
    if (symmetries.step != 0) {
        labels.momentum = sector.label.irrep.momentum;
    }
    if (sector.group.reflection) {
        labels.reflection = sector.label.irrep.reflection;
    }
    if (sector.group.inversion) {
        labels.inversion = sector.label.irrep.inversion;
    }
    return labels;
}

std::string to_string(const Labels& labels) {
    std::vector<std::string> parts;
    if (labels.sz) {
        parts.push_back(fmt::format("Sz = {}", *labels.sz));
    }
    if (labels.parity) {
        parts.push_back(fmt::format("parity {:+d}", *labels.parity));
    }
    if (labels.momentum) {
        parts.push_back(fmt::format("momentum {}", *labels.momentum));
    }
    if (labels.reflection) {
        parts.push_back(fmt::format("reflection {:+d}", *labels.reflection));
    }
    if (labels.inversion) {
        parts.push_back(fmt::format("inversion {:+d}", *labels.inversion));
    }
    return parts.empty() ? "all states" : fmt::format("{}", fmt::join(parts, ", "));
}

namespace {

std::string line(const char* name, bool present, const std::string& remark) {
    return remark.empty() ? fmt::format("  {:<26}{}\n", name, present ? "yes" : "no")
                          : fmt::format("  {:<26}{:<5}{}\n", name, present ? "yes" : "no", remark);
}

std::string translation_remark(const Symmetries& found, const Chain& chain) {
    std::string remark = found.why_no_translation;
    if (found.step > 1) {
        remark = fmt::format("by {} sites; not by one: {}", found.step, remark);
    }
    if (found.step > 0 && chain.twist != 0.0) {
        remark += (remark.empty() ? "" : "; ") + std::string("with the phase of the boundary");
    }
    return remark;
}

}  // namespace

std::string describe_symmetries(const Problem& problem) {
    const Chain& chain = problem.chain;
    std::string text = fmt::format("{}\n", chainmark::to_string(chain));
    if (chain.is_infinite()) {
        return text + "  sectors are for finite chains\n";
    }
    const Symmetries found = find_symmetries(chain, full_terms(problem));
    const bool sz = found.conserved == Conserved::up_count;
    text += line("total Sz", sz, found.why_no_sz);
    text += line("parity of the up count",
                 found.conserved != Conserved::nothing,
                 sz ? "follows from total Sz" : found.why_no_parity);
    text += line("total spin", found.rotation, found.why_no_rotation);
    text += line("translation", found.step != 0, translation_remark(found, chain));
    text += line("reflection", found.reflection, found.why_no_reflection);
    text += line("spin inversion", found.inversion, found.why_no_inversion);
    text += line("real matrix", found.real, found.why_not_real);
    if (chain.length() > Packing::most_sites(chain.two_s)) {
        return text + fmt::format("  more than the {} sites that this route takes\n",
                                  Packing::most_sites(chain.two_s));
    }
    double largest = 0.0;
    std::string largest_name;
    const std::vector<Sector> sectors = sectors_of(chain, found);
    std::size_t solved = 0;
    for (std::size_t i = 0; i < sectors.size(); ++i) {
        const Sector& sector = sectors[i];
        if (sector.twin != i) {
            continue;
        }
        ++solved;
        const double states = count_states(
            sector.group, sector.label.irrep, sector.label.conserved, sector.label.value);
        if (states > largest) {
            largest = states;
            largest_name = to_string(labels_of(chain, found, sector));
        }
    }
    return text + fmt::format(
                      "  {} sectors, {} of them to be solved; the largest holds {:.0f} of {:.0f} "
                      "states: {}\n",
                      sectors.size(),
                      solved,
                      largest,
                      std::pow(chain.two_s + 1.0, chain.length()),
                      largest_name);
}

}  // namespace chainmark::sector
