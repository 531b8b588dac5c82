#include "chainmark/operators/site_matrix.hpp"

#include <algorithm>
#include <cmath>

#include "chainmark/base/error.hpp"

namespace chainmark {
namespace {

using Wide = std::complex<long double>;

/// A sum in extended precision that knows the scale of its rounding.
class WatchedSum {
public:
    void add(Wide value) {
        sum_ += value;
        weight_ += std::abs(value);
    }
    /// The sum; 0 where it is no more than the rounding of its parts.
    Wide value() const {
        constexpr long double rounding = 0x1p-58L;
        return std::abs(sum_) <= rounding * weight_ ? Wide(0) : sum_;
    }

private:
    Wide sum_;
    long double weight_ = 0.0L;
};

std::size_t dim_of(int two_s) {
    CHAINMARK_EXPECTS(two_s >= 1 && two_s <= largest_two_s);
    return static_cast<std::size_t>(two_s) + 1;
}

SiteMatrix combined(Wide a, const SiteMatrix& x, Wide b, const SiteMatrix& y) {
    SiteMatrix sum = x;
    for (std::size_t i = 0; i < sum.entries.size(); ++i) {
        sum.entries[i] = a * x.entries[i] + b * y.entries[i];
    }
    return sum;
}

/// Tr(Sz[degree] matrix) / Tr(Sz[degree]^2)
Wide diagonal_part(const SiteMatrix& matrix, int degree) {
    const std::size_t dim = matrix.dim();
    const int two_s = static_cast<int>(dim) - 1;
    WatchedSum overlap;
    long double norm = 0.0L;
    for (std::size_t digit = 0; digit < dim; ++digit) {
        const long double value = wide_gram_value(two_s, degree, static_cast<int>(digit));
        overlap.add(value * matrix.entries[digit * dim + digit]);
        norm += value * value;
    }
    return overlap.value() / norm;
}

}  // namespace

std::size_t SiteMatrix::dim() const {
    return static_cast<std::size_t>(std::lround(std::sqrt(static_cast<double>(entries.size()))));
}

SiteMatrix SiteMatrix::zero(int two_s) {
    return {std::vector<Entry>(dim_of(two_s) * dim_of(two_s))};
}

SiteMatrix SiteMatrix::identity(int two_s) {
    SiteMatrix result = zero(two_s);
    for (std::size_t i = 0; i < result.entries.size(); i += dim_of(two_s) + 1) {
        result.entries[i] = 1.0L;
    }
    return result;
}

SiteMatrix SiteMatrix::sz(int two_s) {
    SiteMatrix result = zero(two_s);
    for (std::size_t digit = 0; digit < dim_of(two_s); ++digit) {
        result.entries[digit * (dim_of(two_s) + 1)] =
            static_cast<long double>(digit) - two_s / 2.0L;
    }
    return result;
}

// <m+1|S+|m>^2 = S(S+1) - m(m+1) = (digit + 1) (2S - digit)
SiteMatrix SiteMatrix::raising(int two_s) {
    SiteMatrix result = zero(two_s);
    const std::size_t dim = dim_of(two_s);
    for (std::size_t digit = 0; digit + 1 < dim; ++digit) {
        const std::size_t square = (digit + 1) * (dim - 1 - digit);
        result.entries[(digit + 1) * dim + digit] = std::sqrt(static_cast<long double>(square));
    }
    return result;
}

SiteMatrix SiteMatrix::lowering(int two_s) {
    SiteMatrix result = zero(two_s);
    const SiteMatrix up = raising(two_s);
    const std::size_t dim = dim_of(two_s);
    for (std::size_t digit = 0; digit + 1 < dim; ++digit) {
        result.entries[digit * dim + digit + 1] = up.entries[(digit + 1) * dim + digit];
    }
    return result;
}

SiteMatrix SiteMatrix::sx(int two_s) {
    return combined(0.5L, raising(two_s), 0.5L, lowering(two_s));
}

// Sy = (S+ - S-)/(2i)
SiteMatrix SiteMatrix::sy(int two_s) {
    return combined(Wide(0, -0.5L), raising(two_s), Wide(0, 0.5L), lowering(two_s));
}

SiteMatrix to_matrix(SiteOperator op, int two_s) {
    SiteMatrix result = SiteMatrix::zero(two_s);
    const std::size_t dim = dim_of(two_s);
    if (!op.is_diagonal()) {
        result.entries[op.to * dim + op.from] = 1.0L;
        return result;
    }
    for (std::size_t digit = 0; digit < dim; ++digit) {
        result.entries[digit * (dim + 1)] =
            wide_gram_value(two_s, op.degree, static_cast<int>(digit));
    }
    return result;
}

SiteMatrix operator-(const SiteMatrix& a, const SiteMatrix& b) {
    CHAINMARK_EXPECTS(a.entries.size() == b.entries.size());
    SiteMatrix difference = a;
    for (std::size_t i = 0; i < a.entries.size(); ++i) {
        WatchedSum sum;
        sum.add(a.entries[i]);
        sum.add(-b.entries[i]);
        difference.entries[i] = sum.value();
    }
    return difference;
}

SiteMatrix operator*(const SiteMatrix& a, const SiteMatrix& b) {
    CHAINMARK_EXPECTS(a.entries.size() == b.entries.size());
    const std::size_t dim = a.dim();
    SiteMatrix product{std::vector<Wide>(dim * dim)};
    for (std::size_t row = 0; row < dim; ++row) {
        for (std::size_t column = 0; column < dim; ++column) {
            WatchedSum sum;
            for (std::size_t k = 0; k < dim; ++k) {
                sum.add(a.entries[row * dim + k] * b.entries[k * dim + column]);
            }
            product.entries[row * dim + column] = sum.value();
        }
    }
    return product;
}

SiteExpansion expand(const SiteMatrix& matrix) {
    const std::size_t dim = matrix.dim();
    SiteExpansion result;
    result.identity = diagonal_part(matrix, 0);
    const auto append = [&](SiteOperator op, Wide coefficient) {
        if (coefficient != Wide(0)) {
            result.operators.emplace_back(op, coefficient);
        }
    };
    for (std::size_t degree = 1; degree < dim; ++degree) {
        append({static_cast<std::uint8_t>(degree), 0, 0},
               diagonal_part(matrix, static_cast<int>(degree)));
    }
    for (std::size_t to = 0; to < dim; ++to) {
        for (std::size_t from = 0; from < dim; ++from) {
            if (to != from) {
                append({0, static_cast<std::uint8_t>(to), static_cast<std::uint8_t>(from)},
                       matrix.entries[to * dim + from]);
            }
        }
    }
    std::sort(result.operators.begin(), result.operators.end(), [](const auto& a, const auto& b) {
        return a.first < b.first;
    });
    return result;
}

}  // namespace chainmark
