#pragma once

#include <cstdint>
#include <vector>

#include "chainmark/fermion/form.hpp"
#include "chainmark/fermion/gaussian_state.hpp"

namespace chainmark::fermion {

/// The quadratic form of one class between Majorana operators,
///   H = constant - (i/4) sum_ab C_ab g_a g_b,  C real antisymmetric, 2L x 2L, as sparse rows.
/// In C = sum_k e_k (u_k v_k^T - v_k u_k^T), u and v orthonormal,
///   H = constant + sum_k e_k (n_k - 1/2),   1 - 2 n_k = i (u_k . g)(v_k . g).
class ClassMatrix {
public:
    struct Element {
        std::int32_t column;
        Real value;
    };

    ClassMatrix(const QuadraticForm& form, UpCount up_count);

    int size() const { return static_cast<int>(rows_.size()); }
    const std::vector<Element>& row(int a) const { return rows_[static_cast<std::size_t>(a)]; }

    /// True where C couples even Majoranas with odd ones alone: every coupling is real.
    bool is_bipartite() const { return bipartite_; }

    /// Largest sum of |elements| of a row, a bound on ||C||.
    Real row_sum_norm() const;

    /// Largest number of elements of a row.
    std::size_t longest_row() const;

    /// C_{2i,2j+1}: L x L, rounded to double.
    RealMatrix even_odd_block() const;
    /// All of C, rounded to double.
    RealMatrix dense() const;

private:
    void add(int a, int b, Real value);
    void merge();

    std::vector<std::vector<Element>> rows_;
    bool bipartite_ = true;
};

}  // namespace chainmark::fermion
