#pragma once

#include <memory>
#include <optional>

#include "chainmark/reference/route.hpp"
#include "chainmark/sector/ground_averages.hpp"
#include "chainmark/sector/solution.hpp"
#include "chainmark/sector/thermal.hpp"

namespace chainmark::sector {

/// Answers the queries of a batch, and keeps what the next question can use: the solution, which
/// serves all fields where Sz is conserved, the ground states, and with a temperature the complete
/// spectrum with all averages that the batch asks for.
class Evaluator {
public:
    /// `most_amplitudes`: see GroundAverages.
    Evaluator(const Batch& batch,
              const Context& context,
              double most_amplitudes = GroundAverages::most_amplitudes);

    /// Throws std::runtime_error where memory or convergence fail, Interrupted on a stop request.
    Answer operator()(std::size_t problem, const Query& query);

private:
    Solution& solution_for(const Problem& problem);
    GroundAverages& averages_for(const Problem& problem, const GroundSpace& ground);
    const Thermal& thermal_for(const Problem& problem);

    Answer of_ground_space(const Problem& problem, const Query& query);

    const Batch& batch_;
    Context context_;
    double most_amplitudes_;
    double solved_field_ = 0.0;
    std::unique_ptr<Solution> solution_;
    std::unique_ptr<GroundAverages> averages_;
    std::unique_ptr<ThermalSpectrum> spectrum_;
    std::optional<std::pair<double, double>> weighed_;  ///< field and temperature of thermal_
    std::unique_ptr<Thermal> thermal_;
};

}  // namespace chainmark::sector
