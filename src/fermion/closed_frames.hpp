#pragma once

#include <complex>
#include <cstdint>
#include <memory>
#include <vector>

#include "chainmark/fermion/gaussian_state.hpp"

/// Modes in closed form: waves on uniform chains. `filled` takes s by the label of the mode.
namespace chainmark::fermion {

/// The momenta of a class of a ring, label m = 0 ... L-1:
///   k_m = pi (2m + half_steps)/L + shift.
struct MomentumGrid {
    int sites = 0;
    int half_steps = 0;  ///< 0, 1 or 2
    Real shift = 0.0L;

    /// k_m - shift in units of pi/L.
    std::int64_t numerator(int label) const {
        return 2 * static_cast<std::int64_t>(label) + half_steps;
    }

    /// The label of -k_m where the shift is 0; the label itself at k = 0 and pi.
    int partner(int label) const { return (2 * sites - half_steps - label) % sites; }
};

/// b_k = c_k = L^(-1/2) sum_j exp(-i k j) c_j.
std::unique_ptr<ModeFrame> plane_waves(const MomentumGrid& grid);

/// The pair (k, -k) of  s (n_k + n_-k) + a (n_k - n_-k) + delta c+_k c+_-k + h.c., by its angle:
/// with w = sqrt(s^2 + |delta|^2), <1 - 2 n_k> = s/w and <c+_k c+_-k> = -conj(delta)/(2w) where no
/// mode b is filled.
struct PairAngle {
    Real cosine = 1.0L;       ///< s/w; of k = 0 and pi (b_k = c_k): 1
    std::complex<Real> sine;  ///< delta/w of the label, odd in k
};

/// Waves paired with their opposite; one angle per label. `error`: bound on the error of
/// sum over labels of (|cosine| and |sine|), divided by L; `real_pairs`: all pairings are real.
std::unique_ptr<ModeFrame> paired_waves(const MomentumGrid& grid,
                                        std::vector<PairAngle> angles,
                                        Real error,
                                        bool real_pairs);

/// b_m = sum_j sqrt(2/(L+1)) sin(pi (m+1)(j+1)/(L+1)) exp(i turn j) c_j, label m = 0 ... L-1, for
/// the hop |t| exp(i turn).
std::unique_ptr<ModeFrame> standing_waves(int sites, std::complex<double> hop);

/// A wave is a product of three sines or cosines and a quotient.
inline constexpr Real error_of_wave = 64 * real_epsilon;

/// Labels a ... b-1 with one value: their waves add up in closed form.
struct Run {
    std::int64_t a;
    std::int64_t b;
    Real value;
};

std::vector<Run> runs_of(const std::vector<Real>& values);

/// Gamma at (i, j) from normal = <delta_ij - 2 c+_i c_j> and anomalous = <c+_i c+_j>.
MajoranaBlock majorana_block(std::complex<Real> normal, std::complex<Real> anomalous);

/// P of the state with these s over a vacuum of the given parity; nothing where an s is not +-1.
std::optional<int> pure_parity(const std::vector<Real>& s, int vacuum);

}  // namespace chainmark::fermion
