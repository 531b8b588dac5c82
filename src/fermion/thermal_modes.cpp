#include "chainmark/fermion/thermal_modes.hpp"

#include <cmath>

namespace chainmark::fermion {
namespace {

ThermalClass thermal_class(const Solution& solution, UpCount up_count, double field, bool with_sz) {
    const ModeSet& modes = solution.of(up_count);
    const Real outer = solution.outer_field(field);
    ThermalClass own{.parity = parity_of(up_count),
                     .vacuum_parity = modes.vacuum,
                     .energy = std::vector<Real>(modes.energy.size()),
                     .field = {},
                     .frame = modes.frame};
    CompensatedSum energy;
    energy.add(solution.form.constant_of(up_count));
    for (std::size_t position = 0; position < modes.energy.size(); ++position) {
        const Real mode = modes.energy[position] - outer;
        own.energy[static_cast<std::size_t>(modes.label[position])] = mode;
        energy.add(-std::abs(mode) / 2);
        own.vacuum_parity *= mode < 0 ? -1 : 1;
    }
    own.vacuum_energy = energy.value();
    if (with_sz && !solution.conserving) {
        own.field = modes.frame->field_form();
    } else {
        // Where N is conserved every mode carries one up spin.
        own.field.diagonal.assign(modes.energy.size(), solution.conserving ? 1.0L : 0.0L);
    }
    return own;
}

}  // namespace

ThermalModes thermal_modes(const Solution& solution, double field, bool with_sz) {
    ThermalModes modes{.sites = solution.form.length(),
                       .classes = {thermal_class(solution, UpCount::even, field, with_sz),
                                   thermal_class(solution, UpCount::odd, field, with_sz)},
                       .shared = !solution.form.parity_matters(),
                       .sz_conserved = solution.conserving};
    Levels levels(solution, field);
    const std::optional<State> lowest = levels.next();
    const std::optional<State> second = levels.next();
    modes.level_error = levels.error();
    modes.gap = second->energy - lowest->energy;
    return modes;
}

}  // namespace chainmark::fermion
