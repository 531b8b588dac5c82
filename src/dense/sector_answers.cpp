#include "chainmark/dense/sector_answers.hpp"

#include <algorithm>
#include <cmath>

#include <fmt/format.h>

#include "chainmark/base/numerics.hpp"
#include "chainmark/dense/entropy.hpp"

namespace chainmark::dense {
namespace {

Reference reference(Value value, std::vector<double> bound) {
    Reference result;
    result.value = std::move(value);
    result.bound = std::move(bound);
    result.basis = Basis::residual;
    return result;
}

}  // namespace

Answer sector_levels(const SectorSpectrum& sector, const Options& options) {
    const Eigen::Index count = options.count;
    if (count > sector.energies.size()) {
        return NotCovered{fmt::format("the sector has {} levels", sector.energies.size())};
    }
    const Eigen::VectorXd energies = sector.energies.head(count);
    const Eigen::VectorXd bounds = sector.bounds.head(count);
    Reference result =
        reference(Value::array({energies.begin(), energies.end()}), {bounds.begin(), bounds.end()});
    result.complete = Completeness::proved;
    result.labels.assign(static_cast<std::size_t>(count), *options.sector);
    return result;
}

Answer sector_gap(const SectorSpectrum& sector, const Level& ground) {
    const double gap = sector.energies[0] - ground.energy;
    const double bound = sector.bounds[0] + ground.bound + epsilon * std::abs(gap);
    return reference(Value::number(gap), {bound});
}

Answer sector_entropy(const SectorSpectrum& sector,
                      const Problem& problem,
                      const Options& options) {
    double tilt = 16 * epsilon;
    if (sector.energies.size() > 1) {
        const double gap = sector.energies[1] - sector.energies[0];
        const double edge = gap - ground_window(problem);
        if (std::abs(edge) <= sector.bounds[0] + sector.bounds[1]) {
            return Undecided{"a level's error bound reaches over the edge of the lowest space"};
        }
        if (edge < 0) {
            return Undecided{
                "the sector's lowest level is degenerate: the entropy depends on the "
                "state"};
        }
        tilt += sector.residuals[0] / gap;
    }
    const auto overlap = [&](const Eigen::VectorXcd& x) {
        const Eigen::VectorXcd elements = sector.states.adjoint() * x;
        double sum = 0.0;
        for (Eigen::Index n = 1; n < elements.size(); ++n) {
            const double distance = sector.energies[n] - sector.energies[0];
            sum += std::norm(elements[n]) / (distance * distance);
        }
        return sector.residuals[0] * std::sqrt(sum);
    };
    const Estimate found = entanglement_entropy(
        sector.states.col(0), problem.chain, options, {std::min(1.0, tilt), overlap});
    return reference(Value::number(found.value), {found.bound});
}

}  // namespace chainmark::dense
