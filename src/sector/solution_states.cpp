// The part of Solution that concerns states: vectors over all configurations, expectation values
// and how far vectors are from the exact ones.
#include <algorithm>
#include <cmath>
#include <limits>
#include <map>
#include <set>

#include "chainmark/sector/observable.hpp"
#include "chainmark/sector/solution.hpp"
#include "chainmark/sector/term_maps.hpp"

namespace chainmark::sector {

Eigen::VectorXcd Solution::state(const SectorLevel& level, const HalvesBasis& configurations) {
    const Sector& sector = sectors_[level.sector];
    Block& block = *blocks_[sector.twin];
    block.extend(level.level + 1, Aim::vector, context_);
    if (!sector.inverted && !sector.conjugated && !sector.reflected) {
        return block.expanded(level.level, configurations, context_);
    }
    const Sector& twin = sectors_[sector.twin];
    const HalvesBasis source(twin.group.packing, twin.label.conserved, twin.label.value);
    const Eigen::VectorXcd original = block.expanded(level.level, source, context_);
    Eigen::VectorXcd result(configurations.dim());
    const Packing& packing = configurations.packing();
    configurations.for_each_in(
        0, configurations.highs().size(), [&](std::int64_t index, Word word) {
            const Word inverted = sector.inverted ? packing.inverted(word) : word;
            const Word from = sector.reflected ? packing.reversed(inverted) : inverted;
            const std::complex<double> amplitude = original[source.rank(from)];
            result[index] = sector.conjugated ? std::conj(amplitude) : amplitude;
        });
    return result;
}

Eigen::VectorXd Solution::expectations(std::size_t sector,
                                       const std::vector<Term>& symmetric,
                                       const Context& context) const {
    // The sector's states are K^c R^r Z^z of its twin's, so the maps go over to the operator; and
    // where Z labels the twin's states, only the part of A that is even under it has averages.
    const Sector& of = sectors_[sector];
    const bool even = sectors_[of.twin].group.inversion;
    StringSum in_twin;
    for (Term term : symmetric) {
        if (of.inverted) {
            term = inverted(std::move(term), chain_);
        }
        if (of.reflected) {
            term = reflected(std::move(term), chain_);
        }
        if (of.conjugated) {
            term.coefficient = std::conj(term.coefficient);
        }
        in_twin[term.string] += even ? term.coefficient / 2.0 : term.coefficient;
        if (even) {
            const Term other = inverted(term, chain_);
            in_twin[other.string] += other.coefficient / 2.0;
        }
    }
    return blocks_[of.twin]->expectations(symmetric_terms(chain_, terms_of(in_twin), symmetries()),
                                          context);
}

double Solution::expectation(const SectorLevel& level, const std::vector<Term>& symmetric) {
    blocks_[sectors_[level.sector].twin]->extend(level.level + 1, Aim::vector, context_);
    return expectations(level.sector, symmetric, context_)[static_cast<Eigen::Index>(level.level)];
}

double Solution::tilt_of(const std::vector<SectorLevel>& levels) {
    std::map<std::size_t, std::set<std::size_t>> by_sector;
    for (const SectorLevel& level : levels) {
        by_sector[level.sector].insert(level.level);
    }
    double tilt = 0.0;
    for (const auto& [sector, members] : by_sector) {
        Block& block = *blocks_[sectors_[sector].twin];
        const std::size_t next = *members.rbegin() + 1;
        block.extend(next + 1, Aim::vector, context_);
        double squares = 0.0;
        for (const std::size_t member : members) {
            squares += std::pow(block.residual(member), 2);
        }
        double gap = std::numeric_limits<double>::infinity();
        if (next < block.known()) {
            gap = block.energy(next) - block.energy(next - 1);
        }
        if (*members.begin() > 0) {
            const std::size_t first = *members.begin();
            gap = std::min(gap, block.energy(first) - block.energy(first - 1));
        }
        tilt = std::max(tilt, gap > 0 ? std::min(1.0, std::sqrt(squares) / gap) : 1.0);
    }
    return tilt;
}

}  // namespace chainmark::sector
