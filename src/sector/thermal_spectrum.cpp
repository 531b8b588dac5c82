#include "chainmark/sector/thermal_spectrum.hpp"

#include <cmath>
#include <set>

#include "chainmark/base/numerics.hpp"

namespace chainmark::sector {
namespace {

using Complex = std::complex<double>;

/// (A + A^dagger)/2, or (A - A^dagger)/2i.
std::vector<Term> hermitian_part(const std::vector<Term>& terms, bool imaginary) {
    const Complex factor = imaginary ? Complex(0, -0.5) : Complex(0.5);
    StringSum part;
    for (const Term& term : terms) {
        part[term.string] += factor * term.coefficient;
        part[conjugate(term.string)] += std::conj(factor * term.coefficient);
    }
    return terms_of(part);
}

}  // namespace

ThermalSpectrum::ThermalSpectrum(Solution& solution,
                                 const Chain& chain,
                                 const std::vector<Observable>& observables,
                                 bool response)
    : solution_(solution),
      chain_(chain),
      symmetry_(chain, solution.symmetries(), false),
      rounding_(epsilon * solution.hamiltonian().packed.row_sum()) {
    std::set<OperatorString> needed;
    for (const Observable& observable : observables) {
        for (const auto& [string, coefficient] : observable.strings) {
            const StringSymmetry::Class of = symmetry_.classify(string);
            if (!string.empty() && !of.vanishes) {
                needed.insert(of.representative);
            }
        }
    }
    representatives_.assign(needed.begin(), needed.end());
    std::map<std::tuple<std::size_t, int, bool>, std::size_t> place;
    for (std::size_t i = 0; i < solution.sectors().size(); ++i) {
        const Sector& sector = solution.sectors()[i];
        if (solution.block_of(i).dim() == 0) {
            continue;
        }
        // An operator averaged over reflections, and over conjugation where H is real, has the same
        // averages in k and -k.
        const auto [at, fresh] = place.emplace(
            std::tuple(sector.twin, sector.label.value, sector.inverted), families_.size());
        if (!fresh) {
            families_[at->second].copies += 1;
            continue;
        }
        const double sz = solution.field_outside() ? solution.sz_of_sector(i) : 0.0;
        families_.push_back({sz, 1.0, sector.twin, {}});
        family_sector_.push_back(i);
        blocks_[sector.twin];
    }
    solution.for_each_solved_block(
        [&](std::size_t twin, const Block& block, const Context& context) {
            take_levels(twin, block);
            take_averages(twin, context);
            if (response) {
                take_response(twin, block, context);
            }
        });
}

// Each block writes to its own entries, so the visits need no lock.

void ThermalSpectrum::take_levels(std::size_t twin, const Block& block) {
    BlockLevels& levels = blocks_.at(twin);
    const auto count = static_cast<Eigen::Index>(block.known());
    levels.energies.resize(count);
    levels.bounds.resize(count);
    double squares = 0.0;
    for (Eigen::Index n = 0; n < count; ++n) {
        const auto level = static_cast<std::size_t>(n);
        levels.energies[n] = block.energy(level);
        levels.bounds[n] = block.bound(level);
        squares += std::pow(block.residual(level), 2);
    }
    levels.residual = std::sqrt(squares);
}

void ThermalSpectrum::take_averages(std::size_t twin, const Context& context) {
    for (std::size_t f = 0; f < families_.size(); ++f) {
        if (families_[f].twin != twin) {
            continue;
        }
        for (const OperatorString& string : representatives_) {
            poll(context);
            const std::vector<Term> mean = symmetry_.averaged(string);
            StringValues& values = families_[f].averages[string];
            values.real =
                solution_.expectations(family_sector_[f], hermitian_part(mean, false), context);
            if (!solution_.symmetries().real) {
                values.imaginary =
                    solution_.expectations(family_sector_[f], hermitian_part(mean, true), context);
            }
        }
    }
}

void ThermalSpectrum::take_response(std::size_t twin, const Block& block, const Context& context) {
    std::vector<Term> m;
    for (int site = 0; site < chain_.length(); ++site) {
        m.push_back({{{site, SiteOperator::z}}, 1.0});
    }
    BlockLevels& levels = blocks_.at(twin);
    const Eigen::MatrixXd squared = block.squared_elements(m, context);
    BlockResponse& response = levels.response;
    response.diagonal = block.expectations(m, context);
    const Eigen::Index count = levels.energies.size();
    response.far = Eigen::VectorXd::Zero(count);
    response.far_sizes = Eigen::VectorXd::Zero(count);
    response.squares = squared.colwise().sum();
    // Closer than this, differences of weights over differences of energies would cancel.
    const double width = levels.energies[count - 1] - levels.energies[0];
    const double close = 1e-3 * width + 1e-300;
    for (Eigen::Index m_level = 0; m_level < count; ++m_level) {
        for (Eigen::Index n = 0; n < m_level; ++n) {
            const double distance = levels.energies[m_level] - levels.energies[n];
            const double strength = squared(n, m_level);
            if (distance < close) {
                response.near.push_back(
                    {static_cast<std::int32_t>(n), static_cast<std::int32_t>(m_level), strength});
                continue;
            }
            const double share = strength / distance;
            response.far[n] += share;
            response.far[m_level] -= share;
            response.far_sizes[n] += share;
            response.far_sizes[m_level] += share;
        }
    }
}

}  // namespace chainmark::sector
