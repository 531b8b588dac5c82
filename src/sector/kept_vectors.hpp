#pragma once

#include <algorithm>
#include <complex>
#include <cstdint>
#include <optional>
#include <vector>

#include "chainmark/base/big_vector.hpp"
#include "chainmark/base/context.hpp"
#include "chainmark/sector/vector_sums.hpp"

namespace chainmark::sector {

/// Vectors of one run of a recurrence, kept for the sum sum_j c_j x_j. They are rounded to single
/// precision: half the memory, and half the pages to be touched for the first time, which here
/// costs as much as computing a vector anew. The sum then errs by 2^-25 of the part that they
/// contribute, so a second run that starts from it is exact to double rounding.
template <class Scalar>
class KeptVectors {
public:
    using Stored = std::conditional_t<std::is_same_v<Scalar, double>, float, std::complex<float>>;

    /// Relative error of a stored number, on the average.
    static constexpr double rounding = 0x1p-25;

    /// Room for at most `most` vectors of `size` numbers, within half of what the budget holds: a
    /// second run costs time, running out costs the answer. Without a budget there is none.
    KeptVectors(std::size_t size, std::size_t most, const Context& context) : size_(size) {
        if (!context.memory) {
            return;
        }
        const double bytes = static_cast<double>(size * sizeof(Stored));
        const double room = std::min(context.memory->limit() / 2, context.memory->left()) / bytes;
        const auto count =
            static_cast<std::size_t>(std::clamp(room, 0.0, static_cast<double>(most)));
        if (auto lease = context.memory->take(static_cast<double>(count) * bytes)) {
            lease_.emplace(std::move(*lease));
            capacity_ = count;
        }
    }

    std::size_t capacity() const { return capacity_; }

    /// Where vector j goes; null where there is no room.
    Stored* place(std::size_t j) {
        if (j >= capacity_) {
            return nullptr;
        }
        while (slabs_.size() <= j / per_slab()) {
            slabs_.emplace_back(std::min(per_slab(), capacity_ - slabs_.size() * per_slab()) *
                                size_);
        }
        return slabs_[j / per_slab()].data() + (j % per_slab()) * size_;
    }

    /// x = scale x + sum_j factors[j] (vector j).
    void add_to(BigVector<Scalar>& x,
                double scale,
                const std::vector<double>& factors,
                int threads) {
        const auto dim = static_cast<std::int64_t>(size_);
        sum_over_runs<long double>(dim, threads, [&](std::int64_t first, std::int64_t last) {
            Scalar* const sum = x.data();
            for (std::int64_t i = first; i < last; ++i) {
                sum[i] *= scale;
            }
            for (std::size_t j = 0; j < factors.size(); ++j) {
                const Stored* const kept = place(j);
                for (std::int64_t i = first; i < last; ++i) {
                    sum[i] += factors[j] * static_cast<Scalar>(kept[i]);
                }
            }
            return 0.0;
        });
    }

private:
    /// Vectors share allocations of this size or more, so that they lie in huge pages.
    std::size_t per_slab() const {
        constexpr std::size_t slab = std::size_t{1} << 26;
        return std::max<std::size_t>(1, slab / (size_ * sizeof(Stored)));
    }

    std::size_t size_;
    std::size_t capacity_ = 0;
    std::optional<MemoryBudget::Lease> lease_;
    std::vector<BigVector<Stored>> slabs_;
};

}  // namespace chainmark::sector
