#pragma once

#include <stop_token>
#include <thread>

namespace chainmark::cli {

/// Turns SIGINT and SIGTERM into a stop request as long as it lives; one at a time. A second
/// signal ends the program at once.
///
/// Handlers, not blocked signals: BLAS starts threads before main, and a signal blocked everywhere
/// else would be delivered to one of those.
class InterruptWatch {
public:
    InterruptWatch();
    InterruptWatch(const InterruptWatch&) = delete;
    InterruptWatch& operator=(const InterruptWatch&) = delete;
    ~InterruptWatch();

    std::stop_token token() const { return source_.get_token(); }
    bool requested() const { return source_.stop_requested(); }

private:
    std::stop_source source_;
    std::jthread waiter_;
};

}  // namespace chainmark::cli
