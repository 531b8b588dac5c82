#include "formats/allocation_watch.hpp"

#include <atomic>
#include <cstdlib>
#include <new>

#include <malloc.h>

namespace {

std::atomic<std::size_t> now{0};
std::atomic<std::size_t> peak{0};

void* allocated(std::size_t size) {
    void* memory = std::malloc(size == 0 ? 1 : size);
    if (memory == nullptr) {
        throw std::bad_alloc();
    }
    const std::size_t sum = now += malloc_usable_size(memory);
    std::size_t before = peak.load();
    while (before < sum && !peak.compare_exchange_weak(before, sum)) {
    }
    return memory;
}

void released(void* memory) {
    if (memory != nullptr) {
        now -= malloc_usable_size(memory);
        std::free(memory);
    }
}

}  // namespace

void* operator new(std::size_t size) {
    return allocated(size);
}
void* operator new[](std::size_t size) {
    return allocated(size);
}
void operator delete(void* memory) noexcept {
    released(memory);
}
void operator delete[](void* memory) noexcept {
    released(memory);
}
void operator delete(void* memory, std::size_t /*size*/) noexcept {
    released(memory);
}
void operator delete[](void* memory, std::size_t /*size*/) noexcept {
    released(memory);
}

namespace chainmark::test {

std::size_t allocated_now() {
    return now;
}
std::size_t allocated_at_peak() {
    return peak;
}
void forget_peak() {
    peak = now.load();
}

}  // namespace chainmark::test
