#pragma once

#include <atomic>
#include <cstdint>
#include <exception>
#include <memory>
#include <optional>
#include <stop_token>
#include <string>

namespace chainmark {

/// Bytes that big arrays may take together. Thread safe.
class MemoryBudget {
public:
    explicit MemoryBudget(double bytes) : limit_(bytes) {}

    /// Releases its bytes when it goes out of scope.
    class Lease {
    public:
        Lease(MemoryBudget& budget, double bytes) : budget_(&budget), bytes_(bytes) {}
        Lease(Lease&& other) noexcept : budget_(other.budget_), bytes_(other.bytes_) {
            other.budget_ = nullptr;
        }
        Lease(const Lease&) = delete;
        Lease& operator=(const Lease&) = delete;
        Lease& operator=(Lease&&) = delete;
        ~Lease();

    private:
        MemoryBudget* budget_;
        double bytes_;
    };

    /// Nothing where the bytes do not fit beside what is already taken.
    std::optional<Lease> take(double bytes);

    double limit() const { return limit_; }

    /// What is not taken now; others may take of it before the caller does.
    double left() const { return limit_ - taken_; }

private:
    double limit_;
    std::atomic<double> taken_{0.0};
};

/// Bytes the system says are free for new processes (Linux MemAvailable); 4 GiB where unknown.
double available_memory();

/// Hears what is being worked on. The unit of `work` is estimated seconds. Thread safe.
class Progress {
public:
    Progress() = default;
    Progress(const Progress&) = delete;
    Progress& operator=(const Progress&) = delete;
    virtual ~Progress() = default;
    virtual void begin(double total_work) = 0;
    virtual void started(const std::string& what) = 0;
    virtual void finished(double work) = 0;
    virtual void end() = 0;
};

/// What a computation may use, and how it is told to stop.
struct Context {
    int threads = 1;  ///< for the computation that is handed this context
    std::shared_ptr<MemoryBudget> memory;
    std::stop_token stop;
    std::shared_ptr<Progress> progress;  ///< may be null
    int digits = 15;  ///< significant digits that are wanted; above 15 where a route can enclose
};

/// Thrown by `poll` inside a computation, caught where the computation was started.
struct Interrupted : std::exception {
    const char* what() const noexcept override { return "interrupted"; }
};

/// Throws Interrupted once a stop was requested. Every loop calls it at least once a second.
void poll(const Context& context);

/// Sets the number of threads that BLAS and LAPACK use, in the whole process, and puts the old
/// number back when it goes out of scope. Threads that do this at the same time must all set the
/// number that is in force.
class BlasThreads {
public:
    explicit BlasThreads(int threads);
    BlasThreads(const BlasThreads&) = delete;
    BlasThreads& operator=(const BlasThreads&) = delete;
    ~BlasThreads();

private:
    int before_;
};

}  // namespace chainmark
