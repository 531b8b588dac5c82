#include "chainmark/dense/ground_answers.hpp"

#include <algorithm>
#include <cmath>

#include "chainmark/base/numerics.hpp"
#include "chainmark/dense/entropy.hpp"
#include "chainmark/dense/jumps.hpp"
#include "chainmark/dense/response.hpp"

namespace chainmark::dense {

template <class Scalar>
GroundAnswers<Scalar>::GroundAnswers(const Problem& problem, const FullSpectrum<Scalar>& spectrum)
    : problem_(problem),
      spectrum_(spectrum),
      ground_(ground_of(spectrum.levels(problem.field), ground_window(problem))),
      averages_(ground_, spectrum) {}

template <class Scalar>
Answer GroundAnswers<Scalar>::operator()(const Query& query) const {
    switch (query.spec->id) {
        case QuantityId::ground_energy:
            return energy(1.0);
        case QuantityId::ground_energy_per_site:
            return energy(1.0 / spectrum_.length());
        case QuantityId::levels:
            return levels(static_cast<std::size_t>(query.options.count));
        case QuantityId::spectrum:
            return levels(ground_.levels.size());
        case QuantityId::jump_fields:
            return jump_fields();
        default:
            break;
    }
    if (ground_.straddles) {
        return Undecided{"a level's error bound reaches over the edge of the ground space"};
    }
    return of_ground_space(query);
}

template <class Scalar>
Answer GroundAnswers<Scalar>::of_ground_space(const Query& query) const {
    switch (query.spec->id) {
        case QuantityId::gap:
            return gap();
        case QuantityId::susceptibility:
            return susceptibility();
        case QuantityId::magnetization: {
            Answer answer = averages({mean_spin(Axis::z, problem_.chain)});
            Value& value = std::get<Reference>(answer).value;
            value.kind = Kind::number;
            value.shape.clear();
            return answer;
        }
        case QuantityId::local_magnetization:
            return local_magnetization(query.options.axis);
        case QuantityId::entanglement_entropy:
            return entropy(query.options);
        case QuantityId::string_order:
            return averages(strings(problem_.chain, query.options));
        case QuantityId::structure_factor:
            return structure_factor(query.options);
        default:
            return spin_correlation(query.options);
    }
}

template <class Scalar>
Reference GroundAnswers<Scalar>::reference(Value value, std::vector<double> bound) const {
    Reference result;
    result.value = std::move(value);
    result.bound = std::move(bound);
    result.basis = Basis::residual;
    if (!ground_.straddles) {
        result.degeneracy = static_cast<std::int64_t>(ground_.degeneracy);
    }
    return result;
}

template <class Scalar>
Answer GroundAnswers<Scalar>::energy(double factor) const {
    const double value = lowest().energy * factor;
    return reference(Value::number(value), {lowest().bound * factor + epsilon * std::abs(value)});
}

template <class Scalar>
Answer GroundAnswers<Scalar>::levels(std::size_t count) const {
    const std::size_t shown = std::min(count, ground_.levels.size());
    std::vector<double> energies;
    std::vector<double> bounds;
    std::vector<Labels> labels;
    for (std::size_t i = 0; i < shown; ++i) {
        const Level& level = ground_.levels[i];
        energies.push_back(level.energy);
        bounds.push_back(level.bound);
        if (spectrum_.field_commutes()) {
            labels.push_back({.sz = spectrum_.sz(level.vector)});
        }
    }
    Reference result = reference(Value::array(energies), std::move(bounds));
    result.degeneracy.reset();
    result.complete = Completeness::proved;
    result.labels = std::move(labels);
    return result;
}

template <class Scalar>
Answer GroundAnswers<Scalar>::gap() const {
    if (!ground_.has_next()) {
        return reference(Value::status(Special::undefined), {0.0});
    }
    const double bound = lowest().bound + ground_.levels[ground_.degeneracy].bound;
    return reference(Value::number(ground_.gap()), {bound + epsilon * ground_.gap()});
}

template <class Scalar>
std::set<double> GroundAnswers<Scalar>::ground_sz() const {
    std::set<double> values;
    for (std::size_t i = 0; i < ground_.degeneracy; ++i) {
        values.insert(spectrum_.sz(ground_.levels[i].vector));
    }
    return values;
}

template <class Scalar>
Answer GroundAnswers<Scalar>::susceptibility() const {
    Reference exact = reference(Value::number(0.0), {0.0});
    exact.basis = Basis::exact;
    if (spectrum_.field_commutes()) {
        if (ground_sz().size() > 1) {
            exact.value = Value::status(Special::jump);
        }
        return exact;
    }
    const auto found = second_order(ground_, spectrum_);
    if (std::holds_alternative<Unclear>(found)) {
        return Undecided{"whether the field splits the ground space is within rounding"};
    }
    if (std::holds_alternative<Splits>(found)) {
        exact.value = Value::status(Special::jump);
        return exact;
    }
    const auto& estimate = std::get<Estimate>(found);
    const double value = estimate.value / spectrum_.length();
    return reference(Value::number(value),
                     {estimate.bound / spectrum_.length() + epsilon * std::abs(value)});
}

template <class Scalar>
Answer GroundAnswers<Scalar>::jump_fields() const {
    std::vector<double> fields;
    std::vector<double> bounds;
    std::vector<double> steps = {-spectrum_.length() * problem_.chain.spin()};
    const double window = ground_window({problem_.chain, problem_.terms, 0.0});
    for (const Jump& jump : find_jumps(spectrum_.lowest_by_sz(), window)) {
        fields.push_back(jump.field - problem_.field);
        bounds.push_back(jump.bound + epsilon * std::abs(problem_.field));
        steps.push_back(jump.above);
    }
    Reference result = reference(Value::array(fields), std::move(bounds));
    result.value.total_sz = std::move(steps);
    result.degeneracy.reset();
    return result;
}

template <class Scalar>
Answer GroundAnswers<Scalar>::local_magnetization(Axis axis) const {
    std::vector<std::vector<Product>> sums;
    for (int site = 0; site < spectrum_.length(); ++site) {
        sums.push_back({{1.0, {{site, spin_component(axis, spectrum_.two_s())}}}});
    }
    return averages(sums);
}

template <class Scalar>
Answer GroundAnswers<Scalar>::entropy(const Options& options) const {
    if (ground_.degeneracy > 1) {
        return Undecided{"the ground space is degenerate: the entropy depends on the state"};
    }
    // the exact state's element at level n is at most residual / (E_n - E_0)
    const double residual = spectrum_.residual(lowest().vector);
    const auto overlap = [&](const Eigen::VectorXcd& x) {
        const Eigen::VectorXcd elements = spectrum_.components(x);
        double sum = 0.0;
        for (std::size_t n = 1; n < ground_.levels.size(); ++n) {
            const double distance = ground_.levels[n].energy - lowest().energy;
            sum += std::norm(elements[ground_.levels[n].vector]) / (distance * distance);
        }
        return residual * std::sqrt(sum);
    };
    const Estimate found = entanglement_entropy(
        spectrum_.state(lowest().vector), problem_.chain, options, {averages_.tilt(), overlap});
    return reference(Value::number(found.value), {found.bound});
}

template <class Scalar>
Answer GroundAnswers<Scalar>::spin_correlation(const Options& options) const {
    std::vector<Average> found =
        measure_pairs(correlations(problem_.chain, options),
                      options.connected,
                      problem_.chain,
                      [&](const std::vector<Product>& products) { return measure(products); });
    const bool complex = options.axes == Axes::plus_minus;
    if (complex) {
        for (Average& average : found) {
            average.range.reset();
        }
    }
    Answer answer = array(found);
    std::get<Reference>(answer).value.complex = complex;
    return answer;
}

template <class Scalar>
Answer GroundAnswers<Scalar>::structure_factor(const Options& options) const {
    return array(
        measure_pairs(structure_factors(problem_.chain, options),
                      options.connected,
                      problem_.chain,
                      [&](const std::vector<Product>& products) { return measure(products); }));
}

template <class Scalar>
Average GroundAnswers<Scalar>::measure(const std::vector<Product>& products) const {
    return averages_.of(spectrum_.on_chain(products));
}

template <class Scalar>
Answer GroundAnswers<Scalar>::averages(const std::vector<std::vector<Product>>& sums) const {
    std::vector<Average> found;
    for (const std::vector<Product>& sum : sums) {
        found.push_back(measure(sum));
    }
    return array(found);
}

template <class Scalar>
Answer GroundAnswers<Scalar>::array(const std::vector<Average>& averages) const {
    Value value = Value::array(std::vector<double>(averages.size()));
    std::vector<double> bounds;
    Range range;
    for (std::size_t e = 0; e < averages.size(); ++e) {
        value.data[e] = averages[e].value;
        bounds.push_back(averages[e].bound);
        if (averages[e].range) {
            range.push_back(*averages[e].range);
        }
    }
    Reference result = reference(std::move(value), std::move(bounds));
    if (range.size() == averages.size()) {
        result.range = std::move(range);
    }
    return result;
}

template class GroundAnswers<double>;
template class GroundAnswers<std::complex<double>>;

}  // namespace chainmark::dense
