#pragma once

#include <optional>
#include <span>
#include <vector>

#include "chainmark/fermion/bands.hpp"
#include "chainmark/reference/quantity.hpp"

/// Correlations of an infinite chain.
namespace chainmark::fermion {

/// Farthest pair for xx, yy, +- and dot: a determinant of that many rows.
inline constexpr int farthest_determinant = 400;

/// Farthest pair for zz: by quadrature, and by the closed form of the uniform XX ground state.
inline constexpr int farthest_contraction = 2000;
inline constexpr int farthest_closed = 1'000'000;

/// G(i, j) = <b_i a_j> for |i - j| <= reach, b_j = c+_j - c_j, a_j = c+_j + c_j; in the ground
/// state or at a temperature.
class Contractions {
public:
    Contractions(const Bands& bands, const std::optional<Real>& temperature, int reach);

    Real at(int i, int j) const { return table_[index(i, j)].value; }
    Real error(int i, int j) const { return table_[index(i, j)].error; }
    Real largest_error() const;

    /// <b_r a_c b_r' a_c' ...> = det G(rows, columns): the product of pairs in this order, by
    /// Wick's theorem, since <a a> and <b b> vanish off the diagonal.
    Bounded product(const std::vector<int>& rows, const std::vector<int>& columns) const;

    /// Known from a closed form, not by quadrature.
    bool closed() const { return closed_; }

private:
    std::size_t width() const { return 2 * static_cast<std::size_t>(reach_) + 1; }
    std::size_t index(int i, int j) const;
    std::span<Bounded> row(int place);
    void fill_uniform_xx(const Bands& bands);
    void integrate_place(const Bands& bands, const std::optional<Real>& temperature, int from);
    Real integrate_places(const Bands& bands,
                          const std::optional<Real>& temperature,
                          int from,
                          int to,
                          const std::vector<Node>& mesh);

    int cell_;
    int reach_;
    bool closed_ = false;
    std::vector<Bounded> table_;  ///< [place of i in its cell][j - i + reach]
};

/// <A_i B_j> for a query's pairs and distances. With b and a as above, for i < j,
///   4 <Sx_i Sx_j> = det G(l, m + 1),  4 <Sy_i Sy_j> = det G(l + 1, m),  l, m = i ... j-1,
///   4 <Sz_i Sz_j> = G(i, i) G(j, j) - G(i, j) G(j, i),  2 <Sz_j> = G(j, j),
/// and <Sx_i Sy_j> = 0 since H is real. <Sx_j> = <Sy_j> = 0: in an ordered phase the average over
/// both ground states. A distance is the mean over the places of a cell.
/// Source: E. Lieb, T. Schultz, D. Mattis, Ann. Phys. (NY) 16, 407 (1961).
class Correlations {
public:
    Correlations(const Bands& bands,
                 const std::optional<Real>& temperature,
                 const Options& options);

    std::vector<Bounded> values() const;
    bool closed() const { return contractions_.closed(); }

private:
    Bounded zz(int i, int j) const;
    Bounded transverse(int i, int j, Axis axis) const;
    Bounded pair(int i, int j) const;

    const Options& options_;
    int cell_;
    Contractions contractions_;
};

/// <Sa_i [prod_{i<k<j} 2 Sa_k] Sa_j> in the ground state, for the pairs and distances of a query:
///   4 <z...z> = det G(l, m), l, m = i ... j;   4 <x...x> = det G(l, m + 1), l, m = i, i + 2, ...
/// for an even number of sites, with G(l + 1, m) for y, and 0 for an odd number.
std::vector<Bounded> string_orders(const Bands& bands, const Options& options);

}  // namespace chainmark::fermion
