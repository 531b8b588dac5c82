#include "chainmark/dense/ground.hpp"

#include <algorithm>
#include <cmath>

#include <Eigen/Eigenvalues>

#include "chainmark/base/numerics.hpp"

namespace chainmark::dense {
namespace {

constexpr std::size_t largest_range_space = 256;  ///< ground spaces above it get no range
constexpr std::size_t watched_levels = 6;         ///< above the ground space

}  // namespace

Ground ground_of(std::vector<Level> levels, double window) {
    Ground ground{.levels = std::move(levels)};
    const Level& lowest = ground.levels.front();
    for (const Level& level : ground.levels) {
        const double distance = level.energy - lowest.energy - window;
        if (std::abs(distance) <= level.bound + lowest.bound && window > 0) {
            ground.straddles = true;
        }
        ground.degeneracy += distance <= 0 ? 1 : 0;
    }
    return ground;
}

template <class Scalar>
GroundAverages<Scalar>::GroundAverages(const Ground& ground, const FullSpectrum<Scalar>& spectrum)
    : spectrum_(spectrum), degeneracy_(ground.degeneracy) {
    double squares = 0.0;
    const std::size_t last = std::min(degeneracy_ + watched_levels, ground.levels.size());
    const double top = ground.levels[degeneracy_ - 1].energy;
    for (std::size_t i = 0; i < last; ++i) {
        const Level& level = ground.levels[i];
        vectors_.push_back(level.vector);
        if (i < degeneracy_) {
            squares += std::pow(spectrum.residual(level.vector), 2);
        } else {
            gaps_.push_back(level.energy - top);
        }
    }
    residual_ = std::sqrt(squares);
    if (last < ground.levels.size()) {
        rest_ = ground.levels[last].energy - top;
    }
}

template <class Scalar>
double GroundAverages<Scalar>::tilt() const {
    const double nearest = gaps_.empty() ? 0.0 : gaps_.front();
    return nearest > 0 ? std::min(1.0, residual_ / nearest) : 0.0;
}

template <class Scalar>
Average GroundAverages<Scalar>::trace_alone(const FullOperator& a) const {
    Average average;
    for (std::size_t i = 0; i < degeneracy_; ++i) {
        average.value +=
            spectrum_.elements(a, {vectors_[i]})(0, 0) / static_cast<double>(degeneracy_);
    }
    average.bound = a.norm * (2 * tilt() + 32 * epsilon);
    return average;
}

template <class Scalar>
Average GroundAverages<Scalar>::of(const FullOperator& a) const {
    if (degeneracy_ > largest_range_space) {
        return trace_alone(a);
    }
    const auto dim = static_cast<Eigen::Index>(degeneracy_);
    const Eigen::MatrixXcd block = spectrum_.elements(a, vectors_);
    const Eigen::MatrixXcd inside = block.topLeftCorner(dim, dim);
    Average average;
    average.value = inside.trace() / static_cast<double>(dim);
    double tilt = rest_ > 0 ? residual_ / rest_ : 0.0;
    average.bound = a.norm * (2 * tilt + 32 * epsilon);
    for (std::size_t n = 0; n < gaps_.size(); ++n) {
        const double towards = residual_ / gaps_[n];
        const auto at = dim + static_cast<Eigen::Index>(n);
        const double coupling =
            block.col(at).head(dim).norm() + block.row(at).head(dim).norm() + 32 * epsilon * a.norm;
        average.bound += coupling * towards;
        tilt += towards;
    }
    average.bound += 2 * a.norm * tilt * tilt;
    const Eigen::MatrixXcd hermitian = (inside + inside.adjoint()) / 2.0;
    const Eigen::SelfAdjointEigenSolver<Eigen::MatrixXcd> solver(hermitian, Eigen::EigenvaluesOnly);
    average.range = {solver.eigenvalues().minCoeff(), solver.eigenvalues().maxCoeff()};
    return average;
}

template class GroundAverages<double>;
template class GroundAverages<std::complex<double>>;

}  // namespace chainmark::dense
