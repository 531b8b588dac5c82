#pragma once

#include <cstddef>
#include <memory>
#include <new>
#include <utility>
#include <vector>

namespace chainmark {

/// Memory for arrays of gigabytes: blocks of 4 MiB and more ask the system for huge pages, since
/// random reads through 4 KiB pages spend more time on address translation than on the data.
void* allocate_big(std::size_t bytes);
void release_big(void* memory, std::size_t bytes) noexcept;

/// Allocates by allocate_big and leaves elements uninitialized where no value is given, so that
/// the thread that fills an array first is the one that touches its pages.
template <class T>
class BigAllocator {
public:
    // The name that containers ask for. NOLINTNEXTLINE(readability-identifier-naming)
    using value_type = T;

    BigAllocator() = default;
    template <class U>
    explicit(false) BigAllocator(const BigAllocator<U>& /*other*/) {}

    T* allocate(std::size_t count) { return static_cast<T*>(allocate_big(count * sizeof(T))); }
    void deallocate(T* memory, std::size_t count) noexcept {
        release_big(memory, count * sizeof(T));
    }

    template <class U>
    void construct(U* place) {
        ::new (static_cast<void*>(place)) U;
    }
    template <class U, class... Arguments>
    void construct(U* place, Arguments&&... arguments) {
        std::construct_at(place, std::forward<Arguments>(arguments)...);
    }

    bool operator==(const BigAllocator&) const = default;
};

/// A vector whose resize() leaves new numbers uninitialized.
template <class T>
using BigVector = std::vector<T, BigAllocator<T>>;

}  // namespace chainmark
