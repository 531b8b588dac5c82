#pragma once

#include <complex>
#include <optional>
#include <utility>
#include <vector>

#include "chainmark/dense/full_spectrum.hpp"

/// The ground space of a full spectrum, and averages over it.
namespace chainmark::dense {

struct Ground {
    std::vector<Level> levels;  ///< all, ascending
    std::size_t degeneracy = 0;
    bool straddles = false;  ///< a level's bound reaches over the edge of the window

    bool has_next() const { return degeneracy < levels.size(); }
    double gap() const { return levels[degeneracy].energy - levels.front().energy; }
};

/// Sorts ascending levels into the ground space (within `window` of the lowest) and the rest.
Ground ground_of(std::vector<Level> levels, double window);

/// An average over the ground space, or a thermal one.
struct Average {
    std::complex<double> value = 0.0;
    double bound = 0.0;
    std::optional<std::pair<double, double>>
        range;  ///< ground spaces: extreme eigenvalues of P A P
};

template <class Scalar>
class GroundAverages {
public:
    GroundAverages(const Ground& ground, const FullSpectrum<Scalar>& spectrum);

    /// Tr(P A)/dim.
    ///
    /// Bound: the computed space is tilted from the exact one, towards a level at distance gap_n by
    /// at most residual/gap_n (Davis and Kahan, SIAM J. Numer. Anal. 7, 1 (1970)), which moves the
    /// average by at most (|<0|A|n>| + |<n|A|0>|) times that, plus 2 ||A|| times the square of the
    /// whole tilt. So a level that lies close but that A does not connect (the other parity) costs
    /// no digits.
    Average of(const FullOperator& a) const;

    /// Bounds the sine of the angle between the computed space and the exact one.
    double tilt() const;

private:
    Average trace_alone(const FullOperator& a) const;

    const FullSpectrum<Scalar>& spectrum_;
    std::vector<Eigen::Index> vectors_;  ///< of the ground space, then of a few levels above it
    std::size_t degeneracy_;
    double residual_ = 0.0;     ///< ||H V - V E|| of the ground space, Frobenius norm
    std::vector<double> gaps_;  ///< from the ground space to each of the levels above
    double rest_ = 0.0;         ///< gap to everything else; 0 if there is nothing else
};

extern template class GroundAverages<double>;
extern template class GroundAverages<std::complex<double>>;

}  // namespace chainmark::dense
