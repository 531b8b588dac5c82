#include "chainmark/dense/local_matrix.hpp"

#include <cmath>

#include "chainmark/base/error.hpp"

namespace chainmark::dense {

LocalMatrix raising(int two_s) {
    // <m+1|S+|m> = sqrt(S(S+1) - m(m+1)) = sqrt((S-m)(S+m+1)); with the digit d = S+m that is
    // sqrt((2S-d)(d+1))
    LocalMatrix result = LocalMatrix::Zero(two_s + 1, two_s + 1);
    for (int digit = 0; digit < two_s; ++digit) {
        result(digit + 1, digit) = std::sqrt(static_cast<double>((two_s - digit) * (digit + 1)));
    }
    return result;
}

LocalMatrix spin_component(Axis axis, int two_s) {
    const std::complex<double> i(0.0, 1.0);
    const LocalMatrix plus = raising(two_s);
    const LocalMatrix minus = plus.adjoint();
    switch (axis) {
        case Axis::x:
            return (plus + minus) / 2.0;
        case Axis::y:
            return (plus - minus) * (-0.5 * i);
        case Axis::z:
            break;
    }
    LocalMatrix result = LocalMatrix::Zero(two_s + 1, two_s + 1);
    for (int digit = 0; digit <= two_s; ++digit) {
        result(digit, digit) = digit - two_s / 2.0;
    }
    return result;
}

LocalMatrix local_matrix(SiteOperator op, int two_s) {
    LocalMatrix result = LocalMatrix::Zero(two_s + 1, two_s + 1);
    if (!op.is_diagonal()) {
        result(op.to, op.from) = 1.0;
        return result;
    }
    for (int digit = 0; digit <= two_s; ++digit) {
        result(digit, digit) = gram_value(two_s, op.degree, digit);
    }
    return result;
}

LocalMatrix string_factor(Axis axis, int two_s) {
    if (two_s == 1) {
        return 2.0 * spin_component(axis, two_s);
    }
    CHAINMARK_EXPECTS(two_s % 2 == 0);
    LocalMatrix result = LocalMatrix::Zero(two_s + 1, two_s + 1);
    for (int digit = 0; digit <= two_s; ++digit) {
        const int m = digit - two_s / 2;
        switch (axis) {
            case Axis::x:
                result(two_s - digit, digit) = (two_s / 2) % 2 == 0 ? 1.0 : -1.0;
                break;
            case Axis::y:  // S+m is the digit
                result(two_s - digit, digit) = digit % 2 == 0 ? 1.0 : -1.0;
                break;
            case Axis::z:
                result(digit, digit) = m % 2 == 0 ? 1.0 : -1.0;
                break;
        }
    }
    return result;
}

LocalMatrix carried_around(const LocalMatrix& matrix, std::complex<double> phase) {
    LocalMatrix result = matrix;
    std::complex<double> power = 1.0;
    for (Eigen::Index raised = 1; raised < matrix.rows(); ++raised) {
        power *= phase;
        result.diagonal(-raised) *= power;
        result.diagonal(raised) *= std::conj(power);
    }
    return result;
}

double norm_bound(const LocalMatrix& matrix) {
    const Eigen::MatrixXd sizes = matrix.cwiseAbs();
    return std::sqrt(sizes.rowwise().sum().maxCoeff() * sizes.colwise().sum().maxCoeff());
}

}  // namespace chainmark::dense
