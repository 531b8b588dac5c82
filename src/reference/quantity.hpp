#pragma once

#include <span>
#include <string>
#include <string_view>
#include <utility>
#include <vector>

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
    mode_energies,
    fermi_momentum,
    phase,
};

/// What a quantity may be asked with, as it stands in a [[quantity]] table.
enum class OptionId { count, axis, axes, distance, pairs, connected, parity };

/// Where a quantity has a meaning.
enum class Where { finite, infinite, both };

/// One row of the table of quantities.
struct QuantitySpec {
    QuantityId id;
    std::string name;
    std::string sentence;  ///< the definition, for `show quantities`
    Where where = Where::finite;
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

/// Which of the two classes of a ring's up count (and with it of its fermions).
enum class Parity { ground_state, even, odd };

/// The words of the case format: "count", "axes", ...; "finite", "infinite", "both"; "x", "y", "z";
/// "even", "odd", "ground_state".
std::string to_string(OptionId option);
std::string to_string(Where where);
std::string to_string(Axis axis);
std::string to_string(Parity parity);

/// The options of one query. Those that the quantity does not take keep their defaults.
struct Options {
    int count = 1;                                ///< levels: how many
    Axis axis = Axis::z;                          ///< local_magnetization
    std::vector<int> distance = {};               ///< spin_correlation: an array over these ...
    std::vector<std::pair<int, int>> pairs = {};  ///< ... or over these pairs of sites
    bool connected = false;                       ///< subtract <A_i><B_j>
    Parity parity = Parity::ground_state;         ///< mode_energies
    bool operator==(const Options&) const = default;
};

struct Query {
    const QuantitySpec* spec = nullptr;
    Options options;
    std::string label;
};

}  // namespace chainmark
