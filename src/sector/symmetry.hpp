#pragma once

#include <string>
#include <vector>

#include "chainmark/reference/problem.hpp"
#include "chainmark/reference/value.hpp"
#include "chainmark/sector/orbit_basis.hpp"

namespace chainmark::sector {

/// The symmetries used by the route, as found in a term list. Where one is absent, the string says
/// which term breaks it or why it is not looked for.
struct Symmetries {
    Conserved conserved = Conserved::nothing;
    int step = 0;  ///< translation by so many sites around the ring; 0: none
    /// The translation carries the sign of an antiperiodic boundary.
    bool wrap_sign = false;
    /// Not 0: the list becomes real space's translation invariant one by S+_j -> exp(i gauge j)
    /// S+_j, which spreads a twist evenly over the ring (gauge = twist / L).
    double gauge = 0.0;
    bool reflection = false;  ///< j to L-1-j
    bool inversion = false;   ///< m to -m
    bool rotation = false;    ///< every rotation of all spins together: total spin is conserved
    bool real = false;        ///< H is a real matrix
    std::string why_no_sz = {};
    std::string why_no_parity = {};
    std::string why_no_translation = {};
    std::string why_no_reflection = {};
    std::string why_no_inversion = {};
    std::string why_no_rotation = {};
    std::string why_not_real = {};
};

/// Looks at every string of the list. A finite chain.
Symmetries find_symmetries(const Chain& chain, const TermList& terms);

/// The strings of H as the symmetries mean them: with the gauge applied, and with equal
/// coefficients where the translation makes them equal up to rounding.
std::vector<Term> symmetric_terms(const Chain& chain,
                                  const std::vector<Term>& terms,
                                  const Symmetries& symmetries);

/// A sector of the chain, and the sector whose levels it shares.
struct Sector {
    SectorLabel label;
    Group group;              ///< the maps that label the sector
    std::size_t twin = 0;     ///< index of the sector that is solved for it; its own if none
    bool inverted = false;    ///< its states are those of the twin with all spins inverted,
    bool conjugated = false;  ///< and complex conjugated,
    bool reflected = false;   ///< and reflected
};

/// Every sector of a finite chain, ascending in the label. By spin inversion Sz and -Sz share their
/// levels; by complex conjugation of a real H, or by reflection, so do k and -k.
std::vector<Sector> sectors_of(const Chain& chain, const Symmetries& symmetries);

/// The momentum number -n - w of -k, brought to the same range as n.
int mirrored_momentum(int momentum, int wrapped_up, int translations);

/// The up count, or its parity, of the inverted configurations.
int inverted_value(Conserved conserved, int value, const Packing& packing);

/// The quantum numbers that a sector fixes.
Labels labels_of(const Chain& chain, const Symmetries& symmetries, const Sector& sector);

/// "Sz = 1, momentum 3, reflection +1".
std::string to_string(const Labels& labels);

/// Several lines for people: every symmetry, present or absent and why, and the largest sector.
std::string describe_symmetries(const Problem& problem);

}  // namespace chainmark::sector
