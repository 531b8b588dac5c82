#include "chainmark/base/big_vector.hpp"

#include <cstdlib>

#include <sys/mman.h>

namespace chainmark {
namespace {

constexpr std::size_t huge_page = std::size_t{2} << 20;
constexpr std::size_t big = 2 * huge_page;

std::size_t rounded_up(std::size_t bytes) {
    return (bytes + huge_page - 1) / huge_page * huge_page;
}

}  // namespace

void* allocate_big(std::size_t bytes) {
    if (bytes < big) {
        return ::operator new(bytes);
    }
    void* memory = std::aligned_alloc(huge_page, rounded_up(bytes));
    if (memory == nullptr) {
        throw std::bad_alloc();
    }
    // A refusal costs speed, nothing else.
    static_cast<void>(madvise(memory, rounded_up(bytes), MADV_HUGEPAGE));
    return memory;
}

void release_big(void* memory, std::size_t bytes) noexcept {
    if (bytes < big) {
        ::operator delete(memory);
    } else {
        std::free(memory);
    }
}

}  // namespace chainmark
