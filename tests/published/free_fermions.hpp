#pragma once

#include <vector>

/// Free fermions written out for these checks alone; nothing here uses the library.
///
/// The ring H = J sum_j [(1+gamma) Sx_j Sx_{j+1} + (1-gamma) Sy_j Sy_{j+1}] - h sum_j Sz_j after
/// the Jordan-Wigner transformation: momenta k = (2n+1) pi/L where the number of up spins is even,
/// k = 2 pi n/L where it is odd; with e_k = J cos k - h,
///   H = sum_k w_k (occupation_k - 1/2),  w_k = sqrt(e_k^2 + (gamma J sin k)^2),
/// except that k = 0 and k = pi have no partner and enter with their sign, w_k = e_k. The parity of
/// the occupations is that of the up count. gamma = 0: XX. J -> J/2, gamma = 1: the Ising chain
/// J sum Sx Sx in the transverse field h.
/// Sources: E. Lieb, T. Schultz, D. Mattis, Ann. Phys. (NY) 16, 407 (1961); S. Katsura, Phys. Rev.
/// 127, 1508 (1962); P. Pfeuty, Ann. Phys. (NY) 57, 79 (1970).
namespace chainmark::test {

struct XyRing {
    int sites;
    double coupling_j;
    double gamma;
    double field_h;
};

enum class UpCount { even, odd };

/// w_k over the L momenta of a parity.
std::vector<double> modes(const XyRing& ring, UpCount parity);

/// The lowest level with an even or odd number of up spins.
double lowest_level(const XyRing& ring, UpCount parity);

/// All 2^L levels, ascending.
std::vector<double> all_levels(const XyRing& ring);

/// The lowest level of an XX ring with `ups` up spins at h = 0. With x = pi/L, the occupied momenta
/// fill the band's bottom symmetrically where they can (J < 0, or even L):
///   E = -|J| sin(N x)/sin x;
/// on an odd ring with J > 0 the grid never fits and one momentum is left over:
///   E = -J [sin((N-1) x)/sin x + cos(N x)].
double xx_lowest(int sites, double coupling_j, int ups);

}  // namespace chainmark::test
