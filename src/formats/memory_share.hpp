#pragma once

#include <memory>
#include <string>
#include <vector>

#include "chainmark/base/context.hpp"
#include "chainmark/base/error.hpp"

namespace chainmark {

/// Bytes taken from a memory budget step by step and given back together, when the share goes out
/// of scope. What is read from a file holds one, so that the budget knows of it for as long as it
/// lives.
class MemoryShare {
public:
    MemoryShare() = default;  ///< of no budget: everything fits
    explicit MemoryShare(const Context& context) : budget_(context.memory) {}
    MemoryShare(MemoryShare&&) = default;
    MemoryShare& operator=(MemoryShare&&) = default;
    MemoryShare(const MemoryShare&) = delete;
    MemoryShare& operator=(const MemoryShare&) = delete;
    ~MemoryShare() = default;

    /// Takes `bytes` more, before they are allocated. Fails with `over_memory`, where `source` is
    /// the file and `what` the thing that needs them: "the array 'E' of 4 x 10 values".
    Result<void> take(double bytes, const std::string& source, const std::string& what);

    /// Bytes of the whole budget; infinite where there is none.
    double limit() const;

private:
    std::shared_ptr<MemoryBudget> budget_;  // outlives the leases
    std::vector<MemoryBudget::Lease> leases_;
};

}  // namespace chainmark
