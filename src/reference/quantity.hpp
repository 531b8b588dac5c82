#pragma once

#include <span>
#include <string>
#include <string_view>
#include <utility>
#include <vector>

#include "chainmark/reference/value.hpp"

namespace chainmark {

enum class QuantityId {
    ground_energy,
    ground_energy_per_site,
    gap,
    levels,
    spectrum,
    magnetization,
    local_magnetization,
    susceptibility,
    jump_fields,
    spin_correlation,
    structure_factor,
    string_order,
    entanglement_entropy,
    energy,
    energy_per_site,
    free_energy,
    free_energy_per_site,
    entropy,
    entropy_per_site,
    specific_heat,
    specific_heat_per_site,
    mode_energies,
    fermi_momentum,
    phase,
};

/// What a quantity may be asked with, as it stands in a [[quantity]] table.
enum class OptionId {
    count,
    sector,
    axis,
    axes,
    distance,
    pairs,
    connected,
    block,
    order,
    log,
    parity,
};

/// Where a quantity has a meaning.
enum class Where { finite, infinite, both };

/// Whether a quantity belongs to the ground state (no temperature), to T > 0, or has a meaning in
/// both: then it is an average over the ground space without a temperature and a thermal one with.
enum class When { ground_state, thermal, either };

/// One row of the table of quantities.
struct QuantitySpec {
    QuantityId id;
    std::string name;
    std::string sentence;  ///< the definition, for `show quantities`
    Where where = Where::finite;
    When when = When::ground_state;
    std::vector<OptionId> options = {};
    bool per_chain =
        false;  ///< one answer for all fields of a chain (the family's own h is set to 0)
    std::string on_infinite = {};  ///< the quantity to ask for instead at sites = "infinite"
};

/// Every quantity, in the order in which they are shown.
std::span<const QuantitySpec> quantities();

/// nullptr for an unknown name.
const QuantitySpec* find_quantity(std::string_view name);
const QuantitySpec& spec_of(QuantityId id);

enum class Axis { x, y, z };

/// The operators of a two-site average <A_i B_j>: SxSx, SySy, SzSz, S+_i S-_j, S_i.S_j.
enum class Axes { xx, yy, zz, plus_minus, dot };

/// Which of the two classes of a ring's up count (and with it of its fermions).
enum class Parity { ground_state, even, odd };

/// The words of the case format: "count", "axes", ...; "finite", "infinite", "both";
/// "ground_state", "thermal", "either"; "x", "y", "z"; "xx", "yy", "zz", "+-", "dot"; "even",
/// "odd", "ground_state".
std::string to_string(OptionId option);
std::string to_string(Where where);
std::string to_string(When when);
std::string to_string(Axis axis);
std::string to_string(Axes axes);
std::string to_string(Parity parity);

/// The options of one query. Those that the quantity does not take keep their defaults.
///
/// Sites of `pairs` and `block` are those of the chain, 0 ... L-1. A `distance` r is the mean over
/// the pairs (i, i + r) for all L sites i of a ring, or for i = 0 ... L-1-r with free ends; on a
/// ring operators with an index past L-1 are brought back by Chain's rule (the factor
/// exp(-+i twist) of S+ and S-), so that every term of the mean is a translate of the first.
///
/// Answers with axes +- are complex (Value::complex) for spin_correlation, on every chain, and have
/// no range. S(q) is real for all axes, since <A_i B_j> is a Hermitian matrix.
struct Options {
    int count = 1;  ///< levels: how many

    /// The space of all states with these quantum numbers, at least one. levels: its levels alone
    /// (a route has no answer for more than there are). gap: its lowest level minus the ground
    /// energy. entanglement_entropy: its lowest state's, undecided where that is degenerate.
    std::optional<Labels> sector = {};

    Axis axis = Axis::z;             ///< local_magnetization, string_order
    Axes axes = Axes::zz;            ///< spin_correlation, structure_factor
    std::vector<int> distance = {};  ///< spin_correlation, string_order: an array over these ...
    std::vector<std::pair<int, int>> pairs = {};  ///< ... or over these (i, j); string_order: i < j

    /// subtract <A_i><B_j>; for `dot` the scalar product <S_i>.<S_j>
    bool connected = false;

    std::vector<int> block = {};  ///< entanglement_entropy: the sites, ascending, at most L-1
    int order = 1;                ///< entanglement_entropy: 1 von Neumann, n >= 2 Renyi
    bool log2 = false;            ///< entanglement_entropy: in bits, not in nats
    Parity parity = Parity::ground_state;  ///< mode_energies

    bool operator==(const Options&) const = default;
};

struct Query {
    const QuantitySpec* spec = nullptr;
    Options options;
    std::string label;
};

}  // namespace chainmark
