#pragma once

#include "chainmark/dense/full_spectrum.hpp"
#include "chainmark/dense/sectors.hpp"
#include "chainmark/reference/quantity.hpp"

/// Answers about a sector that the user asks for.
namespace chainmark::dense {

/// The `count` lowest levels; NotCovered where the sector has fewer.
Answer sector_levels(const SectorSpectrum& sector, const Options& options);

/// Its lowest level minus the ground energy.
Answer sector_gap(const SectorSpectrum& sector, const Level& ground);

/// Entanglement entropy of its lowest state; undecided where that is degenerate.
Answer sector_entropy(const SectorSpectrum& sector, const Problem& problem, const Options& options);

}  // namespace chainmark::dense
