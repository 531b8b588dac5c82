#include "chainmark/dense/route.hpp"

#include <algorithm>
#include <cmath>
#include <set>

#include <fmt/format.h>

#include "chainmark/base/numerics.hpp"
#include "chainmark/dense/full_spectrum.hpp"
#include "chainmark/dense/ground.hpp"
#include "chainmark/dense/jumps.hpp"

namespace chainmark {
namespace {

using namespace dense;

constexpr int largest_length = 12;

template <class Scalar>
class Evaluator {
public:
    Evaluator(const Problem& problem, const FullSpectrum<Scalar>& spectrum)
        : problem_(problem),
          spectrum_(spectrum),
          ground_(ground_of(spectrum.levels(problem.field), ground_window(problem))) {}

    Answer operator()(const Query& query) const {
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
        switch (query.spec->id) {
            case QuantityId::gap:
                return gap();
            case QuantityId::susceptibility:
                return susceptibility();
            case QuantityId::magnetization:
                return expectation({mean_of(Axis::z)}, Value::number(0.0));
            case QuantityId::local_magnetization:
                return local_magnetization(query.options.axis);
            default:
                return spin_correlation(query.options);
        }
    }

private:
    Reference reference(Value value, std::vector<double> bound) const {
        Reference result;
        result.value = std::move(value);
        result.bound = std::move(bound);
        result.basis = Basis::residual;
        if (!ground_.straddles) {
            result.degeneracy = static_cast<std::int64_t>(ground_.degeneracy);
        }
        return result;
    }

    Answer energy(double factor) const {
        const Level& lowest = ground_.levels.front();
        const double value = lowest.energy * factor;
        return reference(Value::number(value), {lowest.bound * factor + epsilon * std::abs(value)});
    }

    Answer levels(std::size_t count) const {
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

    Answer gap() const {
        if (!ground_.has_next()) {
            return reference(Value::status(Special::undefined), {0.0});
        }
        const double bound =
            ground_.levels.front().bound + ground_.levels[ground_.degeneracy].bound;
        return reference(Value::number(ground_.gap()), {bound + epsilon * ground_.gap()});
    }

    std::set<double> ground_sz() const {
        std::set<double> values;
        for (std::size_t i = 0; i < ground_.degeneracy; ++i) {
            values.insert(spectrum_.sz(ground_.levels[i].vector));
        }
        return values;
    }

    Answer susceptibility() const {
        const bool jump = ground_sz().size() > 1;
        Reference result =
            reference(jump ? Value::status(Special::jump) : Value::number(0.0), {0.0});
        result.basis = Basis::exact;
        return result;
    }

    Answer jump_fields() const {
        std::vector<double> fields;
        std::vector<double> bounds;
        std::vector<double> steps = {-spectrum_.length() / 2.0};
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

    std::vector<Term> mean_of(Axis axis) const {
        std::vector<Term> terms;
        for (int site = 0; site < spectrum_.length(); ++site) {
            for (Term& term : site_operator(axis, site, 1.0 / spectrum_.length())) {
                terms.push_back(std::move(term));
            }
        }
        return terms;
    }

    Answer local_magnetization(Axis axis) const {
        std::vector<std::vector<Term>> operators;
        for (int site = 0; site < spectrum_.length(); ++site) {
            operators.push_back(site_operator(axis, site, 1.0));
        }
        return expectation(operators, Value::array(std::vector<double>(operators.size())));
    }

    /// For each entry of the answer the pairs of sites whose mean it is.
    std::vector<std::vector<std::pair<int, int>>> correlated_pairs(const Options& options) const {
        std::vector<std::vector<std::pair<int, int>>> entries;
        for (const auto& pair : options.pairs) {
            entries.push_back({pair});
        }
        const int length = spectrum_.length();
        for (const int distance : options.distance) {
            entries.emplace_back();
            for (int i = 0; i < length; ++i) {
                if (problem_.chain.is_ring() || i + distance < length) {
                    entries.back().emplace_back(i, (i + distance) % length);
                }
            }
        }
        return entries;
    }

    Answer spin_correlation(const Options& options) const {
        const auto entries = correlated_pairs(options);
        std::vector<std::vector<Term>> operators;
        for (const auto& pairs : entries) {
            operators.emplace_back();
            for (const auto& [i, j] : pairs) {
                operators.back().push_back(zz(i, j, 1.0 / static_cast<double>(pairs.size())));
            }
        }
        Answer answer = expectation(operators, Value::array(std::vector<double>(entries.size())));
        if (options.connected) {
            subtract_products(std::get<Reference>(answer), entries);
        }
        return answer;
    }

    void subtract_products(Reference& result,
                           const std::vector<std::vector<std::pair<int, int>>>& entries) const {
        const Reference local = std::get<Reference>(local_magnetization(Axis::z));
        for (std::size_t e = 0; e < entries.size(); ++e) {
            double product = 0.0;
            double error = 0.0;
            for (const auto& [i, j] : entries[e]) {
                const auto a = static_cast<std::size_t>(i);
                const auto b = static_cast<std::size_t>(j);
                product += local.value.real_at(a) * local.value.real_at(b);
                error += local.bound[a] + local.bound[b];
            }
            const double count = static_cast<double>(entries[e].size());
            result.value.data[e] -= product / count;
            result.bound[e] += error / count;
        }
        result.range.reset();
    }

    /// Ground-space averages of the operators, as entries of `shape`, with ranges.
    Answer expectation(const std::vector<std::vector<Term>>& operators, Value shape) const {
        const GroundAverages<Scalar> averages(ground_, spectrum_);
        Range range;
        std::vector<double> bounds;
        for (std::size_t e = 0; e < operators.size(); ++e) {
            const Average average = averages.of(operators[e]);
            shape.data[e] = average.value;
            bounds.push_back(average.bound);
            if (average.range) {
                range.push_back(*average.range);
            }
        }
        Reference result = reference(std::move(shape), std::move(bounds));
        if (range.size() == operators.size()) {
            result.range = std::move(range);
        }
        return result;
    }

    const Problem& problem_;
    const FullSpectrum<Scalar>& spectrum_;
    Ground ground_;
};

bool covers(QuantityId id) {
    switch (id) {
        case QuantityId::mode_energies:
        case QuantityId::fermi_momentum:
        case QuantityId::phase:
            return false;
        default:
            return true;
    }
}

bool needs_conserved_sz(QuantityId id) {
    return id == QuantityId::susceptibility || id == QuantityId::jump_fields;
}

Coverage plan(const Batch& batch) {
    const Problem& first = batch.problems.front();
    if (first.chain.is_infinite()) {
        return refuse_all(batch, "needs a finite chain");
    }
    const int length = first.chain.length();
    if (length > largest_length) {
        return refuse_all(batch, fmt::format("takes at most {} sites", largest_length));
    }
    const bool conserved = conserves_sz(*first.terms);
    Coverage coverage = refuse_all(batch, "");
    for (std::size_t q = 0; q < batch.queries.size(); ++q) {
        const QuantityId id = batch.queries[q].spec->id;
        if (!covers(id)) {
            coverage.refusal[q] = id == QuantityId::mode_energies
                                      ? "a quantity of free fermions"
                                      : "a quantity of the infinite chain";
        } else if (needs_conserved_sz(id) && !conserved) {
            coverage.refusal[q] = "needs a Hamiltonian that conserves Sz";
        }
    }
    const double n = std::pow(2.0, length);
    const bool real = is_real(*first.terms);
    const double solves = conserved ? 1.0 : static_cast<double>(batch.problems.size());
    coverage.seconds = solves * n * n * n * (real ? 1.3e-10 : 5e-10);
    coverage.bytes = n * n * 16 * (real ? 4 : 8);
    return coverage;
}

template <class Scalar>
Answers evaluate_as(const Batch& batch, const Coverage& coverage, const Context& context) {
    std::optional<FullSpectrum<Scalar>> spectrum;
    std::size_t solved_for = batch.problems.size();
    return answer_each(
        RouteId::dense, batch, coverage, [&](std::size_t p, const Query& query) -> Answer {
            const Problem& problem = batch.problems[p];
            if (!spectrum || (!spectrum->field_commutes() && solved_for != p)) {
                spectrum.emplace(problem, context);
                solved_for = p;
            }
            poll(context);
            return Evaluator<Scalar>(problem, *spectrum)(query);
        });
}

Answers evaluate(const Batch& batch, const Context& context) {
    const Coverage coverage = plan(batch);
    if (!coverage.covers_any()) {
        return answer_each(
            RouteId::dense, batch, coverage, [](std::size_t, const Query&) -> Answer {
                return {};
            });
    }
    return is_real(*batch.problems.front().terms)
               ? evaluate_as<double>(batch, coverage, context)
               : evaluate_as<std::complex<double>>(batch, coverage, context);
}

}  // namespace

const Route& dense_route() {
    static const Route route{
        RouteId::dense,
        "the full 2^L matrix by Kronecker products, fully diagonalized, L <= 12",
        plan,
        evaluate};
    return route;
}

}  // namespace chainmark
