#pragma once

/// The Bethe equations of the XXZ ring, solved for these checks alone; nothing here uses the
/// library.
namespace chainmark::test {

/// Lowest level with `downs` <= L/2 down spins of the ring H = sum_j (Sx Sx + Sy Sy + Delta Sz Sz),
/// Delta > -1. With momenta p_j counted from the bottom of the band of one reversed spin,
///   L p_j = 2 pi I_j - sum_l Theta(p_j, p_l),
///   tan(Theta(p, q)/2) = -Delta sin((p-q)/2) / [cos((p+q)/2) + Delta cos((p-q)/2)],
///   E = L Delta/4 - sum_j (cos p_j + Delta).
/// I_j are consecutive, symmetric on even rings and shifted by 1/2 on odd ones.
/// Sources: H. Bethe, Z. Phys. 71, 205 (1931); R. Orbach, Phys. Rev. 112, 309 (1958); C. N. Yang,
/// C. P. Yang, Phys. Rev. 150, 321 (1966); the form with p is quoted from memory, with Delta ->
/// -Delta for the sign of H, and agrees with direct diagonalization of 3 to 10 sites.
double bethe_lowest(int sites, int downs, double delta);

}  // namespace chainmark::test
