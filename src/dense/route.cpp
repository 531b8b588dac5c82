#include "chainmark/dense/route.hpp"

#include <cmath>

#include <fmt/format.h>

#include "chainmark/dense/ground_answers.hpp"
#include "chainmark/dense/sector_answers.hpp"
#include "chainmark/dense/thermal_answers.hpp"

namespace chainmark {
namespace {

using namespace dense;

constexpr double largest_dim = 4096;

int largest_length(int two_s) {
    int length = 0;
    while (std::pow(two_s + 1.0, length + 1) <= largest_dim) {
        ++length;
    }
    return length;
}

bool asks_for_kubo_response(const Batch& batch) {
    for (const Query& query : batch.queries) {
        if (query.spec->id == QuantityId::susceptibility) {
            return batch.problems.front().temperature.has_value();
        }
    }
    return false;
}

/// Rough time of one answer, without the diagonalization of the whole matrix of dimension n.
double seconds_beside(const Query& query, const Problem& problem, double n) {
    const double length = problem.chain.length();
    if (query.options.sector) {
        const Labels& labels = *query.options.sector;
        const double sectors = (labels.sz       ? 3.0
                                : labels.parity ? 2.0
                                                : 1.0) *
                               (labels.momentum ? length / 2 : 1.0) *
                               (labels.reflection ? 2.0 : 1.0) * (labels.inversion ? 2.0 : 1.0);
        return 1e-9 * std::pow(n / sectors, 3);
    }
    if (query.spec->id == QuantityId::structure_factor) {
        return 2e-6 * n * length * length;
    }
    // averages are products of a sparse matrix with all vectors at a temperature, with few else
    return problem.temperature ? 3e-8 * n * n : 1e-5 * n;
}

Coverage plan(const Batch& batch) {
    const Problem& first = batch.problems.front();
    const Chain& chain = first.chain;
    if (chain.is_infinite()) {
        return refuse_all(batch, "needs a finite chain");
    }
    const int largest = largest_length(chain.two_s);
    if (chain.length() > largest) {
        const std::string spin = chain.two_s == 1 ? "" : " of spin " + spin_text(chain.two_s);
        return refuse_all(batch, fmt::format("takes at most {} sites{}", largest, spin));
    }
    const bool conserved = conserves_sz(*first.terms);
    Coverage coverage = refuse_all(batch, "");
    for (std::size_t q = 0; q < batch.queries.size(); ++q) {
        const Query& query = batch.queries[q];
        coverage.refusal[q] = without_meaning(query, first);
        if (coverage.refusal[q].empty() && query.spec->id == QuantityId::jump_fields &&
            !conserved) {
            coverage.refusal[q] = "needs a Hamiltonian that conserves Sz";
        }
    }
    const double n = std::pow(chain.site_dim(), chain.length());
    const bool real = is_real(*first.terms);
    const double points = static_cast<double>(batch.problems.size());
    const double solves = conserved ? 1.0 : points;
    double products = solves;
    if (!conserved && asks_for_kubo_response(batch)) {
        products += solves;
    }
    coverage.seconds = products * n * n * n * (real ? 1.3e-10 : 5e-10);
    for (const Query& query : batch.queries) {
        coverage.seconds += points * seconds_beside(query, first, n);
    }
    coverage.bytes = n * n * 16 * (real ? 4 : 8);
    return coverage;
}

/// Solves what is asked for, and keeps it while the next question needs the same.
template <class Scalar>
class Evaluator {
public:
    Evaluator(const Batch& batch, const Context& context) : batch_(batch), context_(context) {}

    Answer operator()(std::size_t p, const Query& query) {
        poll(context_);
        const Problem& problem = batch_.problems[p];
        if (query.options.sector) {
            return of_sector(p, query);
        }
        if (problem.temperature) {
            return thermal_answer(problem, spectrum_of(p), magnetization_, query, context_);
        }
        return GroundAnswers<Scalar>(problem, spectrum_of(p))(query);
    }

private:
    Answer of_sector(std::size_t p, const Query& query) {
        const Problem& problem = batch_.problems[p];
        const SectorSpectrum sector = sector_spectrum(problem, *query.options.sector, context_);
        if (!sector.refusal.empty()) {
            return NotCovered{sector.refusal};
        }
        switch (query.spec->id) {
            case QuantityId::gap:
                return sector_gap(sector, GroundAnswers<Scalar>(problem, spectrum_of(p)).lowest());
            case QuantityId::entanglement_entropy:
                return sector_entropy(sector, problem, query.options);
            default:
                return sector_levels(sector, query.options);
        }
    }

    const FullSpectrum<Scalar>& spectrum_of(std::size_t p) {
        if (!spectrum_ || (!spectrum_->field_commutes() &&
                           batch_.problems[solved_for_].field != batch_.problems[p].field)) {
            magnetization_.reset();
            spectrum_.emplace(batch_.problems[p], context_);
            solved_for_ = p;
        }
        return *spectrum_;
    }

    const Batch& batch_;
    const Context& context_;
    std::optional<FullSpectrum<Scalar>> spectrum_;
    std::size_t solved_for_ = 0;
    MagnetizationMatrix<Scalar> magnetization_;
};

Answers evaluate(const Batch& batch, const Context& context) {
    const Coverage coverage = plan(batch);
    if (!coverage.covers_any()) {
        return answer_each(
            RouteId::dense, batch, coverage, [](std::size_t, const Query&) -> Answer {
                return {};
            });
    }
    return is_real(*batch.problems.front().terms)
               ? answer_each(RouteId::dense, batch, coverage, Evaluator<double>(batch, context))
               : answer_each(RouteId::dense,
                             batch,
                             coverage,
                             Evaluator<std::complex<double>>(batch, context));
}

}  // namespace

const Route& dense_route() {
    static const Route route{RouteId::dense,
                             "the full (2S+1)^L matrix by Kronecker products, fully diagonalized, "
                             "up to dimension 4096: L <= 12 for S = 1/2, 7 for S = 1",
                             plan,
                             evaluate};
    return route;
}

}  // namespace chainmark
