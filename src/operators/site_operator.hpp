#pragma once

#include <compare>
#include <cstdint>
#include <string>

/// The operators of one spin S = two_s / 2. Its states are digits 0 ... two_s, counted from the
/// lowest: digit = m + S.
namespace chainmark {

/// The largest 2S there is.
inline constexpr int largest_two_s = 15;

/// One of the (2S+1)^2 - 1 operators that, with the identity, span all operators of one spin:
/// Sz[k], k = 1 ... 2S, and |to><from| with to != from.
///
/// Sz[k] is the polynomial in Sz of degree k with leading coefficient 1 that is orthogonal, under
/// the trace, to all of lower degree: Sz[1] = Sz, Sz[2] = Sz^2 - S(S+1)/3, ... So all of them are
/// traceless, Tr Sz[k] Sz[l] = 0 for k != l, and Hermitian conjugation maps each operator to one of
/// them.
struct SiteOperator {
    std::uint8_t degree = 0;  ///< k of Sz[k]; 0 for |to><from|
    std::uint8_t to = 0;      ///< digits; both 0 for Sz[k]
    std::uint8_t from = 0;

    bool is_diagonal() const { return degree > 0; }
    /// By how much the operator raises Sz.
    int raises_by() const { return int{to} - int{from}; }

    static const SiteOperator z;      ///< Sz, for every S
    static const SiteOperator plus;   ///< |1><0|: S+ of S = 1/2
    static const SiteOperator minus;  ///< |0><1|: S- of S = 1/2

    /// Sz < Sz[2] < ... < |a><b|, these with the highest a first: z < plus < minus.
    std::strong_ordering operator<=>(const SiteOperator& other) const {
        return rank() <=> other.rank();
    }
    bool operator==(const SiteOperator&) const = default;

private:
    int rank() const { return is_diagonal() ? degree : (1 << 16) - (int{to} << 8) - int{from}; }
};

inline constexpr SiteOperator SiteOperator::z{1, 0, 0};
inline constexpr SiteOperator SiteOperator::plus{0, 1, 0};
inline constexpr SiteOperator SiteOperator::minus{0, 0, 1};

/// The Hermitian conjugate.
SiteOperator conjugate(SiteOperator op);

/// The element of Sz[degree] at `digit`; degree 0 is the identity. Needs 0 <= degree, digit <=
/// two_s.
///
/// These are the discrete Legendre (Gram) polynomials on the 2S+1 points digit = 0 ... 2S. With
/// leading coefficient 1 they are k! / C(2k, k) times the integer
///   sum_{i=0}^{k} (-1)^(k-i) C(2S - i, k - i) C(k + i, k) C(digit, i)
/// (common practice, no source).
double gram_value(int two_s, int degree, int digit);

/// The same in extended precision.
long double wide_gram_value(int two_s, int degree, int digit);

/// m of a digit: "+1", "0", "-1/2".
std::string magnetic_number(int two_s, int digit);

/// "Sz", "Sz[2]", "|+1><0|"; "S+" and "S-" for S = 1/2.
std::string to_string(SiteOperator op, int two_s);

}  // namespace chainmark
