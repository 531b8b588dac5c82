#pragma once

#include <complex>
#include <cstddef>
#include <utility>
#include <vector>

#include "chainmark/operators/site_operator.hpp"

namespace chainmark {

/// One factor of a product that is still to be brought to canonical form: any operator of one spin
/// S = two_s / 2, as the (2S+1) x (2S+1) matrix in the basis digit 0 (lowest m) ... 2S.
///
/// Extended precision, so that sqrt(2) sqrt(2) becomes exactly 2 when the coefficients are rounded
/// to double at the end.
struct SiteMatrix {
    using Entry = std::complex<long double>;

    std::vector<Entry> entries;  ///< row major

    /// 2S+1
    std::size_t dim() const;

    static SiteMatrix zero(int two_s = 1);
    static SiteMatrix identity(int two_s = 1);
    static SiteMatrix sx(int two_s = 1);
    static SiteMatrix sy(int two_s = 1);
    static SiteMatrix sz(int two_s = 1);
    static SiteMatrix raising(int two_s = 1);   ///< S+
    static SiteMatrix lowering(int two_s = 1);  ///< S-
};

/// The matrix of one of the operators that span a spin.
SiteMatrix to_matrix(SiteOperator op, int two_s);

/// The product; entries that cancel to within their rounding are 0. Needs equal spins.
SiteMatrix operator*(const SiteMatrix& a, const SiteMatrix& b);

/// The difference; entries that cancel to within their rounding are 0.
SiteMatrix operator-(const SiteMatrix& a, const SiteMatrix& b);

/// identity * I + sum_i coefficient_i op_i, without zero coefficients, ascending in the operator.
struct SiteExpansion {
    std::complex<long double> identity;
    std::vector<std::pair<SiteOperator, std::complex<long double>>> operators;
};

/// The matrix in the operators that span one spin. Coefficients that cancel to within their
/// rounding are 0.
SiteExpansion expand(const SiteMatrix& matrix);

}  // namespace chainmark
