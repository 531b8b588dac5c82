#include "chainmark/reference/quantity.hpp"

#include <algorithm>
#include <array>

#include "chainmark/base/error.hpp"

namespace chainmark {
namespace {

const std::array<QuantitySpec, 13> table = {{
    {.id = QuantityId::ground_energy,
     .name = "ground_energy",
     .sentence = "lowest eigenvalue of H, field term included (a total)",
     .on_infinite = "ground_energy_per_site"},
    {.id = QuantityId::ground_energy_per_site,
     .name = "ground_energy_per_site",
     .sentence = "ground_energy divided by L",
     .where = Where::both},
    {.id = QuantityId::gap,
     .name = "gap",
     .sentence = "lowest level outside the ground space minus the lowest level",
     .where = Where::both},
    {.id = QuantityId::levels,
     .name = "levels",
     .sentence = "the `count` lowest levels of the full spectrum, every copy counted",
     .options = {OptionId::count}},
    {.id = QuantityId::spectrum, .name = "spectrum", .sentence = "all 2^L levels, ascending"},
    {.id = QuantityId::magnetization,
     .name = "magnetization",
     .sentence = "(1/L) sum_j <Sz_j>, averaged over the ground space",
     .where = Where::both},
    {.id = QuantityId::local_magnetization,
     .name = "local_magnetization",
     .sentence = "<S_j> along `axis` (default z) on every site, averaged over the ground space",
     .options = {OptionId::axis}},
    {.id = QuantityId::susceptibility,
     .name = "susceptibility",
     .sentence =
         "dm/dh' at h' = 0 of an added -h' sum_j Sz_j; on a finite chain that conserves Sz it "
         "is 0 between jumps and has the status `jump` at one",
     .where = Where::both},
    {.id = QuantityId::jump_fields,
     .name = "jump_fields",
     .sentence =
         "the h of a uniform -h sum_j Sz_j (the family's own h set to 0) at which the total Sz "
         "of the ground state changes, ascending, with the total Sz between them",
     .per_chain = true},
    {.id = QuantityId::spin_correlation,
     .name = "spin_correlation",
     .sentence =
         "<Sz_i Sz_j> for `pairs`, or for each `distance` r the mean over all i the boundary "
         "allows; `connected` subtracts <Sz_i><Sz_j>",
     .where = Where::both,
     .options = {OptionId::axes, OptionId::distance, OptionId::pairs, OptionId::connected}},
    {.id = QuantityId::mode_energies,
     .name = "mode_energies",
     .sentence =
         "single-particle energies of the fermions, signed and ascending; on a ring for the "
         "`parity` of the up count (default: the ground state's)",
     .options = {OptionId::parity}},
    {.id = QuantityId::fermi_momentum,
     .name = "fermi_momentum",
     .sentence =
         "k in [0, pi] at which the single-particle energy vanishes; undefined for a band that "
         "is full or empty",
     .where = Where::infinite},
    {.id = QuantityId::phase,
     .name = "phase",
     .sentence = "the phase's name: critical, saturated_up, saturated_down or saturation_point",
     .where = Where::infinite},
}};

}  // namespace

std::span<const QuantitySpec> quantities() {
    return table;
}

const QuantitySpec* find_quantity(std::string_view name) {
    const auto at = std::find_if(
        table.begin(), table.end(), [&](const QuantitySpec& spec) { return spec.name == name; });
    return at == table.end() ? nullptr : &*at;
}

const QuantitySpec& spec_of(QuantityId id) {
    const auto at = std::find_if(
        table.begin(), table.end(), [&](const QuantitySpec& spec) { return spec.id == id; });
    CHAINMARK_EXPECTS(at != table.end());
    return *at;
}

std::string to_string(OptionId option) {
    switch (option) {
        case OptionId::count:
            return "count";
        case OptionId::axis:
            return "axis";
        case OptionId::axes:
            return "axes";
        case OptionId::distance:
            return "distance";
        case OptionId::pairs:
            return "pairs";
        case OptionId::connected:
            return "connected";
        case OptionId::parity:
            return "parity";
    }
    return "";
}

std::string to_string(Axis axis) {
    switch (axis) {
        case Axis::x:
            return "x";
        case Axis::y:
            return "y";
        case Axis::z:
            return "z";
    }
    return "";
}

std::string to_string(Parity parity) {
    switch (parity) {
        case Parity::ground_state:
            return "ground_state";
        case Parity::even:
            return "even";
        case Parity::odd:
            return "odd";
    }
    return "";
}

std::string to_string(Where where) {
    switch (where) {
        case Where::finite:
            return "finite";
        case Where::infinite:
            return "infinite";
        case Where::both:
            return "both";
    }
    return "";
}

}  // namespace chainmark
