#include "chainmark/sector/inertia.hpp"

#include <cmath>

#include <Eigen/SparseCholesky>

#include "chainmark/base/numerics.hpp"

namespace chainmark::sector {
namespace {

/// Eigen's factorization, which knows after its symbolic phase what the numeric one will take.
template <class Scalar>
class Factors : public Eigen::SimplicialLDLT<Eigen::SparseMatrix<Scalar>> {
public:
    double operations() const {
        double sum = 0.0;
        for (const auto count : this->m_nonZerosPerCol) {
            sum += static_cast<double>(count) * static_cast<double>(count);
        }
        return sum;
    }
};

}  // namespace

template <class Scalar>
std::optional<Inertia> count_below(const Eigen::SparseMatrix<Scalar>& matrix,
                                   double shift,
                                   double most_operations) {
    Eigen::SparseMatrix<Scalar> shifted(matrix.rows(), matrix.cols());
    shifted.setIdentity();
    shifted = matrix - Scalar(shift) * shifted;
    Factors<Scalar> factors;
    factors.analyzePattern(shifted);
    if (factors.operations() > most_operations) {
        return std::nullopt;
    }
    factors.factorize(shifted);
    if (factors.info() != Eigen::Success) {
        return std::nullopt;
    }
    const Eigen::VectorXd pivots = factors.vectorD().real();
    Inertia result;
    result.below = (pivots.array() < 0.0).count();
    const Eigen::SparseMatrix<Scalar> stored = factors.matrixL();
    Eigen::SparseMatrix<double> lower = stored.cwiseAbs();
    const Eigen::VectorXd ones = Eigen::VectorXd::Ones(matrix.rows());
    // matrixL() leaves out the unit diagonal.
    const Eigen::VectorXd sums = lower.transpose() * ones + ones;
    const Eigen::VectorXd scaled = pivots.cwiseAbs().cwiseProduct(sums);
    const double norm = (lower * scaled + scaled).maxCoeff();
    result.error = 2 * (static_cast<double>(matrix.rows()) + 1.0) * epsilon * norm;
    if (!std::isfinite(result.error)) {
        return std::nullopt;
    }
    return result;
}

template std::optional<Inertia> count_below(const Eigen::SparseMatrix<double>&, double, double);
template std::optional<Inertia> count_below(const Eigen::SparseMatrix<std::complex<double>>&,
                                            double,
                                            double);

}  // namespace chainmark::sector
