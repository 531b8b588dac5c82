#include "chainmark/dense/full_spectrum.hpp"

#include <algorithm>
#include <cmath>
#include <map>
#include <numeric>

#include "chainmark/base/hermitian_eigen.hpp"
#include "chainmark/base/numerics.hpp"

namespace chainmark::dense {
namespace {

/// [H, M]_{ab} = H_ab (M_b - M_a)
template <class Scalar>
bool commutes(const FullMatrix<Scalar>& matrix, const Eigen::VectorXd& total_sz) {
    for (Eigen::Index row = 0; row < matrix.rows(); ++row) {
        for (typename FullMatrix<Scalar>::InnerIterator it(matrix, row); it; ++it) {
            if (it.value() != Scalar(0) && total_sz[it.row()] != total_sz[it.col()]) {
                return false;
            }
        }
    }
    return true;
}

template <class Scalar>
std::span<const Scalar> column(const Eigen::Matrix<Scalar, -1, -1>& matrix, Eigen::Index i) {
    return {matrix.col(i).data(), static_cast<std::size_t>(matrix.rows())};
}

double real_part(double x) {
    return x;
}
double real_part(std::complex<double> x) {
    return x.real();
}

Eigen::MatrixXcd widened(const Eigen::MatrixXd& matrix) {
    return matrix.cast<std::complex<double>>();
}
const Eigen::MatrixXcd& widened(const Eigen::MatrixXcd& matrix) {
    return matrix;
}

Eigen::MatrixXcd apply(const FullOperator& a, const Eigen::MatrixXd& states) {
    Eigen::MatrixXcd image(states.rows(), states.cols());
    image.real() = a.real * states;
    image.imag() = a.imaginary * states;
    return image;
}

Eigen::MatrixXcd apply(const FullOperator& a, const Eigen::MatrixXcd& states) {
    Eigen::MatrixXcd image = a.real * states;
    if (a.imaginary.nonZeros() > 0) {
        image += std::complex<double>(0.0, 1.0) * (a.imaginary * states);
    }
    return image;
}

}  // namespace

template <class Scalar>
FullSpectrum<Scalar>::FullSpectrum(const Problem& problem, const Context& context)
    : length_(problem.chain.length()),
      two_s_(problem.chain.two_s),
      total_sz_(dense::total_sz(length_, two_s_)) {
    std::vector<Term> terms = problem.terms->terms;
    FullMatrix<Scalar> hamiltonian = full_matrix<Scalar>(terms, length_, two_s_);
    poll(context);
    commutes_ = commutes(hamiltonian, total_sz_);
    if (!commutes_) {
        terms = full_terms(problem).terms;
        hamiltonian = full_matrix<Scalar>(terms, length_, two_s_);
    }
    const MatrixScale scale = scale_of(terms, length_, two_s_);
    const double lift = scale.weight > 0 ? 2.5 * scale.weight : 1.0;
    solve(hamiltonian, commutes_ ? lift : 0.0, scale.noise);
    energies_.array() += problem.terms->constant;
    constant_rounding_ = epsilon * std::abs(problem.terms->constant);
    bounds_.array() += constant_rounding_;
    noise_of_matrix_ = scale.noise;
    noise_ = scale.noise + constant_rounding_ + epsilon * energies_.cwiseAbs().maxCoeff();
    poll(context);
}

template <class Scalar>
void FullSpectrum<Scalar>::solve(const FullMatrix<Scalar>& hamiltonian, double lift, double noise) {
    Vectors lifted = Vectors(hamiltonian);
    lifted.diagonal() += (lift * total_sz_).template cast<Scalar>();
    vectors_ = hermitian_eigen(std::move(lifted)).vectors;

    // Energies are Rayleigh quotients with H itself, so the lift costs no digits; the residual is
    // measured with H too.
    const Eigen::Index n = vectors_.cols();
    energies_.resize(n);
    residuals_.resize(n);
    sz_.resize(n);
    const Vectors image = hamiltonian * vectors_;
    for (Eigen::Index i = 0; i < n; ++i) {
        const double norm = real_part(accurate_dot(column(vectors_, i), column(vectors_, i)));
        energies_[i] = real_part(accurate_dot(column(vectors_, i), column(image, i))) / norm;
        const Scalar energy(energies_[i]);
        residuals_[i] = (image.col(i) - energy * vectors_.col(i)).norm() / std::sqrt(norm) + noise;
        sz_[i] = std::round(2 * vectors_.col(i).cwiseAbs2().dot(total_sz_)) / 2 + 0.0;  // no -0
    }
    std::vector<Eigen::Index> order(static_cast<std::size_t>(n));
    std::iota(order.begin(), order.end(), Eigen::Index{0});
    std::sort(order.begin(), order.end(), [&](Eigen::Index a, Eigen::Index b) {
        return energies_[a] < energies_[b];
    });
    const Eigen::VectorXd sorted = cluster_bounds(energies_(order), residuals_(order));
    bounds_.resize(n);
    bounds_(order) = sorted;
}

template <class Scalar>
std::vector<Level> FullSpectrum<Scalar>::levels(double field) const {
    std::vector<Level> result;
    result.reserve(static_cast<std::size_t>(energies_.size()));
    for (Eigen::Index i = 0; i < energies_.size(); ++i) {
        const double shift = commutes_ ? -field * sz_[i] : 0.0;
        const double rounding =
            constant_rounding_ + epsilon * (std::abs(shift) + std::abs(energies_[i]));
        result.push_back({energies_[i] + shift, residuals_[i] + rounding, i});
    }
    std::sort(result.begin(), result.end(), [](const Level& a, const Level& b) {
        return a.energy < b.energy;
    });
    // The field moves levels past each other: which of them form clusters is known only now.
    const auto size = static_cast<Eigen::Index>(result.size());
    Eigen::VectorXd energies(size);
    Eigen::VectorXd residuals(size);
    for (Eigen::Index i = 0; i < size; ++i) {
        energies[i] = result[static_cast<std::size_t>(i)].energy;
        residuals[i] = result[static_cast<std::size_t>(i)].bound;
    }
    const Eigen::VectorXd bounds = cluster_bounds(energies, residuals);
    for (Eigen::Index i = 0; i < size; ++i) {
        result[static_cast<std::size_t>(i)].bound = bounds[i];
    }
    return result;
}

template <class Scalar>
std::vector<SzMinimum> FullSpectrum<Scalar>::lowest_by_sz() const {
    std::map<double, SzMinimum> lowest;
    for (Eigen::Index i = 0; i < energies_.size(); ++i) {
        const SzMinimum level = {sz_[i], energies_[i], bounds_[i]};
        const auto [at, fresh] = lowest.emplace(sz_[i], level);
        if (!fresh && level.energy < at->second.energy) {
            at->second = level;
        }
    }
    std::vector<SzMinimum> result;
    for (const auto& [sz, level] : lowest) {
        result.push_back(level);
    }
    return result;
}

template <class Scalar>
Eigen::MatrixXcd FullSpectrum<Scalar>::elements(const FullOperator& a,
                                                const std::vector<Eigen::Index>& of) const {
    const Eigen::Index n = static_cast<Eigen::Index>(of.size());
    const Vectors states = vectors_(Eigen::all, of);
    const Eigen::MatrixXcd image = apply(a, states);
    const Eigen::MatrixXcd& wide = widened(states);
    Eigen::MatrixXcd result(n, n);
    for (Eigen::Index i = 0; i < n; ++i) {
        for (Eigen::Index j = 0; j < n; ++j) {
            result(i, j) = accurate_dot(column(wide, i), column(image, j));
        }
    }
    return result;
}

template <class Scalar>
Eigen::VectorXcd FullSpectrum<Scalar>::diagonal(const FullOperator& a,
                                                const Context& context) const {
    constexpr Eigen::Index at_a_time = 64;  // columns, to keep the copies small
    Eigen::VectorXcd result(dim());
    for (Eigen::Index first = 0; first < dim(); first += at_a_time) {
        poll(context);
        const Eigen::Index count = std::min(at_a_time, dim() - first);
        const Vectors states = vectors_.middleCols(first, count);
        const Eigen::MatrixXcd image = apply(a, states);
        const Eigen::MatrixXcd& wide = widened(states);
        for (Eigen::Index i = 0; i < count; ++i) {
            result[first + i] = accurate_dot(column(wide, i), column(image, i));
        }
    }
    return result;
}

template <class Scalar>
Eigen::VectorXcd FullSpectrum<Scalar>::components(const Eigen::VectorXcd& x) const {
    if constexpr (std::is_same_v<Scalar, double>) {
        Eigen::VectorXcd result(dim());
        result.real() = vectors_.transpose() * x.real();
        result.imag() = vectors_.transpose() * x.imag();
        return result;
    } else {
        return vectors_.adjoint() * x;
    }
}

template <class Scalar>
Eigen::VectorXcd FullSpectrum<Scalar>::combination(const Eigen::VectorXcd& c) const {
    if constexpr (std::is_same_v<Scalar, double>) {
        Eigen::VectorXcd result(dim());
        result.real() = vectors_ * c.real();
        result.imag() = vectors_ * c.imag();
        return result;
    } else {
        return vectors_ * c;
    }
}

template class FullSpectrum<double>;
template class FullSpectrum<std::complex<double>>;

}  // namespace chainmark::dense
