#include <algorithm>
#include <chrono>
#include <condition_variable>
#include <mutex>
#include <set>
#include <stdexcept>
#include <thread>

#include <fmt/format.h>

#include "chainmark/plan/work.hpp"

namespace chainmark {
namespace {

constexpr double big_job_seconds = 1.0;                 ///< from here on a job gets all threads
constexpr auto grace = std::chrono::milliseconds(600);  ///< for workers after a stop request

/// Everything that workers touch. Kept alive by every worker, so that one that cannot be stopped
/// (inside a library call) can be left behind.
struct State {
    std::shared_ptr<const Plan::Work> work;
    Context context;

    std::mutex mutex;
    std::condition_variable changed;
    std::vector<CaseResult> results;
    std::set<const Job*> unfinished;
    std::size_t active = 0;
    std::exception_ptr failure;
    bool abandoned = false;  ///< late answers of workers left behind are dropped
};

void prepare(State& state) {
    const Plan::Work& work = *state.work;
    for (const CaseLayout& layout : work.cases) {
        CaseResult& result = state.results.emplace_back();
        result.source = layout.source;
        result.points_planned = layout.rows.size();
        for (const Row& row : layout.rows) {
            PointResult& point = result.points.emplace_back();
            point.parameters = row.parameters;
            for (const std::size_t q : row.quantities) {
                point.quantities.emplace_back().quantity = &layout.source->quantities[q];
            }
        }
    }
    for (const Job& job : work.jobs) {
        state.unfinished.insert(&job);
    }
}

void store(QuantityResult& to, const Answer& answer, const Job& job) {
    if (const auto* reference = std::get_if<Reference>(&answer)) {
        if (job.bundle->beside) {
            to.infinite = *reference;
        } else {
            to.references.push_back(*reference);
        }
    } else if (job.bundle->beside) {
        return;  // nothing is shown beside, and nothing needed it
    } else if (const auto* refused = std::get_if<NotCovered>(&answer)) {
        to.not_run.push_back({job.route->id, refused->reason, false});
    } else {
        to.not_run.push_back({job.route->id, std::get<Undecided>(answer).reason, true});
    }
}

/// Puts the answers where they go. The lock is held.
void store_all(State& state, const Job& job, const Answers& answers) {
    for (std::size_t p = 0; p < answers.size(); ++p) {
        for (std::size_t q = 0; q < answers[p].size(); ++q) {
            for (const Target& target : job.bundle->targets[p][q]) {
                PointResult& point = state.results[target.case_index].points[target.row];
                store(point.quantities[target.slot], answers[p][q], job);
            }
        }
    }
}

void finish_job(State& state, const Job& job, const Answers& answers) {
    const std::lock_guard lock(state.mutex);
    if (!state.abandoned) {
        store_all(state, job, answers);
        state.unfinished.erase(&job);
    }
}

/// The same answer everywhere; where the route does not cover a query it says so as always.
Answers same_everywhere(const Job& job, const Answer& answer) {
    return answer_each(
        job.route->id, job.bundle->batch, job.coverage, [&](std::size_t, const Query&) {
            return answer;
        });
}

/// Waits until the job's memory is free; nothing where it never will be.
std::optional<MemoryBudget::Lease> take_memory(const Job& job, const Context& context) {
    while (job.coverage.bytes <= context.memory->limit()) {
        if (auto lease = context.memory->take(job.coverage.bytes)) {
            return lease;
        }
        poll(context);
        std::this_thread::sleep_for(std::chrono::milliseconds(5));
    }
    return std::nullopt;
}

/// One of `workers` jobs that run side by side.
Answers evaluate(const Job& job, const Context& context, std::size_t workers) {
    if (!job.coverage.covers_any()) {
        return same_everywhere(job, NotCovered{});
    }
    const auto lease = take_memory(job, context);
    if (!lease) {
        return same_everywhere(
            job,
            Undecided{fmt::format("needs about {}, more than the budget of {} (--memory)",
                                  size_text(job.coverage.bytes),
                                  size_text(context.memory->limit()))});
    }
    // The route counts its arrays itself, against the job's own share: what it said it needs, and
    // what the others leave it.
    Context own = context;
    own.memory = std::make_shared<MemoryBudget>(
        std::max(job.coverage.bytes, context.memory->limit() / static_cast<double>(workers)));
    try {
        return job.route->evaluate(job.bundle->batch, own);
    } catch (const std::bad_alloc&) {
        return same_everywhere(job, Undecided{"the system has no memory left"});
    } catch (const std::runtime_error& failure) {
        return same_everywhere(job, Undecided{failure.what()});
    }
}

std::string describe(const Job& job) {
    const Chain& chain = job.bundle->batch.problems.front().chain;
    return fmt::format("{}, {}", to_string(job.route->id), to_string(chain));
}

void work_through(const std::shared_ptr<State>& state,
                  const std::shared_ptr<const std::vector<const Job*>>& jobs,
                  const std::shared_ptr<std::atomic<std::size_t>>& next,
                  std::size_t workers,
                  const Context& context) {
    try {
        for (std::size_t i = (*next)++; i < jobs->size(); i = (*next)++) {
            poll(context);
            const Job& job = *(*jobs)[i];
            if (context.progress && job.coverage.covers_any()) {
                context.progress->started(describe(job));
            }
            finish_job(*state, job, evaluate(job, context, workers));
            if (context.progress) {
                context.progress->finished(job.coverage.seconds);
            }
        }
    } catch (const Interrupted&) {
        // What is finished is stored.
    } catch (...) {
        const std::lock_guard lock(state->mutex);
        state->failure = std::current_exception();
        *next = jobs->size();
    }
    const std::lock_guard lock(state->mutex);
    --state->active;
    state->changed.notify_all();
}

/// Runs the jobs on `workers` threads with `threads` each. Returns when they are done, or shortly
/// after a stop request whatever they do.
void run_phase(const std::shared_ptr<State>& state,
               const std::vector<const Job*>& jobs,
               int workers,
               int threads) {
    if (jobs.empty() || state->context.stop.stop_requested()) {
        return;
    }
    const auto shared_jobs = std::make_shared<const std::vector<const Job*>>(jobs);
    const auto next = std::make_shared<std::atomic<std::size_t>>(0);
    Context context = state->context;
    context.threads = threads;
    const BlasThreads blas(threads);
    const std::size_t pool = std::min(jobs.size(), static_cast<std::size_t>(workers));
    state->active = pool;
    for (std::size_t i = 0; i < pool; ++i) {
        std::thread(work_through, state, shared_jobs, next, pool, context).detach();
    }
    std::unique_lock lock(state->mutex);
    const std::stop_callback wake(state->context.stop, [&] { state->changed.notify_all(); });
    const auto idle = [&] { return state->active == 0; };
    while (!idle() && !state->context.stop.stop_requested()) {
        state->changed.wait_for(lock, std::chrono::milliseconds(100));
    }
    state->changed.wait_for(lock, grace, idle);
    state->abandoned = !idle();
    if (state->failure) {
        std::rethrow_exception(state->failure);
    }
}

double largest_bound(const Reference& reference) {
    return reference.bound.empty()
               ? 0.0
               : *std::max_element(reference.bound.begin(), reference.bound.end());
}

void judge(QuantityResult& result, const Tolerance& case_tolerance) {
    std::stable_sort(
        result.references.begin(),
        result.references.end(),
        [](const Reference& a, const Reference& b) { return largest_bound(a) < largest_bound(b); });
    result.comparison =
        compare_references(result.references, result.quantity->tolerance.value_or(case_tolerance));
}

bool has_answer(const PointResult& point) {
    return std::any_of(point.quantities.begin(), point.quantities.end(), [](const auto& quantity) {
        return !quantity.references.empty();
    });
}

/// After an interrupt: routes that did not come to an answer say so, and points where none did are
/// dropped.
void drop_unfinished(State& state) {
    if (state.unfinished.empty()) {
        return;
    }
    for (const Job* job : state.unfinished) {
        store_all(state, *job, same_everywhere(*job, Undecided{"interrupted before it answered"}));
    }
    for (CaseResult& result : state.results) {
        std::erase_if(result.points, [](const PointResult& p) { return !has_answer(p); });
    }
}

std::vector<CaseResult> finish(State& state) {
    const std::lock_guard lock(state.mutex);
    drop_unfinished(state);
    for (CaseResult& result : state.results) {
        if (result.points.empty()) {
            result.verdict = Verdict::undecided;
        }
        for (PointResult& point : result.points) {
            for (QuantityResult& quantity : point.quantities) {
                judge(quantity, result.source->tolerance);
                result.verdict = worse(result.verdict, quantity.comparison.verdict);
            }
        }
        result.trends = case_trends(result);
    }
    return std::move(state.results);
}

}  // namespace

std::vector<CaseResult> Plan::run(const Context& context) const {
    const auto state = std::make_shared<State>();
    state->work = work_;
    state->context = context;
    prepare(*state);
    std::vector<const Job*> small;
    std::vector<const Job*> big;
    double total = 0.0;
    for (const Job& job : work_->jobs) {
        (job.coverage.seconds < big_job_seconds ? small : big).push_back(&job);
        total += job.coverage.seconds;
    }
    const auto cheaper = [](const Job* a, const Job* b) {
        return a->coverage.seconds < b->coverage.seconds;
    };
    std::stable_sort(big.begin(), big.end(), cheaper);
    if (context.progress) {
        context.progress->begin(total);
    }
    run_phase(state, small, context.threads, 1);
    run_phase(state, big, 1, context.threads);
    if (context.progress) {
        context.progress->end();
    }
    return finish(*state);
}

}  // namespace chainmark
