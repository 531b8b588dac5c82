#pragma once

#include <complex>
#include <optional>
#include <span>
#include <string>
#include <string_view>
#include <vector>

#include "chainmark/base/error.hpp"
#include "chainmark/operators/chain.hpp"
#include "chainmark/operators/term_collector.hpp"

/// From families and written terms to a canonical term list on a given chain.
namespace chainmark {

/// What happens where a short ring brings two placements of one term onto the same set of sites.
enum class Coincident {
    refuse,  ///< the default: the meaning differs from author to author
    add,     ///< both placements count
    once,    ///< each set of sites counts once
};

/// A term with numbers filled in: sum over placements of coupling * product of site operators.
struct PlacedTerm {
    std::vector<SiteMatrix> factors;  ///< leftmost first
    std::vector<int> offsets;         ///< one per factor, from the placement's first site
    std::vector<std::complex<double>> coupling;  ///< one for all placements, or one per placement
    bool fixed = false;                          ///< a single placement: `offsets` are the sites
    bool add_conjugate = false;
    Place where = {};  ///< for messages
};

/// A parameter of a family.
struct FamilyParameter {
    std::string name;
    std::string sentence;
};

/// A named Hamiltonian, sum over bonds j between sites j and j+1 unless its formula says otherwise,
/// without its field.
struct Family {
    std::string name;
    std::string formula;  ///< as text, for people
    std::string remark;   ///< one sentence: what it is known for, where its critical point lies
    std::vector<FamilyParameter> parameters;  ///< those without a default: every one is required
    /// The terms for the given parameter values (in the order of `parameters`) on `chain`, which
    /// `family_obstacle` has nothing against.
    std::vector<PlacedTerm> (*terms)(std::span<const double> values, const Chain& chain);
    int cell = 1;                        ///< sites after which the couplings repeat
    int smallest_ring = 3;               ///< sites below which a ring's bonds coincide
    std::optional<int> two_s = {};       ///< the only 2S it is defined for; nothing: every spin
    bool periodic_only = false;          ///< defined on the ring without twist alone
    std::optional<int> most_sites = {};  ///< where the number of terms grows faster than the chain
};

/// Every family, in the order in which they are shown. All take the field h besides:
/// -h sum_j Sz_j, 0 by default.
std::span<const Family> families();

/// nullptr for an unknown name.
const Family* find_family(std::string_view name);

/// What the family needs of the chain beside its parameters: "spin 1", "spin 1, a periodic ring";
/// empty where it takes every chain.
std::string family_needs(const Family& family);

/// Why the family does not exist on `chain` (`bad_chain`, no place); nothing where it does.
std::optional<Error> family_obstacle(const Family& family, const Chain& chain);

/// The family's terms for the parameter values; fails with `family_obstacle`.
Result<std::vector<PlacedTerm>> family_terms(const Family& family,
                                             std::span<const double> values,
                                             const Chain& chain);

/// Number of placements of a term on `chain`: L on a ring, L - range on an open chain, `cell` on
/// the infinite chain, 1 for a fixed term.
int placement_count(const PlacedTerm& term, const Chain& chain, int cell);

/// The canonical list of all `terms`. Fails (`bad_chain`) where the chain is too short for a term
/// or placements coincide and `coincident` refuses, where there are more than 5e7 strings to add
/// up, and with `not_hermitian` where the sum is not Hermitian.
Result<TermList> build_terms(const Chain& chain,
                             std::span<const PlacedTerm> terms,
                             Coincident coincident,
                             int cell);

}  // namespace chainmark
