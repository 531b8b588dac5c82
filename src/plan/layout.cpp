#include <algorithm>
#include <compare>
#include <map>
#include <optional>
#include <set>
#include <tuple>

#include "chainmark/plan/build.hpp"
#include "chainmark/plan/work.hpp"

namespace chainmark {
namespace {

/// Sorts the points of one case into rows and bundles.
class Layout {
public:
    Layout(const Case& c, std::size_t case_index, Plan::Work& work)
        : case_(c), case_index_(case_index), work_(work), builder_(c) {}

    /// All errors of the case; on success the rows and bundles are in `work`.
    Errors run() {
        const Result<std::vector<Parameters>> points = grid_points(case_);
        if (!points) {
            return {points.error()};
        }
        work_.cases.push_back({&case_, {}});
        for (const Parameters& point : *points) {
            add_point(point);
            if (errors_.size() >= most_errors) {
                break;
            }
        }
        return errors_;
    }

private:
    static constexpr std::size_t most_errors = 5;  ///< one mistake often shows at every point

    static bool is_infinite(const Parameters& point) {
        return parameter(point, "sites") == infinite_sites;
    }

    /// Quantities with a meaning on such a chain.
    std::vector<std::size_t> asked_of(bool infinite) const {
        std::vector<std::size_t> indices;
        const Where missing = infinite ? Where::finite : Where::infinite;
        for (std::size_t q = 0; q < case_.quantities.size(); ++q) {
            if (case_.quantities[q].query.spec->where != missing) {
                indices.push_back(q);
            }
        }
        return indices;
    }

    /// Those of them that are asked at every point, or once per chain.
    std::vector<std::size_t> asked(const Parameters& point, bool per_chain) const {
        std::vector<std::size_t> indices = asked_of(is_infinite(point));
        std::erase_if(indices, [&](std::size_t q) {
            return case_.quantities[q].query.spec->per_chain != per_chain;
        });
        return indices;
    }

    void add_point(const Parameters& point) {
        Result<Problem> problem = builder_.build(point);
        if (!problem) {
            errors_.push_back(problem.error());
            return;
        }
        add_chain_row(point);
        const std::vector<std::size_t> quantities = asked(point, false);
        if (quantities.empty()) {
            return;
        }
        const std::size_t row = add_row(point, quantities);
        add_to_bundle(*problem, row, quantities, false);
        if (!is_infinite(point) && builder_.has_infinite_chain()) {
            add_beside(point, row, quantities);
        }
    }

    /// Quantities that are asked once for all fields of a chain.
    void add_chain_row(const Parameters& point) {
        const std::vector<std::size_t> quantities = asked(point, true);
        Parameters chain = point;
        std::erase_if(chain, [](const auto& entry) { return entry.first == "h"; });
        if (quantities.empty() || !chains_.insert(chain).second) {
            return;
        }
        const Result<Problem> problem = builder_.build_without_field(point);
        add_to_bundle(*problem, add_row(chain, quantities), quantities, false);
    }

    void add_beside(const Parameters& point,
                    std::size_t row,
                    const std::vector<std::size_t>& quantities) {
        std::vector<std::size_t> shared;
        for (const std::size_t q : quantities) {
            if (case_.quantities[q].query.spec->where == Where::both) {
                shared.push_back(q);
            }
        }
        Parameters infinite = point;
        for (auto& [name, value] : infinite) {
            if (name == "sites") {
                value = infinite_sites;
            }
        }
        const Result<Problem> problem = builder_.build(infinite);
        if (problem && !shared.empty()) {
            add_to_bundle(*problem, row, shared, true);
        }
    }

    std::size_t add_row(const Parameters& point, const std::vector<std::size_t>& quantities) {
        work_.cases.back().rows.push_back({point, quantities});
        return work_.cases.back().rows.size() - 1;
    }

    /// Adds a problem to the bundle that shares its solution, or opens one. Where the field
    /// commutes with the terms all fields share, and the bundle asks everything that the case asks
    /// of such a chain, so that quantities of a point and of the whole chain come from one
    /// solution. Where it does not, every field is work of its own and asks only what it needs.
    /// Temperatures always share: a complete spectrum serves them all.
    void add_to_bundle(const Problem& problem,
                       std::size_t row,
                       const std::vector<std::size_t>& quantities,
                       bool beside) {
        const bool shares = conserves_sz(*problem.terms);
        const Key key{
            .terms = problem.terms.get(),
            .beside = beside,
            .field = shares ? std::nullopt : std::optional(problem.field),
            .quantities = shares && !beside ? asked_of(problem.chain.is_infinite()) : quantities};
        auto at = open_.find(key);
        if (at == open_.end()) {
            auto bundle = std::make_unique<Bundle>();
            bundle->quantities = key.quantities;
            for (const std::size_t q : bundle->quantities) {
                bundle->batch.queries.push_back(case_.quantities[q].query);
            }
            bundle->beside = beside;
            bundle->case_index = case_index_;
            work_.bundles.push_back(std::move(bundle));
            at = open_.emplace(key, work_.bundles.back().get()).first;
        }
        add_problem(*at->second, problem, row, quantities);
    }

    void add_problem(Bundle& bundle,
                     const Problem& problem,
                     std::size_t row,
                     const std::vector<std::size_t>& quantities) {
        // Beside several sizes stands the same infinite chain; other problems occur once.
        const auto [at, fresh] = index_.emplace(
            std::tuple(&bundle, problem.field, problem.temperature), bundle.batch.problems.size());
        const std::size_t index = at->second;
        if (fresh) {
            bundle.batch.problems.push_back(problem);
            bundle.targets.emplace_back(bundle.quantities.size());
        }
        const Row& to = work_.cases.back().rows[row];
        const auto position = [](const std::vector<std::size_t>& all, std::size_t q) {
            return static_cast<std::size_t>(std::find(all.begin(), all.end(), q) - all.begin());
        };
        for (const std::size_t q : quantities) {
            bundle.targets[index][position(bundle.quantities, q)].push_back(
                {case_index_, row, position(to.quantities, q)});
        }
    }

    /// What problems of one bundle have in common.
    struct Key {
        const TermList* terms = nullptr;
        bool beside = false;
        std::optional<double> field;  ///< nothing where fields share
        std::vector<std::size_t> quantities;

        auto operator<=>(const Key&) const = default;
    };

    /// A problem of a bundle: the bundle, the field, the temperature.
    using ProblemKey = std::tuple<const Bundle*, double, std::optional<double>>;

    const Case& case_;
    std::size_t case_index_;
    Plan::Work& work_;
    ProblemBuilder builder_;
    Errors errors_;
    std::set<Parameters> chains_;
    std::map<Key, Bundle*> open_;
    std::map<ProblemKey, std::size_t> index_;  ///< in the bundle's list of problems
};

bool is_wanted(const Case& c, RouteId route) {
    return c.routes.empty() || std::find(c.routes.begin(), c.routes.end(), route) != c.routes.end();
}

/// Route `limit` speaks of infinite chains alone, and alone stands beside finite ones.
bool is_meant_for(RouteId route, const Bundle& bundle) {
    if (route == RouteId::limit) {
        return bundle.batch.problems.front().chain.is_infinite();
    }
    return !bundle.beside;
}

void add_jobs(Plan::Work& work) {
    for (const auto& bundle : work.bundles) {
        for (const Route& route : routes()) {
            if (is_meant_for(route.id, *bundle) &&
                is_wanted(*work.cases[bundle->case_index].source, route.id)) {
                work.jobs.push_back({bundle.get(), &route, route.plan(bundle->batch)});
            }
        }
    }
}

}  // namespace

Checked<Plan> Plan::make(const std::vector<Case>& cases) {
    auto work = std::make_shared<Work>();
    Errors errors;
    for (std::size_t i = 0; i < cases.size(); ++i) {
        const Errors found = Layout(cases[i], i, *work).run();
        errors.insert(errors.end(), found.begin(), found.end());
    }
    if (!errors.empty()) {
        return tl::unexpected(errors);
    }
    add_jobs(*work);
    Plan plan;
    plan.work_ = work;
    return plan;
}

}  // namespace chainmark
