#include "chainmark/reference/quantity.hpp"

#include <algorithm>
#include <array>

#include "chainmark/base/error.hpp"

namespace chainmark {
namespace {

const std::array<QuantitySpec, 24> table = {{
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
     .sentence = "lowest level outside the ground space minus the lowest level; with `sector`, the "
                 "lowest level of that sector minus the ground energy",
     .where = Where::both,
     .options = {OptionId::sector}},
    {.id = QuantityId::levels,
     .name = "levels",
     .sentence = "the `count` lowest levels of the full spectrum, or of one `sector`, every copy "
                 "counted",
     .options = {OptionId::count, OptionId::sector}},
    {.id = QuantityId::spectrum, .name = "spectrum", .sentence = "all (2S+1)^L levels, ascending"},
    {.id = QuantityId::magnetization,
     .name = "magnetization",
     .sentence = "(1/L) sum_j <Sz_j>, averaged over the ground space, or thermal",
     .where = Where::both,
     .when = When::either},
    {.id = QuantityId::local_magnetization,
     .name = "local_magnetization",
     .sentence = "<S_j> along `axis` (default z) on every site, averaged over the ground space",
     .options = {OptionId::axis}},
    {.id = QuantityId::susceptibility,
     .name = "susceptibility",
     .sentence =
         "dm/dh' at h' = 0 of an added -h' sum_j Sz_j; in the ground state of a finite chain that "
         "conserves Sz it is 0 between jumps and has the status `jump` at one; with a temperature "
         "it is the isothermal one",
     .where = Where::both,
     .when = When::either},
    {.id = QuantityId::jump_fields,
     .name = "jump_fields",
     .sentence =
         "the h of a uniform -h sum_j Sz_j (the family's own h set to 0) at which the total Sz "
         "of the ground state changes, ascending, with the total Sz between them",
     .per_chain = true},
    {.id = QuantityId::spin_correlation,
     .name = "spin_correlation",
     .sentence =
         "<A_i B_j> with the operators of `axes` (default zz) for `pairs`, or for each `distance` "
         "r "
         "the mean over all i the boundary allows; `connected` subtracts <A_i><B_j>; averaged over "
         "the ground space, or thermal; complex for +-",
     .where = Where::both,
     .when = When::either,
     .options = {OptionId::axes, OptionId::distance, OptionId::pairs, OptionId::connected}},
    {.id = QuantityId::structure_factor,
     .name = "structure_factor",
     .sentence = "S(q) = (1/L) sum_ij exp(-i q (i-j)) <A_i B_j> with the operators of `axes` "
                 "(default zz), an array over q = 2 pi n/L, n = 0 ... L-1; real; `connected` "
                 "subtracts <A_i><B_j>",
     .options = {OptionId::axes, OptionId::connected}},
    {.id = QuantityId::string_order,
     .name = "string_order",
     .sentence = "<Sa_i [prod_{i<k<j} U_k] Sa_j> along `axis` a (default z) for `pairs` i < j, or "
                 "for each `distance` the mean over all i; U = exp(i pi Sa) for integer S, 2 Sa "
                 "for S = 1/2, no sign added",
     .where = Where::both,
     .options = {OptionId::axis, OptionId::distance, OptionId::pairs}},
    {.id = QuantityId::entanglement_entropy,
     .name = "entanglement_entropy",
     .sentence = "entropy of the sites of `block` in the ground state, or in the lowest state of a "
                 "`sector`: `order` 1 -Tr rho ln rho, n >= 2 ln(Tr rho^n)/(1-n); in nats, or in "
                 "bits with `log` = 2",
     .where = Where::both,
     .options = {OptionId::block, OptionId::order, OptionId::log, OptionId::sector}},
    {.id = QuantityId::energy,
     .name = "energy",
     .sentence = "E = Tr(H exp(-H/T))/Z, field term included (a total)",
     .when = When::thermal,
     .on_infinite = "energy_per_site"},
    {.id = QuantityId::energy_per_site,
     .name = "energy_per_site",
     .sentence = "energy divided by L",
     .where = Where::both,
     .when = When::thermal},
    {.id = QuantityId::free_energy,
     .name = "free_energy",
     .sentence = "F = -T ln Z, Z = Tr exp(-H/T) (a total)",
     .when = When::thermal,
     .on_infinite = "free_energy_per_site"},
    {.id = QuantityId::free_energy_per_site,
     .name = "free_energy_per_site",
     .sentence = "free_energy divided by L",
     .where = Where::both,
     .when = When::thermal},
    {.id = QuantityId::entropy,
     .name = "entropy",
     .sentence = "thermal entropy (E - F)/T in nats (a total)",
     .when = When::thermal,
     .on_infinite = "entropy_per_site"},
    {.id = QuantityId::entropy_per_site,
     .name = "entropy_per_site",
     .sentence = "entropy divided by L",
     .where = Where::both,
     .when = When::thermal},
    {.id = QuantityId::specific_heat,
     .name = "specific_heat",
     .sentence = "dE/dT = (<H^2> - <H>^2)/T^2 at fixed field (a total)",
     .when = When::thermal,
     .on_infinite = "specific_heat_per_site"},
    {.id = QuantityId::specific_heat_per_site,
     .name = "specific_heat_per_site",
     .sentence = "specific_heat divided by L",
     .where = Where::both,
     .when = When::thermal},
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
        case OptionId::sector:
            return "sector";
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
        case OptionId::block:
            return "block";
        case OptionId::order:
            return "order";
        case OptionId::log:
            return "log";
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

std::string to_string(Axes axes) {
    switch (axes) {
        case Axes::xx:
            return "xx";
        case Axes::yy:
            return "yy";
        case Axes::zz:
            return "zz";
        case Axes::plus_minus:
            return "+-";
        case Axes::dot:
            return "dot";
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

std::string to_string(When when) {
    switch (when) {
        case When::ground_state:
            return "ground_state";
        case When::thermal:
            return "thermal";
        case When::either:
            return "either";
    }
    return "";
}

}  // namespace chainmark
