#include "chainmark/sector/evaluator.hpp"

#include <algorithm>

#include "chainmark/base/error.hpp"
#include "chainmark/sector/ground_answers.hpp"
#include "chainmark/sector/level_answers.hpp"
#include "chainmark/sector/thermal_answers.hpp"

namespace chainmark::sector {
namespace {

bool asks_for(const Batch& batch, QuantityId id) {
    return std::any_of(batch.queries.begin(), batch.queries.end(), [id](const Query& query) {
        return query.spec->id == id;
    });
}

}  // namespace

Evaluator::Evaluator(const Batch& batch, const Context& context, double most_amplitudes)
    : batch_(batch), context_(context), most_amplitudes_(most_amplitudes) {}

Solution& Evaluator::solution_for(const Problem& problem) {
    if (!solution_ || (!solution_->field_outside() && solved_field_ != problem.field)) {
        thermal_.reset();
        spectrum_.reset();
        averages_.reset();
        // M = sum Sz is odd under inversion: its response needs blocks that M does not leave.
        const bool response = problem.temperature && !conserves_sz(*problem.terms) &&
                              asks_for(batch_, QuantityId::susceptibility);
        solution_ = std::make_unique<Solution>(problem, context_, !response);
        solved_field_ = problem.field;
    }
    return *solution_;
}

GroundAverages& Evaluator::averages_for(const Problem& problem, const GroundSpace& ground) {
    if (!averages_ || !averages_->serves(problem, ground)) {
        averages_.reset();
        averages_ = std::make_unique<GroundAverages>(
            problem, *solution_, ground, context_, most_amplitudes_);
    }
    return *averages_;
}

const Thermal& Evaluator::thermal_for(const Problem& problem) {
    Solution& solution = solution_for(problem);
    const bool sz = solution.field_outside();
    if (!spectrum_) {
        spectrum_ = std::make_unique<ThermalSpectrum>(
            solution,
            problem.chain,
            thermal_observables(problem.chain, batch_.queries, sz),
            !sz && asks_for(batch_, QuantityId::susceptibility));
        thermal_.reset();
    }
    const std::pair<double, double> point(problem.field, *problem.temperature);
    if (!thermal_ || weighed_ != point) {
        thermal_ = std::make_unique<Thermal>(*spectrum_, problem);
        weighed_ = point;
    }
    return *thermal_;
}

Answer Evaluator::operator()(std::size_t index, const Query& query) {
    poll(context_);
    const Problem& problem = batch_.problems[index];
    if (problem.temperature) {
        const Thermal& thermal = thermal_for(problem);
        return thermal_answer(problem, query, thermal, solution_->field_outside());
    }
    Solution& solution = solution_for(problem);
    switch (query.spec->id) {
        case QuantityId::ground_energy:
            return ground_energy_answer(problem, solution, 1.0);
        case QuantityId::ground_energy_per_site:
            return ground_energy_answer(problem, solution, 1.0 / problem.chain.length());
        case QuantityId::levels:
            return levels_answer(problem, solution, query.options);
        case QuantityId::spectrum:
            return spectrum_answer(problem, solution);
        case QuantityId::jump_fields:
            return jump_fields_answer(problem, solution);
        case QuantityId::gap:
            return gap_answer(problem, solution, query.options);
        case QuantityId::entanglement_entropy:
            return entropy_answer(problem, solution, query.options, context_);
        default:
            return of_ground_space(problem, query);
    }
}

Answer Evaluator::of_ground_space(const Problem& problem, const Query& query) {
    Solution& solution = *solution_;
    const GroundSpace ground = solution.ground_space(problem);
    if (ground.straddles) {
        return Undecided{"a level's error bound reaches over the edge of the ground space"};
    }
    if (query.spec->id == QuantityId::susceptibility) {
        return susceptibility_answer(problem, ground, solution, context_);
    }
    GroundAverages& averages = averages_for(problem, ground);
    switch (query.spec->id) {
        case QuantityId::magnetization:
            return magnetization_answer(ground, solution, problem.chain, averages);
        case QuantityId::local_magnetization:
            return local_magnetization_answer(ground, problem.chain, query.options.axis, averages);
        case QuantityId::string_order:
            return string_order_answer(ground, problem.chain, query.options, averages);
        default:
            CHAINMARK_EXPECTS(query.spec->id == QuantityId::spin_correlation ||
                              query.spec->id == QuantityId::structure_factor);
            return correlation_answer(ground, problem.chain, query, averages);
    }
}

}  // namespace chainmark::sector
