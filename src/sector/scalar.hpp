#pragma once

#include <complex>
#include <type_traits>

#include "chainmark/base/error.hpp"

namespace chainmark::sector {

/// A complex number as the scalar of a sector; real sectors hold nothing but real numbers.
template <class Scalar>
Scalar as_scalar(std::complex<double> value) {
    if constexpr (std::is_same_v<Scalar, double>) {
        CHAINMARK_EXPECTS(value.imag() == 0.0);
        return value.real();
    } else {
        return value;
    }
}

}  // namespace chainmark::sector
