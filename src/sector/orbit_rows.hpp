#pragma once

#include <algorithm>
#include <complex>
#include <cstdint>
#include <vector>

#include "chainmark/sector/orbit_basis.hpp"
#include "chainmark/sector/packed_string.hpp"

namespace chainmark::sector {

/// The rows of an operator between the orbits of a sector:
///   (H psi)(a) = H_aa psi(a) + sum_s <a|H|s> chi(s -> b) psi(b),   b the smallest image of s.
/// The operator must commute with every map of the group. Refers to basis and operator.
template <class Scalar>
class OrbitRows {
public:
    OrbitRows(const OrbitBasis& basis, const PackedOperator& op);

    const OrbitBasis& basis() const { return basis_; }
    const PackedOperator& op() const { return op_; }

    /// The distinct values <a|H|s> chi(s -> b); an element refers to one by its code.
    const std::vector<Scalar>& coefficients() const { return coefficients_; }

    /// Off-diagonal elements of some consecutive rows.
    struct Block {
        std::vector<int> row_length;
        std::vector<std::uint32_t> column;
        std::vector<std::uint32_t> code;

    private:
        friend class OrbitRows;
        std::vector<Word> word_;
        std::vector<std::uint32_t> which_;
    };

    /// Rows that are best worked on together: their neighbours' places in memory are asked for
    /// before any of them is needed.
    static constexpr std::int64_t rows_at_once = 64;

    /// Rows first ... last-1. Configurations whose orbits carry no state drop out.
    void fill(std::int64_t first, std::int64_t last, Block& block) const;

    double diagonal_element(std::int64_t row) const {
        return op_.diagonal_element(basis_.word(row));
    }

private:
    const OrbitBasis& basis_;
    const PackedOperator& op_;
    std::vector<Scalar> coefficients_;
    std::vector<std::uint32_t> codes_;  ///< [amplitude * 2 numbers + character]
};

/// Calls use(row, elements' columns, codes, count) for every row of first ... last-1.
template <class Scalar, class Use>
void for_each_row(const OrbitRows<Scalar>& rows, std::int64_t first, std::int64_t last, Use&& use) {
    typename OrbitRows<Scalar>::Block block;
    for (std::int64_t row = first; row < last;) {
        const std::int64_t end = std::min(last, row + OrbitRows<Scalar>::rows_at_once);
        rows.fill(row, end, block);
        std::size_t at = 0;
        for (const int length : block.row_length) {
            use(row, block.column.data() + at, block.code.data() + at, length);
            at += static_cast<std::size_t>(length);
            ++row;
        }
    }
}

extern template class OrbitRows<double>;
extern template class OrbitRows<std::complex<double>>;

}  // namespace chainmark::sector
