#pragma once

#include <complex>
#include <random>
#include <type_traits>
#include <vector>

#include <Eigen/Core>

#include "chainmark/sector/hamiltonian.hpp"
#include "chainmark/sector/linear_operator.hpp"

namespace chainmark::test {

template <class Scalar>
using VectorOf = Eigen::Matrix<Scalar, Eigen::Dynamic, 1>;
template <class Scalar>
using MatrixOf = Eigen::Matrix<Scalar, Eigen::Dynamic, Eigen::Dynamic>;

/// H of a problem, its field among the terms.
inline sector::SectorHamiltonian hamiltonian_of(const Problem& problem) {
    const TermList list = full_terms(problem);
    return {problem.chain, sector::find_symmetries(problem.chain, list), list.terms};
}

inline bool is_real(const sector::SectorHamiltonian& hamiltonian, const sector::Sector& sector) {
    bool real = hamiltonian.packed.is_real();
    for (const std::complex<double>& value : characters(sector.group, sector.label.irrep)) {
        real = real && value.imag() == 0.0;
    }
    return real;
}

/// Components between -1 and 1.
template <class Scalar>
VectorOf<Scalar> random_vector(std::int64_t size, std::mt19937_64& generator) {
    std::uniform_real_distribution<double> uniform(-1.0, 1.0);
    VectorOf<Scalar> x(size);
    for (Scalar& component : x) {
        if constexpr (std::is_same_v<Scalar, double>) {
            component = uniform(generator);
        } else {
            const double re = uniform(generator);
            component = Scalar(re, uniform(generator));
        }
    }
    return x;
}

inline Eigen::VectorXd weights_of(const sector::Metric& metric, std::int64_t dim) {
    Eigen::VectorXd weights(dim);
    for (std::int64_t i = 0; i < dim; ++i) {
        weights[i] = metric.weight(i);
    }
    return weights;
}

}  // namespace chainmark::test
