#include "chainmark/fermion/matrix_frame.hpp"

#include <cmath>

#include "chainmark/base/numerics.hpp"
#include "chainmark/base/real_decompositions.hpp"
#include "chainmark/fermion/closed_frames.hpp"

namespace chainmark::fermion {
namespace {

Real weighted_dot(const std::vector<Real>& s, const double* a, const double* b) {
    Real sum = 0.0L;
    for (std::size_t k = 0; k < s.size(); ++k) {
        sum += s[k] * static_cast<Real>(a[k]) * static_cast<Real>(b[k]);
    }
    return sum;
}

class MatrixState : public GaussianState {
public:
    MatrixState(const ModeVectors& vectors, Real defect, int vacuum, std::vector<Real> s)
        : vectors_(vectors), defect_(defect), parity_(pure_parity(s, vacuum)), s_(std::move(s)) {}

    int sites() const override { return vectors_.modes(); }

    MajoranaBlock block(int i, int j) const override {
        if (vectors_.bipartite) {
            return {{{0.0L, product(i, j)}, {-product(j, i), 0.0L}}};
        }
        MajoranaBlock result{};
        for (const int a : {0, 1}) {
            for (const int b : {0, 1}) {
                const int row = 2 * i + a;
                const int column = 2 * j + b;
                result[static_cast<std::size_t>(a)][static_cast<std::size_t>(b)] =
                    row == column ? 0.0L : product(row, column) - product(column, row);
            }
        }
        return result;
    }

    RealMatrix covariance(int first, int count) const override {
        const Eigen::VectorXd s =
            Eigen::Map<const Eigen::VectorX<Real>>(s_.data(), static_cast<Eigen::Index>(s_.size()))
                .cast<double>();
        const Eigen::Index scale = vectors_.bipartite ? 1 : 2;
        const auto u = vectors_.u.middleCols(scale * first, scale * count);
        const auto v = vectors_.v.middleCols(scale * first, scale * count);
        const RealMatrix half = times_transpose(u.transpose(), v.transpose() * s.asDiagonal());
        if (!vectors_.bipartite) {
            return half - half.transpose();
        }
        RealMatrix gamma = RealMatrix::Zero(2 * half.rows(), 2 * half.rows());
        for (Eigen::Index i = 0; i < count; ++i) {
            for (Eigen::Index j = 0; j < count; ++j) {
                gamma(2 * i, 2 * j + 1) = half(i, j);
                gamma(2 * j + 1, 2 * i) = -half(i, j);
            }
        }
        return gamma;
    }

    /// With O = (1 + E) Q, Q orthogonal and ||E||_F <= defect, Gamma = O^T diag O is off by at most
    /// 2 ||E||_F + ||E||_F^2.
    Real error(int majoranas) const override {
        return 3 * defect_ +
               static_cast<Real>(majoranas) * static_cast<Real>(s_.size()) * 4 * real_epsilon;
    }

    bool bipartite() const override { return vectors_.bipartite; }
    std::optional<int> parity() const override { return parity_; }

private:
    /// sum_k s_k u_ka v_kb
    Real product(int a, int b) const {
        return weighted_dot(s_, vectors_.u.col(a).data(), vectors_.v.col(b).data());
    }

    const ModeVectors& vectors_;
    Real defect_;
    std::optional<int> parity_;
    std::vector<Real> s_;
};

class MatrixFrame : public ModeFrame {
public:
    MatrixFrame(ModeVectors vectors, Real defect, int vacuum)
        : vectors_(std::move(vectors)), defect_(defect), vacuum_(vacuum) {}

    int sites() const override { return vectors_.modes(); }

    std::unique_ptr<GaussianState> filled(std::vector<Real> s) const override {
        return std::make_unique<MatrixState>(vectors_, defect_, vacuum_, std::move(s));
    }

    /// M = -(i/4) sum C^M_ab g_a g_b with C^M_{2j,2j+1} = 1; between the modes, with
    /// X = U C^M V^T, Y = U C^M U^T, Z = V C^M V^T (0 where bipartite),
    ///   diagonal_k = X_kk, hop_kl = (X_kl + X_lk - i (Y_kl + Z_kl))/2,
    ///   pair_kl = (X_lk - X_kl - i (Y_kl - Z_kl))/2.
    FieldForm field_form() const override {
        const RealMatrix& u = vectors_.u;
        const RealMatrix& v = vectors_.v;
        const int modes = vectors_.modes();
        Real rounding = 0.0L;  // Frobenius norm
        const auto product = [&](const RealMatrix& left, const RealMatrix& right) {
            AccurateProduct accurate = accurate_product(left, right);
            rounding += accurate.error;
            return std::move(accurate.value);
        };
        RealMatrix x;
        RealMatrix y;
        RealMatrix z;
        if (vectors_.bipartite) {
            x = product(u, v);
        } else {
            const auto even = Eigen::seqN(0, modes, 2);
            const auto odd = Eigen::seqN(1, modes, 2);
            const auto between = [&](const RealMatrix& left, const RealMatrix& right) {
                const RealMatrix first = product(left(Eigen::all, even), right(Eigen::all, odd));
                const RealMatrix second = product(left(Eigen::all, odd), right(Eigen::all, even));
                return RealMatrix(first - second);
            };
            x = between(u, v);
            y = between(u, u);
            z = between(v, v);
        }
        FieldForm form;
        for (int k = 0; k < modes; ++k) {
            form.diagonal.push_back(x(k, k));
            for (int l = k + 1; l < modes; ++l) {
                const double yy = vectors_.bipartite ? 0.0 : y(k, l);
                const double zz = vectors_.bipartite ? 0.0 : z(k, l);
                const std::complex<double> hop(x(k, l) + x(l, k), -(yy + zz));
                const std::complex<double> pair(x(l, k) - x(k, l), -(yy - zz));
                if (hop != 0.0 || pair != 0.0) {
                    form.mixed.push_back({.k = k, .l = l, .hop = hop / 2.0, .pair = pair / 2.0});
                }
            }
        }
        // Over all states: less than half the trace norm of the error between 2L Majoranas.
        const Real root = std::sqrt(2 * static_cast<Real>(modes));
        form.error = root * (3 * defect_ + 2 * rounding + root * static_cast<Real>(epsilon)) / 2;
        return form;
    }

private:
    ModeVectors vectors_;
    Real defect_;
    int vacuum_;
};

}  // namespace

std::unique_ptr<ModeFrame> matrix_frame(ModeVectors vectors, Real defect, int vacuum) {
    return std::make_unique<MatrixFrame>(std::move(vectors), defect, vacuum);
}

int vacuum_parity(const ModeVectors& vectors) {
    if (vectors.bipartite) {
        return chainmark::determinant_sign(vectors.u) * chainmark::determinant_sign(vectors.v);
    }
    RealMatrix all(2 * vectors.u.rows(), vectors.u.cols());
    all(Eigen::seqN(0, vectors.u.rows(), 2), Eigen::all) = vectors.u;
    all(Eigen::seqN(1, vectors.u.rows(), 2), Eigen::all) = vectors.v;
    return chainmark::determinant_sign(all);
}

}  // namespace chainmark::fermion
