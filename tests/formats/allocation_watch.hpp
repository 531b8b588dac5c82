#pragma once

#include <cstddef>

/// Counts what operator new hands out in this program.
namespace chainmark::test {

/// Bytes that are allocated now.
std::size_t allocated_now();
/// The most that were allocated at any time since the last call of `forget_peak`.
std::size_t allocated_at_peak();
void forget_peak();

}  // namespace chainmark::test
