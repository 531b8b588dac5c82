#pragma once

#include <complex>
#include <vector>

#include "chainmark/operators/term_list.hpp"
#include "chainmark/reference/quantity.hpp"

/// Strings of spin operators as products of Majorana operators.
///
/// S+_j = c+_j K_j, K_j = prod_{l<j} (1 - 2 n_l), Sz = n - 1/2 (P. Jordan, E. Wigner, Z. Phys. 47,
/// 631 (1928)); g_{2j} = c_j + c+_j, g_{2j+1} = i (c_j - c+_j), so that {g_a, g_b} = 2 delta_ab
/// and, in Pauli matrices,
///   sx_j = K_j g_{2j},   sy_j = K_j g_{2j+1},   sz_j = -i g_{2j} g_{2j+1},
///   1 - 2 n_j = i g_{2j} g_{2j+1},   P = (-1)^N = prod_j (i g_{2j} g_{2j+1}).
namespace chainmark::fermion {

struct PauliFactor {
    int site = 0;
    Axis axis = Axis::z;
};

/// A product of Pauli matrices, ascending in the site, at most one factor per site.
using PauliString = std::vector<PauliFactor>;

/// i^quarter_turns g_a g_b ... with ascending indices a < b < ...
struct MajoranaString {
    int quarter_turns = 0;  ///< 0 ... 3
    std::vector<int> indices;

    std::complex<double> phase() const;
};

/// The product of Pauli matrices; O(number of sites up to the last sx or sy, from the first factor
/// or, for an odd number of sx and sy, from site 0).
MajoranaString majorana_string(const PauliString& string);

/// The same times the parity P of `sites` sites: of degree 2 sites - d where the string alone has
/// degree d. In a class of P = p the string is p times this one.
MajoranaString majorana_string_times_parity(const PauliString& string, int sites);

struct PauliTerm {
    std::complex<double> coefficient;
    PauliString string;
};

/// A string of Sz, S+ and S- (S = 1/2) as a sum of Pauli strings, 2^(number of S+ and S-) of them:
/// Sz = sz/2, S+- = (sx +- i sy)/2.
std::vector<PauliTerm> pauli_terms(const OperatorString& string);

}  // namespace chainmark::fermion
