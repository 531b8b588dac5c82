#pragma once

#include <complex>
#include <optional>
#include <string>

namespace chainmark {

enum class BoundaryKind { open, ring };

/// A chain of spins S = two_s / 2. Sites are 0 ... L-1.
///
/// On a ring every operator with an index past L-1 is brought back by
///   S+_{j+L} = exp(-i twist) S+_j,   Sz_{j+L} = Sz_j,
/// so twist = 0 is the periodic and twist = pi the antiperiodic ring (of spins, not of fermions).
struct Chain {
    std::optional<int> sites;  ///< nothing: the infinite chain
    BoundaryKind boundary = BoundaryKind::ring;
    double twist = 0.0;  ///< radians; rings only
    int two_s = 1;       ///< 2S, 1 ... 15

    bool is_infinite() const { return !sites.has_value(); }
    bool is_ring() const { return boundary == BoundaryKind::ring; }

    /// The number of sites. Needs a finite chain.
    int length() const { return sites.value(); }

    double spin() const { return two_s / 2.0; }
    /// 2S+1, the number of states of one site.
    int site_dim() const { return two_s + 1; }

    /// exp(-i twist), the factor of a raising operator carried once around the ring; exactly +-1
    /// for twist = 0 and pi.
    std::complex<double> wrap_phase() const;

    bool operator==(const Chain&) const = default;
};

/// "ring of 12 sites", "open chain of 5 sites", "infinite chain", "ring of 8 sites, twist 0.4", and
/// "ring of 12 sites of spin 3/2" where the spin is not 1/2.
std::string to_string(const Chain& chain);

/// "1/2", "1", "3/2"
std::string spin_text(int two_s);

}  // namespace chainmark
