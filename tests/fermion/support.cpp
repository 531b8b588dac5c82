#include "fermion/support.hpp"

#include <algorithm>
#include <bit>
#include <numeric>

#include <Eigen/Eigenvalues>

namespace chainmark::test::explicit_matrix {

Matrix hamiltonian(const Model& model) {
    const int sites = model.chain.length();
    const int dimension = 1 << sites;
    Matrix matrix = Matrix::Zero(dimension, dimension);
    for (int state = 0; state < dimension; ++state) {
        for (int j = 0; j < sites; ++j) {
            matrix(state, state) += (model.onsite[at(j)] - model.field) * sz(state, j);
        }
        for (std::size_t b = 0; b < model.hop.size(); ++b) {
            const int left = static_cast<int>(b);
            const int right = (left + 1) % sites;
            const bool wraps = right < left;
            const Complex t = model.hop[b] * (wraps ? std::polar(1.0, model.chain.twist) : 1.0);
            if (!up(state, left) && up(state, right)) {
                const int hopped = (state | (1 << left)) & ~(1 << right);
                matrix(hopped, state) += t;
                matrix(state, hopped) += std::conj(t);
            }
        }
    }
    return matrix;
}

Matrix translation(const Chain& chain) {
    const int sites = chain.length();
    const int dimension = 1 << sites;
    Matrix matrix = Matrix::Zero(dimension, dimension);
    for (int state = 0; state < dimension; ++state) {
        const bool last = up(state, sites - 1);
        const int moved = ((state << 1) & (dimension - 1)) | (last ? 1 : 0);
        matrix(moved, state) = last ? std::polar(1.0, -chain.twist) : 1.0;
    }
    return matrix;
}

namespace {

int up_count(Eigen::Index state) {
    return std::popcount(static_cast<unsigned>(state));
}

std::vector<Eigen::Index> basis_of(Eigen::Index dimension, int ups) {
    std::vector<Eigen::Index> basis;
    for (Eigen::Index state = 0; state < dimension; ++state) {
        if (up_count(state) == ups) {
            basis.push_back(state);
        }
    }
    return basis;
}

Matrix block(const Matrix& matrix, int ups) {
    const std::vector<Eigen::Index> basis = basis_of(matrix.rows(), ups);
    return matrix(basis, basis);
}

}  // namespace

double lowest(const Matrix& matrix, int ups) {
    const Eigen::SelfAdjointEigenSolver<Matrix> solver(block(matrix, ups));
    return solver.eigenvalues()(0);
}

Spectrum diagonalize(const Matrix& matrix) {
    const Eigen::Index dimension = matrix.rows();
    Eigen::VectorXd energies(dimension);
    Matrix states = Matrix::Zero(dimension, dimension);
    Eigen::Index column = 0;
    for (int ups = 0; column < dimension; ++ups) {
        const std::vector<Eigen::Index> basis = basis_of(dimension, ups);
        const auto size = static_cast<Eigen::Index>(basis.size());
        const Eigen::SelfAdjointEigenSolver<Matrix> solver(block(matrix, ups));
        energies.segment(column, size) = solver.eigenvalues();
        for (Eigen::Index row = 0; row < size; ++row) {
            states.row(basis[static_cast<std::size_t>(row)]).segment(column, size) =
                solver.eigenvectors().row(row);
        }
        column += size;
    }
    std::vector<Eigen::Index> order(static_cast<std::size_t>(dimension));
    std::iota(order.begin(), order.end(), 0);
    std::sort(order.begin(), order.end(), [&](Eigen::Index a, Eigen::Index b) {
        return energies(a) < energies(b);
    });
    Spectrum spectrum{energies(order), states(Eigen::all, order)};
    const double norm = spectrum.energies.cwiseAbs().maxCoeff();
    const Matrix& v = spectrum.states;
    const Matrix residual = matrix * v - v * spectrum.energies.asDiagonal();
    const Matrix defect = v.adjoint() * v - Matrix::Identity(dimension, dimension);
    spectrum.error = residual.norm() + 2 * norm * defect.norm();
    return spectrum;
}

}  // namespace chainmark::test::explicit_matrix
