#include "chainmark/dense/route.hpp"

#include <algorithm>
#include <chrono>
#include <cmath>
#include <set>

#include <Eigen/Eigenvalues>
#include <fmt/format.h>

#include "chainmark/base/numerics.hpp"
#include "chainmark/dense/full_spectrum.hpp"

namespace chainmark {
namespace {

using dense::FullMatrix;
using dense::FullSpectrum;
using dense::Level;

constexpr int largest_length = 12;
constexpr std::size_t largest_range_space = 256;  ///< ground spaces above it get no range

std::vector<Term> site_operator(Axis axis, int site, double factor) {
    const std::complex<double> half_i(0.0, 0.5 * factor);
    switch (axis) {
        case Axis::z:
            return {{{{site, SiteOperator::z}}, factor}};
        case Axis::x:
            return {{{{site, SiteOperator::plus}}, factor / 2},
                    {{{site, SiteOperator::minus}}, factor / 2}};
        case Axis::y:  // Sy = (S+ - S-) / (2i)
            return {{{{site, SiteOperator::plus}}, -half_i},
                    {{{site, SiteOperator::minus}}, half_i}};
    }
    return {};
}

/// Sz_i Sz_j; for i = j it is 1/4.
Term zz(int i, int j, double factor) {
    if (i == j) {
        return {{}, factor / 4};
    }
    return {{{std::min(i, j), SiteOperator::z}, {std::max(i, j), SiteOperator::z}}, factor};
}

/// The ground space of a problem, and what lies above it.
struct Ground {
    std::vector<Level> levels;  ///< all, ascending
    std::size_t degeneracy = 0;
    bool straddles = false;  ///< a level's bound reaches over the edge of the window
    double bound = 0.0;      ///< largest bound in the ground space

    bool has_next() const { return degeneracy < levels.size(); }
    double gap() const { return levels[degeneracy].energy - levels.front().energy; }
};

Ground ground_of(std::vector<Level> levels, double window) {
    Ground ground{.levels = std::move(levels)};
    const Level& lowest = ground.levels.front();
    for (const Level& level : ground.levels) {
        const double distance = level.energy - lowest.energy - window;
        if (std::abs(distance) <= level.bound + lowest.bound && window > 0) {
            ground.straddles = true;
        }
        if (distance <= 0) {
            ++ground.degeneracy;
            ground.bound = std::max(ground.bound, level.bound);
        }
    }
    return ground;
}

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

    /// Tries every pair of total Sz: their energies cross at one field, and it is a jump if nothing
    /// lies lower there. Sz values that meet there within the ground window jump together.
    Answer jump_fields() const {
        const auto lowest = spectrum_.lowest_by_sz();
        const double window = ground_window({problem_.chain, problem_.terms, 0.0});
        const double rounding =
            64 * epsilon * (1 + largest_coupling(*problem_.terms)) * spectrum_.length();
        struct Jump {
            double field, bound, below, above;
        };
        std::vector<Jump> jumps;
        for (const auto& a : lowest) {
            for (const auto& b : lowest) {
                if (!(a.sz < b.sz)) {
                    continue;
                }
                const double field = (b.energy - a.energy) / (b.sz - a.sz);
                const double crossing = a.energy - field * a.sz;
                Jump jump{field, 0.0, a.sz, b.sz};
                bool lower = false;
                for (const auto& other : lowest) {
                    const double height = other.energy - field * other.sz - crossing;
                    lower = lower || height < -rounding;
                    if (height <= window) {
                        jump.below = std::min(jump.below, other.sz);
                        jump.above = std::max(jump.above, other.sz);
                    }
                }
                const bool widest = jump.below == a.sz && jump.above == b.sz;
                jump.bound = (a.bound + b.bound) / (b.sz - a.sz) +
                             2 * epsilon * (std::abs(field) + std::abs(problem_.field));
                if (!lower && widest) {
                    jumps.push_back(jump);
                }
            }
        }
        std::sort(jumps.begin(), jumps.end(), [](const Jump& a, const Jump& b) {
            return a.below < b.below;
        });
        std::vector<double> fields;
        std::vector<double> bounds;
        std::vector<double> steps = {lowest.front().sz};
        for (const Jump& jump : jumps) {
            fields.push_back(jump.field - problem_.field);
            bounds.push_back(jump.bound);
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
        const GroundStates states = ground_states();
        Range range;
        std::vector<double> bounds;
        for (std::size_t e = 0; e < operators.size(); ++e) {
            const Average average = average_of(operators[e], states);
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

    /// Vectors of the ground space, then of a few levels above it.
    struct GroundStates {
        std::vector<Eigen::Index> vectors;
        double residual = 0.0;     ///< of the ground space: ||H V - V E|| in the Frobenius norm
        std::vector<double> gaps;  ///< from the ground space to each of the levels above
        double rest = 0.0;         ///< gap to everything else; 0 if there is nothing else
    };

    GroundStates ground_states() const {
        constexpr std::size_t watched = 6;
        GroundStates states;
        double squares = 0.0;
        const std::size_t last = std::min(ground_.degeneracy + watched, ground_.levels.size());
        const double top = ground_.levels[ground_.degeneracy - 1].energy;
        for (std::size_t i = 0; i < last; ++i) {
            const Level& level = ground_.levels[i];
            states.vectors.push_back(level.vector);
            if (i < ground_.degeneracy) {
                squares += std::pow(spectrum_.residual(level.vector), 2);
            } else {
                states.gaps.push_back(level.energy - top);
            }
        }
        states.residual = std::sqrt(squares);
        if (last < ground_.levels.size()) {
            states.rest = ground_.levels[last].energy - top;
        }
        return states;
    }

    struct Average {
        double value = 0.0;
        double bound = 0.0;
        std::optional<std::pair<double, double>> range;
    };

    /// Tr(P A)/dim. The computed space is tilted from the exact one: towards a level at distance
    /// gap_n by at most residual/gap_n (Davis and Kahan 1970), which moves the average by at most
    /// 2 |<0|A|n>| times that, plus 2 ||A|| times the square of the whole tilt. A level that lies
    /// close but that A does not connect (the other parity) costs no digits.
    Average average_of(const std::vector<Term>& terms, const GroundStates& states) const {
        double norm = 0.0;
        for (const Term& term : terms) {
            norm += std::abs(term.coefficient) * std::pow(0.5, term.string.size());
        }
        Average average;
        if (ground_.degeneracy > largest_range_space) {
            for (std::size_t i = 0; i < ground_.degeneracy; ++i) {
                average.value += elements(terms, {states.vectors[i]})(0, 0).real() /
                                 static_cast<double>(ground_.degeneracy);
            }
            const double gap = states.gaps.empty() ? 0.0 : states.gaps.front();
            average.bound = norm * ((gap > 0 ? 2 * states.residual / gap : 0.0) + 32 * epsilon);
            return average;
        }
        const auto dim = static_cast<Eigen::Index>(ground_.degeneracy);
        const Eigen::MatrixXcd block = elements(terms, states.vectors);
        average.value = block.topLeftCorner(dim, dim).trace().real() / static_cast<double>(dim);
        double tilt = states.rest > 0 ? states.residual / states.rest : 0.0;
        average.bound = norm * (2 * tilt + 32 * epsilon);
        for (std::size_t n = 0; n < states.gaps.size(); ++n) {
            const double towards = states.residual / states.gaps[n];
            const auto column = dim + static_cast<Eigen::Index>(n);
            const double coupling = block.col(column).head(dim).norm() + 16 * epsilon * norm;
            average.bound += 2 * coupling * towards;
            tilt += towards;
        }
        average.bound += 2 * norm * tilt * tilt;
        const Eigen::SelfAdjointEigenSolver<Eigen::MatrixXcd> solver(
            Eigen::MatrixXcd(block.topLeftCorner(dim, dim)), Eigen::EigenvaluesOnly);
        average.range = {solver.eigenvalues().minCoeff(), solver.eigenvalues().maxCoeff()};
        return average;
    }

    /// <a|A|b> of the ground vectors; Sy is i times a real matrix in the real basis.
    Eigen::MatrixXcd elements(const std::vector<Term>& terms,
                              const std::vector<Eigen::Index>& vectors) const {
        if constexpr (std::is_same_v<Scalar, double>) {
            std::vector<Term> turned = terms;
            std::complex<double> phase = 1.0;
            if (!terms.empty() && terms.front().coefficient.real() == 0.0 &&
                terms.front().coefficient.imag() != 0.0) {
                phase = std::complex<double>(0.0, 1.0);
                for (Term& term : turned) {
                    term.coefficient /= phase;
                }
            }
            return phase * spectrum_.elements(
                               dense::full_matrix<double>(turned, spectrum_.length()), vectors);
        } else {
            return spectrum_.elements(dense::full_matrix<Scalar>(terms, spectrum_.length()),
                                      vectors);
        }
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
            coverage.refusal[q] = "a quantity of free fermions or of the infinite chain";
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
    return answer_each(batch, coverage, [&](std::size_t p, const Query& query) -> Answer {
        const auto start = std::chrono::steady_clock::now();
        const Problem& problem = batch.problems[p];
        if (!spectrum || (!spectrum->field_commutes() && solved_for != p)) {
            spectrum.emplace(problem, context);
            solved_for = p;
        }
        poll(context);
        Answer answer = Evaluator<Scalar>(problem, *spectrum)(query);
        if (Reference* reference = std::get_if<Reference>(&answer)) {
            reference->route = RouteId::dense;
            reference->seconds =
                std::chrono::duration<double>(std::chrono::steady_clock::now() - start).count();
        }
        return answer;
    });
}

Answers evaluate(const Batch& batch, const Context& context) {
    const Coverage coverage = plan(batch);
    if (!coverage.covers_any()) {
        return answer_each(batch, coverage, [](std::size_t, const Query&) -> Answer { return {}; });
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
