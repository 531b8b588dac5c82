#include "chainmark/fermion/covariance_window.hpp"

#include <algorithm>
#include <cmath>
#include <random>
#include <type_traits>

namespace chainmark::fermion {

template <class Scalar>
auto CovarianceWindow<Scalar>::element(int a, int b) const -> Element {
    const auto of = [&](const GaussianState& part) {
        return part.block(a / 2,
                          b / 2)[static_cast<std::size_t>(a % 2)][static_cast<std::size_t>(b % 2)];
    };
    return {of(*parts_[0]), parts_.size() > 1 ? of(*parts_[1]) : 0.0L};
}

template <class Scalar>
Matrix<Scalar> CovarianceWindow<Scalar>::window(int first, int count) const {
    Matrix<Scalar> gamma = parts_[0]->covariance(first, count).template cast<Scalar>();
    if constexpr (!std::is_same_v<Scalar, double>) {
        if (parts_.size() > 1) {
            gamma += Scalar(0, 1) * parts_[1]->covariance(first, count);
        }
    }
    return gamma;
}

template <class Scalar>
Scalar CovarianceWindow<Scalar>::stored(int a, int b) const {
    if (count_ > 0) {
        return window_(a - 2 * first_, b - 2 * first_);
    }
    const Element exact = element(a, b);
    if constexpr (std::is_same_v<Scalar, double>) {
        return static_cast<double>(exact.real());
    } else {
        return Scalar(exact);
    }
}

template <class Scalar>
void CovarianceWindow<Scalar>::reach(int first_site, int end_site) {
    constexpr int largest_whole = 4096;
    const int sites = state().sites();
    if (state().homogeneous()) {
        if (count_ < end_site - first_site) {
            fill(0, std::min(sites, std::max(end_site - first_site, 2 * count_)));
        }
        first_ = first_site;
        return;
    }
    if (first_site < first_ || end_site > first_ + count_) {
        const bool whole = sites <= largest_whole;
        fill(whole ? 0 : first_site, whole ? sites : end_site - first_site);
    }
}

template <class Scalar>
void CovarianceWindow<Scalar>::fill(int first, int count) {
    first_ = first;
    count_ = count;
    window_ = window(first, count);
    errors_ = measured_errors();
}

template <class Scalar>
std::vector<Real> CovarianceWindow<Scalar>::measured_errors() const {
    constexpr int samples = 24;
    constexpr Real safety = 3.0L;
    std::mt19937_64 generator(static_cast<std::uint64_t>(count_));
    const auto draw = [&](int from, int end) {
        return std::uniform_int_distribution<int>(from, end - 1)(generator);
    };
    std::vector<Real> squares;
    for (int low = 0; low < count_; low = std::max(1, 2 * low)) {
        const int end = std::min(count_, std::max(1, 2 * low));
        Real sum = 0.0L;
        for (int sample = 0; sample < samples; ++sample) {
            const int distance = draw(low, end);
            const int i = draw(0, count_ - distance);
            for (int a = 2 * i; a < 2 * i + 2; ++a) {
                for (int b = 2 * (i + distance); b < 2 * (i + distance) + 2; ++b) {
                    sum +=
                        std::norm(Element(window_(a, b)) - element(a + 2 * first_, b + 2 * first_));
                }
            }
        }
        squares.push_back(safety * safety * sum / (4 * samples));
    }
    return squares;
}

/// A row of n elements has at most 4 2^s at the distances of a shell.
template <class Scalar>
Real CovarianceWindow<Scalar>::window_error(Real n) const {
    Real of_row = 0.0L;
    Real most = 0.0L;
    Real width = 2.0L;
    for (const Real square : errors_) {
        of_row += std::min(width, n) * square;
        most = std::max(most, square);
        width = width == 2.0L ? 4.0L : 2 * width;
    }
    return std::sqrt(n * std::min(of_row, n * most));
}

template <class Scalar>
Real CovarianceWindow<Scalar>::state_error(std::size_t majoranas) const {
    Real sum = 0.0L;
    for (const GaussianState* part : parts_) {
        sum += part->error(static_cast<int>(majoranas));
    }
    return largest_ * sum;
}

template <class Scalar>
Real CovarianceWindow<Scalar>::error(std::size_t majoranas) const {
    const Real n = static_cast<Real>(majoranas);
    const Real stored_error =
        count_ > 0 ? window_error(n) : double_rounding * std::sqrt(n) * largest_;
    return state_error(majoranas) + stored_error;
}

template <class Scalar>
Matrix<Scalar> CovarianceWindow<Scalar>::submatrix(const std::vector<int>& rows,
                                                   const std::vector<int>& columns) const {
    Matrix<Scalar> result(static_cast<Eigen::Index>(rows.size()),
                          static_cast<Eigen::Index>(columns.size()));
    for (Eigen::Index j = 0; j < result.cols(); ++j) {
        for (Eigen::Index i = 0; i < result.rows(); ++i) {
            result(i, j) =
                stored(rows[static_cast<std::size_t>(i)], columns[static_cast<std::size_t>(j)]);
        }
    }
    return result;
}

template class CovarianceWindow<double>;
template class CovarianceWindow<std::complex<double>>;

}  // namespace chainmark::fermion
