#pragma once

#include <array>
#include <complex>
#include <cstdint>

namespace chainmark::sector {

/// The inner product of a sector's amplitudes, <x|y> = sum_i w_i x_i* y_i.
struct Metric {
    const std::uint8_t* index = nullptr;  ///< into weights, one per component; null: all weights 1
    const double* weights = nullptr;

    double weight(std::int64_t i) const { return index == nullptr ? 1.0 : weights[index[i]]; }
};

/// H restricted to one sector, Hermitian in the sector's inner product.
template <class Scalar>
class LinearOperator {
public:
    LinearOperator() = default;
    LinearOperator(const LinearOperator&) = delete;
    LinearOperator& operator=(const LinearOperator&) = delete;
    virtual ~LinearOperator() = default;

    virtual std::int64_t dim() const = 0;
    virtual Metric metric() const = 0;

    /// y = scale H x - keep y, with Re <x|y> of the new y as the result. keep = 0 does not read y.
    virtual double multiply(const Scalar* x, Scalar* y, double scale, double keep) const = 0;

    /// Upper bound of ||H||, and of the sum of |contributions| to a row before they cancel.
    virtual double row_sum() const = 0;
    /// Number of strings that are summed in a row.
    virtual std::size_t n_strings() const = 0;
    /// Threads that one multiplication uses; vector operations beside it use as many.
    virtual int threads() const = 0;
};

}  // namespace chainmark::sector
