#include "chainmark/dense/full_matrix.hpp"

#include <unsupported/Eigen/KroneckerProduct>

namespace chainmark::dense {
namespace {

template <class Scalar>
FullMatrix<Scalar> identity(Eigen::Index size) {
    FullMatrix<Scalar> result(size, size);
    result.setIdentity();
    return result;
}

/// In the basis (down, up).
template <class Scalar>
FullMatrix<Scalar> site_matrix(SiteOperator op) {
    FullMatrix<Scalar> result(2, 2);
    switch (op) {
        case SiteOperator::z:
            result.insert(0, 0) = Scalar(-0.5);
            result.insert(1, 1) = Scalar(0.5);
            break;
        case SiteOperator::plus:
            result.insert(1, 0) = Scalar(1);
            break;
        case SiteOperator::minus:
            result.insert(0, 1) = Scalar(1);
            break;
    }
    return result;
}

template <class Scalar>
Scalar as_scalar(std::complex<double> x) {
    if constexpr (std::is_same_v<Scalar, double>) {
        return x.real();
    } else {
        return x;
    }
}

/// The string on sites 0 ... length-1, growing from site 0 upwards; runs of sites without a factor
/// are taken in one step.
template <class Scalar>
FullMatrix<Scalar> string_matrix(const OperatorString& string, int length) {
    FullMatrix<Scalar> result = identity<Scalar>(1);
    int built = 0;
    for (const SiteFactor& factor : string) {
        const FullMatrix<Scalar> gap = identity<Scalar>(Eigen::Index{1} << (factor.site - built));
        const FullMatrix<Scalar> below = Eigen::kroneckerProduct(gap, result).eval();
        result = Eigen::kroneckerProduct(site_matrix<Scalar>(factor.op), below).eval();
        built = factor.site + 1;
    }
    const FullMatrix<Scalar> rest = identity<Scalar>(Eigen::Index{1} << (length - built));
    return Eigen::kroneckerProduct(rest, result).eval();
}

}  // namespace

template <class Scalar>
FullMatrix<Scalar> full_matrix(const std::vector<Term>& terms, int length) {
    const Eigen::Index size = Eigen::Index{1} << length;
    FullMatrix<Scalar> sum(size, size);
    for (const Term& term : terms) {
        sum += as_scalar<Scalar>(term.coefficient) * string_matrix<Scalar>(term.string, length);
    }
    return sum;
}

template FullMatrix<double> full_matrix(const std::vector<Term>&, int);
template FullMatrix<std::complex<double>> full_matrix(const std::vector<Term>&, int);

Eigen::VectorXd total_sz(int length) {
    std::vector<Term> terms;
    for (int site = 0; site < length; ++site) {
        terms.push_back({{{site, SiteOperator::z}}, 1.0});
    }
    return full_matrix<double>(terms, length).diagonal();
}

}  // namespace chainmark::dense
