#include "chainmark/fermion/pfaffian.hpp"

#include <cmath>
#include <random>
#include <type_traits>
#include <vector>

#include "chainmark/base/error.hpp"
#include "chainmark/base/lu_factors.hpp"

namespace chainmark::fermion {
namespace {

using Index = Eigen::Index;

template <class Scalar>
using Wide = std::conditional_t<std::is_same_v<Scalar, double>, Real, std::complex<Real>>;

std::size_t at(Index i) {
    return static_cast<std::size_t>(i);
}

constexpr Index smallest_sampled = 25;  ///< matrices below are compared element by element

/// Columns x to measure |E|_F by: all unit vectors, or random signs.
template <class T>
Matrix<T> probes(Index n) {
    constexpr Index samples = 3;
    if (n < smallest_sampled) {
        return Matrix<T>::Identity(n, n);
    }
    std::mt19937_64 generator(static_cast<std::uint64_t>(n));
    return Matrix<T>::NullaryExpr(
        n, samples, [&] { return T((generator() >> 63) == 0 ? 1.0 : -1.0); });
}

/// |E|_F from all E x, with a factor for the spread of random ones.
template <class T>
Real probed_norm(const Matrix<T>& ex) {
    constexpr Real safety = 3.0L;
    const auto norm = static_cast<Real>(ex.norm());
    return ex.rows() < smallest_sampled ? norm
                                        : safety * norm / std::sqrt(static_cast<Real>(ex.cols()));
}

/// A x - P^T L U x.
template <class T, class Scalar>
Real lu_distance(const Matrix<Scalar>& a, const LuFactors<Scalar>& lu) {
    const Matrix<T> x = probes<T>(a.rows());
    const Matrix<T> packed = lu.packed.template cast<T>();
    Matrix<T> y = packed.template triangularView<Eigen::Upper>() * x;
    y = (packed.template triangularView<Eigen::UnitLower>() * y).eval();
    for (Index i = a.rows() - 1; i >= 0; --i) {
        y.row(i).swap(y.row(lu.exchanged[at(i)]));
    }
    return probed_norm<T>(a.template cast<T>() * x - y);
}

/// The factors in place: t below the diagonal of columns k = 0, 2, ..., u in columns k+1, d = D_k
/// at (k, k+1). Row i of the factored matrix is row order[i] of the given one.
template <class Scalar>
struct AntisymmetricFactors {
    Matrix<Scalar> packed;
    std::vector<Index> order;
    bool odd = false;  ///< parity of `order`
    bool singular = false;
};

/// A x - P^T L D L^T P x, D L^T x being (d s, -r) block by block, with
///   s = x_{k+1} + sum t_i x_i,  r = d x_k + sum u_i x_i.
template <class T, class Scalar>
Real antisymmetric_distance(const Matrix<Scalar>& a, const AntisymmetricFactors<Scalar>& factors) {
    const Index n = a.rows();
    const Matrix<T> x = probes<T>(n);
    const Matrix<T> packed = factors.packed.template cast<T>();
    const Matrix<T> ordered = x(factors.order, Eigen::all);
    Matrix<T> y = Matrix<T>::Zero(n, x.cols());
    for (Index k = 0; k < n; k += 2) {
        const Index rest = n - k - 2;
        const T d = packed(k, k + 1);
        const auto t = packed.col(k).tail(rest);
        const auto u = packed.col(k + 1).tail(rest);
        const Matrix<T> s = ordered.row(k + 1) + t.transpose() * ordered.bottomRows(rest);
        const Matrix<T> r = d * ordered.row(k) + u.transpose() * ordered.bottomRows(rest);
        y.row(k) += d * s;
        y.row(k + 1) -= r;
        y.bottomRows(rest) += u * s - t * r;
    }
    Matrix<T> product(n, x.cols());
    product(factors.order, Eigen::all) = y;
    return probed_norm<T>(a.template cast<T>() * x - product);
}

template <class Scalar>
AntisymmetricFactors<Scalar> antisymmetric_factors(const Matrix<Scalar>& matrix) {
    const Index n = matrix.rows();
    AntisymmetricFactors<Scalar> factors{.packed = matrix, .order = {}};
    for (Index i = 0; i < n; ++i) {
        factors.order.push_back(i);
    }
    Matrix<Scalar>& a = factors.packed;
    for (Index k = 0; k < n; k += 2) {
        Index pivot = 0;
        a.col(k).tail(n - k - 1).cwiseAbs().maxCoeff(&pivot);
        pivot += k + 1;
        if (pivot != k + 1) {
            a.row(k + 1).swap(a.row(pivot));
            a.col(k + 1).tail(n - k).swap(a.col(pivot).tail(n - k));
            std::swap(factors.order[at(k + 1)], factors.order[at(pivot)]);
            factors.odd = !factors.odd;
        }
        const Index rest = n - k - 2;
        auto t = a.col(k).tail(rest);
        const auto u = a.col(k + 1).tail(rest);
        if (a(k + 1, k) == Scalar(0)) {  // the whole column is zero
            factors.singular = true;
            t.setZero();
            continue;
        }
        t /= a(k + 1, k);
        a.bottomRightCorner(rest, rest).noalias() -= u * t.transpose();
        a.bottomRightCorner(rest, rest).noalias() += t * u.transpose();
    }
    return factors;
}

}  // namespace

template <class Scalar>
Factored<Scalar> determinant(const Matrix<Scalar>& a) {
    const LuFactors<Scalar> lu = lu_factors(a);
    Factored<Scalar> result{.value = 1.0L};
    for (Index i = 0; i < a.rows(); ++i) {
        const std::complex<Real> pivot(lu.packed(i, i));
        result.value *= lu.exchanged[at(i)] == i ? pivot : -pivot;
    }
    result.distance =
        a.rows() < smallest_sampled ? lu_distance<Wide<Scalar>>(a, lu) : lu_distance<Scalar>(a, lu);
    return result;
}

template <class Scalar>
Factored<Scalar> pfaffian(const Matrix<Scalar>& a) {
    CHAINMARK_EXPECTS(a.rows() == a.cols() && a.rows() % 2 == 0);
    const AntisymmetricFactors<Scalar> factors = antisymmetric_factors(a);
    Factored<Scalar> result{.value = factors.odd ? -1.0L : 1.0L};
    for (Index k = 0; k < a.rows(); k += 2) {
        result.value *= std::complex<Real>(factors.packed(k, k + 1));
    }
    if (factors.singular) {
        result.value = 0.0L;
    }
    result.distance = a.rows() < smallest_sampled ? antisymmetric_distance<Wide<Scalar>>(a, factors)
                                                  : antisymmetric_distance<Scalar>(a, factors);
    return result;
}

template Factored<double> determinant(const Matrix<double>&);
template Factored<std::complex<double>> determinant(const Matrix<std::complex<double>>&);
template Factored<double> pfaffian(const Matrix<double>&);
template Factored<std::complex<double>> pfaffian(const Matrix<std::complex<double>>&);

}  // namespace chainmark::fermion
