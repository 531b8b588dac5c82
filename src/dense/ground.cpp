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

std::vector<Term> site_operator(Axis axis, int site, double factor) {
    const std::complex<double> half_i(0.0, 0.5 * factor);
    const OperatorString plus = {{site, SiteOperator::plus}};
    const OperatorString minus = {{site, SiteOperator::minus}};
    switch (axis) {
        case Axis::x:
            return {{plus, factor / 2}, {minus, factor / 2}};
        case Axis::y:  // (S+ - S-) / (2i)
            return {{plus, -half_i}, {minus, half_i}};
        case Axis::z:
            break;
    }
    return {{{{site, SiteOperator::z}}, factor}};
}

Term zz(int i, int j, double factor) {
    if (i == j) {
        return {{}, factor / 4};
    }
    return {{{std::min(i, j), SiteOperator::z}, {std::max(i, j), SiteOperator::z}}, factor};
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
Average GroundAverages<Scalar>::trace_alone(const std::vector<Term>& terms, double norm) const {
    Average average;
    for (std::size_t i = 0; i < degeneracy_; ++i) {
        average.value +=
            elements(terms, {vectors_[i]})(0, 0).real() / static_cast<double>(degeneracy_);
    }
    const double tilt = gaps_.empty() ? 0.0 : residual_ / gaps_.front();
    average.bound = norm * (2 * tilt + 32 * epsilon);
    return average;
}

template <class Scalar>
Average GroundAverages<Scalar>::of(const std::vector<Term>& terms) const {
    double norm = 0.0;
    for (const Term& term : terms) {
        norm += std::abs(term.coefficient) * std::pow(0.5, term.string.size());
    }
    if (degeneracy_ > largest_range_space) {
        return trace_alone(terms, norm);
    }
    const auto dim = static_cast<Eigen::Index>(degeneracy_);
    const Eigen::MatrixXcd block = elements(terms, vectors_);
    const Eigen::MatrixXcd inside = block.topLeftCorner(dim, dim);
    Average average;
    average.value = inside.trace().real() / static_cast<double>(dim);
    double tilt = rest_ > 0 ? residual_ / rest_ : 0.0;
    average.bound = norm * (2 * tilt + 32 * epsilon);
    for (std::size_t n = 0; n < gaps_.size(); ++n) {
        const double towards = residual_ / gaps_[n];
        const auto column = dim + static_cast<Eigen::Index>(n);
        const double coupling = block.col(column).head(dim).norm() + 16 * epsilon * norm;
        average.bound += 2 * coupling * towards;
        tilt += towards;
    }
    average.bound += 2 * norm * tilt * tilt;
    const Eigen::SelfAdjointEigenSolver<Eigen::MatrixXcd> solver(inside, Eigen::EigenvaluesOnly);
    average.range = {solver.eigenvalues().minCoeff(), solver.eigenvalues().maxCoeff()};
    return average;
}

template <class Scalar>
Eigen::MatrixXcd GroundAverages<Scalar>::elements(const std::vector<Term>& terms,
                                                  const std::vector<Eigen::Index>& vectors) const {
    // Sy is i times a real matrix, which the real vectors can be put to.
    std::complex<double> phase = 1.0;
    std::vector<Term> turned = terms;
    if (std::is_same_v<Scalar, double> && !terms.empty() &&
        terms.front().coefficient.real() == 0.0) {
        phase = std::complex<double>(0.0, 1.0);
        for (Term& term : turned) {
            term.coefficient /= phase;
        }
    }
    return phase * spectrum_.elements(full_matrix<Scalar>(turned, spectrum_.length()), vectors);
}

template class GroundAverages<double>;
template class GroundAverages<std::complex<double>>;

}  // namespace chainmark::dense
