#include "chainmark/dense/full_matrix.hpp"

#include <map>

#include <unsupported/Eigen/KroneckerProduct>

#include "chainmark/base/numerics.hpp"

namespace chainmark::dense {
namespace {

template <class Scalar>
Scalar as_scalar(std::complex<double> x) {
    if constexpr (std::is_same_v<Scalar, double>) {
        return x.real();
    } else {
        return x;
    }
}

template <class Scalar>
FullMatrix<Scalar> identity(Eigen::Index size) {
    FullMatrix<Scalar> result(size, size);
    result.setIdentity();
    return result;
}

template <class Scalar>
FullMatrix<Scalar> as_sparse(const LocalMatrix& matrix) {
    FullMatrix<Scalar> result(matrix.rows(), matrix.cols());
    for (Eigen::Index row = 0; row < matrix.rows(); ++row) {
        for (Eigen::Index col = 0; col < matrix.cols(); ++col) {
            if (matrix(row, col) != 0.0) {
                result.insert(row, col) = as_scalar<Scalar>(matrix(row, col));
            }
        }
    }
    return result;
}

/// The product of one matrix a site, growing from site 0 upwards; runs of sites without a factor
/// are taken in one step.
template <class Scalar>
FullMatrix<Scalar> kronecker(const std::map<int, LocalMatrix>& factors, int length, int two_s) {
    FullMatrix<Scalar> result = identity<Scalar>(1);
    int built = 0;
    for (const auto& [site, matrix] : factors) {
        const FullMatrix<Scalar> gap = identity<Scalar>(full_dim(site - built, two_s));
        const FullMatrix<Scalar> below = Eigen::kroneckerProduct(gap, result).eval();
        result = Eigen::kroneckerProduct(as_sparse<Scalar>(matrix), below).eval();
        built = site + 1;
    }
    const FullMatrix<Scalar> rest = identity<Scalar>(full_dim(length - built, two_s));
    return Eigen::kroneckerProduct(rest, result).eval();
}

/// The sum of products first ... last-1; adds their norms to `norm`. By halves, since every
/// addition copies both matrices.
FullMatrix<std::complex<double>> sum_of(const std::vector<Product>& products,
                                        std::size_t first,
                                        std::size_t last,
                                        int length,
                                        int two_s,
                                        double& norm) {
    using Complex = std::complex<double>;
    if (first == last) {
        return {full_dim(length, two_s), full_dim(length, two_s)};
    }
    if (last - first > 1) {
        const std::size_t middle = (first + last) / 2;
        const auto below = sum_of(products, first, middle, length, two_s, norm);
        const auto above = sum_of(products, middle, last, length, two_s, norm);
        return below + above;
    }
    const Product& product = products[first];
    std::map<int, LocalMatrix> factors;
    for (const Factor& factor : product.factors) {
        const auto [at, fresh] = factors.emplace(factor.site, factor.matrix);
        if (!fresh) {
            at->second = (at->second * factor.matrix).eval();
        }
    }
    double size = std::abs(product.weight);
    for (const auto& [site, matrix] : factors) {
        size *= norm_bound(matrix);
    }
    norm += size;
    return product.weight * kronecker<Complex>(factors, length, two_s);
}

}  // namespace

Eigen::Index full_dim(int length, int two_s) {
    Eigen::Index dim = 1;
    for (int site = 0; site < length; ++site) {
        dim *= two_s + 1;
    }
    return dim;
}

template <class Scalar>
FullMatrix<Scalar> full_matrix(const std::vector<Term>& terms, int length, int two_s) {
    const Eigen::Index size = full_dim(length, two_s);
    FullMatrix<Scalar> sum(size, size);
    for (const Term& term : terms) {
        std::map<int, LocalMatrix> factors;
        for (const SiteFactor& factor : term.string) {
            factors.emplace(factor.site, local_matrix(factor.op, two_s));
        }
        sum += as_scalar<Scalar>(term.coefficient) * kronecker<Scalar>(factors, length, two_s);
    }
    return sum;
}

template FullMatrix<double> full_matrix(const std::vector<Term>&, int, int);
template FullMatrix<std::complex<double>> full_matrix(const std::vector<Term>&, int, int);

MatrixScale scale_of(const std::vector<Term>& terms, int length, int two_s) {
    const Eigen::Index size = full_dim(length, two_s);
    Eigen::VectorXd sums = Eigen::VectorXd::Zero(size);
    Eigen::VectorXd counts = Eigen::VectorXd::Zero(size);
    for (const Term& term : terms) {
        std::map<int, LocalMatrix> factors;
        for (const SiteFactor& factor : term.string) {
            factors.emplace(factor.site, local_matrix(factor.op, two_s).cwiseAbs());
        }
        const auto string = kronecker<double>(factors, length, two_s);
        for (Eigen::Index row = 0; row < size; ++row) {
            for (FullMatrix<double>::InnerIterator it(string, row); it; ++it) {
                sums[row] += std::abs(term.coefficient) * it.value();
                counts[row] += 1.0;
            }
        }
    }
    const double weight = sums.maxCoeff();
    return {weight, (counts.maxCoeff() + 2) * epsilon / 2 * weight};
}

Eigen::VectorXd total_sz(int length, int two_s) {
    std::vector<Term> terms;
    for (int site = 0; site < length; ++site) {
        terms.push_back({{{site, SiteOperator::z}}, 1.0});
    }
    return full_matrix<double>(terms, length, two_s).diagonal();
}

FullOperator full_operator(const std::vector<Product>& products, int length, int two_s) {
    FullOperator result;
    const FullMatrix<std::complex<double>> sum =
        sum_of(products, 0, products.size(), length, two_s, result.norm);
    result.real = sum.real();
    result.imaginary = sum.imag();
    result.real.prune(0.0, 0.0);
    result.imaginary.prune(0.0, 0.0);
    return result;
}

}  // namespace chainmark::dense
