#include "chainmark/base/context.hpp"

#include <fstream>

extern "C" {
void openblas_set_num_threads(int threads);
int openblas_get_num_threads();
}

namespace chainmark {

MemoryBudget::Lease::~Lease() {
    if (budget_ != nullptr) {
        budget_->taken_.fetch_sub(bytes_);
    }
}

std::optional<MemoryBudget::Lease> MemoryBudget::take(double bytes) {
    double taken = taken_.load();
    do {
        if (taken + bytes > limit_) {
            return std::nullopt;
        }
    } while (!taken_.compare_exchange_weak(taken, taken + bytes));
    return std::optional<Lease>(std::in_place, *this, bytes);
}

double available_memory() {
    constexpr double unknown = 4.0 * 1024 * 1024 * 1024;
    std::ifstream info("/proc/meminfo");
    std::string key;
    double kibibytes = 0;
    std::string unit;
    while (info >> key >> kibibytes) {
        std::getline(info, unit);
        if (key == "MemAvailable:") {
            return kibibytes * 1024;
        }
    }
    return unknown;
}

void poll(const Context& context) {
    if (context.stop.stop_requested()) {
        throw Interrupted();
    }
}

BlasThreads::BlasThreads(int threads) : before_(openblas_get_num_threads()) {
    openblas_set_num_threads(threads);
}

BlasThreads::~BlasThreads() {
    openblas_set_num_threads(before_);
}

}  // namespace chainmark
