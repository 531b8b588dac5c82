#include "chainmark/sector/sector_choice.hpp"

#include <fmt/format.h>

namespace chainmark::sector {
namespace {

constexpr const char* see = " (`show symmetries` lists what there is)";

/// Why no sector carries a label of this kind; empty where some may.
std::string missing_symmetry(const Labels& wanted, const Symmetries& found) {
    if (wanted.sz && found.conserved != Conserved::up_count) {
        return "Sz is not conserved: " + found.why_no_sz;
    }
    if (wanted.parity && found.conserved == Conserved::nothing) {
        return "the parity of the up count is not conserved: " + found.why_no_parity;
    }
    if (wanted.momentum && found.step == 0) {
        return "no translation symmetry: " + found.why_no_translation;
    }
    if (wanted.reflection && !found.reflection) {
        return "no reflection symmetry: " + found.why_no_reflection;
    }
    if (wanted.inversion && !found.inversion) {
        return "no inversion symmetry: " + found.why_no_inversion;
    }
    return {};
}

/// Whether a sector has the labels that it resolves.
bool carries(const Labels& wanted, double sz, const Sector& sector) {
    const SectorLabel& label = sector.label;
    const int translations = sector.group.translations();
    return (!wanted.sz || *wanted.sz == sz) &&
           (!wanted.parity || *wanted.parity == (label.value % 2 == 0 ? 1 : -1)) &&
           (!wanted.momentum || (*wanted.momentum - label.irrep.momentum) % translations == 0) &&
           (!wanted.reflection || !sector.group.reflection ||
            *wanted.reflection == label.irrep.reflection) &&
           (!wanted.inversion || !sector.group.inversion ||
            *wanted.inversion == label.irrep.inversion);
}

}  // namespace

Labels SectorChoice::labels(const Solution& solution, std::size_t sector) const {
    Labels labels = solution.labels(sector);
    const Group& group = solution.sectors()[sector].group;
    if (wanted.reflection && !group.reflection) {
        labels.momentum.reset();
        labels.reflection = wanted.reflection;
    }
    if (wanted.inversion && !group.inversion) {
        labels.sz.reset();
        labels.parity = wanted.parity;
        labels.inversion = wanted.inversion;
    }
    return labels;
}

SectorChoice choose_sectors(const Problem& problem,
                            const Solution& solution,
                            const std::optional<Labels>& wanted) {
    SectorChoice choice;
    choice.wanted = wanted.value_or(Labels{});
    const std::vector<Sector>& sectors = solution.sectors();
    choice.accepted.assign(sectors.size(), false);
    choice.combined.assign(sectors.size(), false);
    const Labels& asked = choice.wanted;
    choice.refusal = missing_symmetry(asked, solution.symmetries());
    if (!choice.refusal.empty()) {
        return choice;
    }
    const bool field = solution.field_outside() && problem.field != 0.0;
    for (std::size_t i = 0; i < sectors.size(); ++i) {
        const Sector& sector = sectors[i];
        if (!carries(asked, solution.sz_of_sector(i), sector) || solution.block_of(i).dim() == 0) {
            continue;
        }
        const Irrep& irrep = sector.label.irrep;
        if (asked.reflection && !sector.group.reflection) {
            if (asked.momentum) {
                choice.refusal = "reflection takes this momentum to the opposite one";
                return choice;
            }
            choice.combined[i] = true;
            if (irrep.momentum <
                mirrored_momentum(irrep.momentum, irrep.wrapped_up, sector.group.translations())) {
                continue;
            }
        }
        if (asked.inversion && !sector.group.inversion) {
            // N_up becomes 2 L S - N_up: an even 2 L S keeps the parity.
            const bool turns_parity = problem.chain.length() * problem.chain.two_s % 2 != 0;
            if (asked.sz || (asked.parity && turns_parity)) {
                choice.refusal = "inversion takes this Sz or parity to another one";
                return choice;
            }
            if (field) {
                choice.refusal = "no inversion symmetry in a field";
                return choice;
            }
            choice.combined[i] = true;
            if (sector.label.value <
                inverted_value(sector.label.conserved, sector.label.value, sector.group.packing)) {
                continue;
            }
        }
        choice.accepted[i] = true;
        choice.dim += solution.block_of(i).dim();
    }
    if (choice.dim == 0.0) {
        choice.refusal = fmt::format("no state of this chain carries {}{}", to_string(asked), see);
    }
    return choice;
}

}  // namespace chainmark::sector
