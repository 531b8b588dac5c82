#pragma once

#include <atomic>
#include <exception>
#include <mutex>
#include <thread>
#include <vector>

namespace chainmark {

/// task(i) for i = 0 ... count-1 on up to `threads` threads, in this order as threads become free.
/// The first exception ends the hand-out and is thrown again here.
template <class Task>
void parallel_for(std::size_t count, int threads, Task&& task) {
    if (threads <= 1 || count <= 1) {
        for (std::size_t i = 0; i < count; ++i) {
            task(i);
        }
        return;
    }
    std::atomic<std::size_t> next{0};
    std::exception_ptr failure;
    std::mutex failure_mutex;
    const auto work = [&] {
        try {
            for (std::size_t i = next++; i < count; i = next++) {
                task(i);
            }
        } catch (...) {
            const std::lock_guard lock(failure_mutex);
            if (!failure) {
                failure = std::current_exception();
            }
            next = count;
        }
    };
    {
        std::vector<std::jthread> pool;
        const std::size_t size = std::min(count, static_cast<std::size_t>(threads));
        for (std::size_t t = 1; t < size; ++t) {
            pool.emplace_back(work);
        }
        work();
    }
    if (failure) {
        std::rethrow_exception(failure);
    }
}

}  // namespace chainmark
