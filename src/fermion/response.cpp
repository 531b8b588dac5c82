#include "chainmark/fermion/response.hpp"

#include <algorithm>
#include <cmath>
#include <map>

#include <Eigen/Eigenvalues>

namespace chainmark::fermion {
namespace {

using Complex = std::complex<Real>;
using Matrix = Eigen::Matrix<Complex, Eigen::Dynamic, Eigen::Dynamic>;

/// Relative to the norm of M: a spread of P M P below the first is rounding, above the second none.
constexpr Real surely_equal = 1e-9L;
constexpr Real surely_split = 1e-6L;
/// Images under M that are held at once.
constexpr std::size_t most_images = 4'000'000;

std::size_t at(int i) {
    return static_cast<std::size_t>(i);
}

/// M and the least costs between the ground states of one class.
class ClassResponse {
public:
    ClassResponse(const ModeSet& modes, std::vector<std::vector<Real>> states)
        : modes_(modes), states_(std::move(states)), field_(modes.frame->field_form()) {
        const auto size = static_cast<Eigen::Index>(states_.size());
        inside_ = Matrix::Zero(size, size);
        curvature_ = Matrix::Zero(size, size);
    }

    bool fits() const { return states_.size() == 1 || images() <= most_images; }

    void run(const Context& context) {
        for (int g = 0; at(g) < states_.size(); ++g) {
            poll(context);
            visit(g);
        }
        combine();
    }

    /// P M P and K.
    const Matrix& inside() const { return inside_; }
    const Matrix& curvature() const { return curvature_; }
    /// sum over states of |y|^2
    Real squares() const { return squares_.value(); }
    Real mode_error() const { return modes_.mode_error; }
    Real field_error() const { return field_.error; }

private:
    std::size_t images() const { return states_.size() * (field_.mixed.size() + 1); }

    /// The labels whose filling differs from that of the first state, ascending, after k and l have
    /// changed in state g.
    std::vector<int> key_of(int g, int k, int l) const {
        std::vector<int> key;
        for (int label = 0; label < modes_.length(); ++label) {
            const bool differs = states_[at(g)][at(label)] != states_[0][at(label)];
            if (differs != (label == k || label == l)) {
                key.push_back(label);
            }
        }
        return key;
    }

    /// What filling or emptying the mode of a label costs in state g.
    std::vector<Real> costs_of(int g) const {
        std::vector<Real> costs(modes_.label.size());
        for (std::size_t position = 0; position < modes_.energy.size(); ++position) {
            const std::size_t label = at(modes_.label[position]);
            costs[label] = states_[at(g)][label] * modes_.energy[position];
        }
        return costs;
    }

    void visit(int g) {
        const std::vector<Real>& signs = states_[at(g)];
        const std::vector<Real> costs = costs_of(g);
        CompensatedSum mean;
        std::vector<bool> odd_below(signs.size());  // number of filled labels below
        bool odd = false;
        for (std::size_t k = 0; k < signs.size(); ++k) {
            mean.add(-field_.diagonal[k] * signs[k] / 2);
            odd_below[k] = odd;
            odd = odd != (signs[k] < 0);
        }
        inside_(g, g) += mean.value();
        for (const FieldElement& element : field_.mixed) {
            const std::size_t k = at(element.k);
            const std::size_t l = at(element.l);
            // hop b+_k b_l + pair b+_k b+_l + h.c. between ordered products b+_k b+_l ... |vacuum>
            Complex amplitude(signs[k] == signs[l] ? element.pair : element.hop);
            if (signs[k] < 0) {
                amplitude = -std::conj(amplitude);
            }
            if (odd_below[k] != odd_below[l]) {
                amplitude = -amplitude;
            }
            const Real cost = costs[k] + costs[l];
            if (states_.size() == 1) {
                add(cost, std::norm(amplitude), diagonal_);
            } else {
                Image& image = images_[key_of(g, element.k, element.l)];
                image.cost = cost;
                image.amplitude.resize(states_.size());
                image.amplitude[at(g)] += amplitude;
            }
        }
    }

    struct Image {
        Real cost = 0.0L;
        std::vector<Complex> amplitude;  ///< <n|M|g>
    };

    void add(Real cost, Real square, CompensatedSum& to) {
        if (square > 0.0L) {
            to.add(square / cost);
            squares_.add(square / (cost * cost));
        }
    }

    void combine() {
        if (states_.size() == 1) {
            curvature_(0, 0) = diagonal_.value();
            return;
        }
        const auto size = static_cast<int>(states_.size());
        for (int g = 0; g < size; ++g) {
            const auto own = images_.find(key_of(g, -1, -1));
            if (own != images_.end()) {
                for (int other = 0; other < size; ++other) {
                    inside_(g, other) += own->second.amplitude[at(other)];
                }
                images_.erase(own);
            }
        }
        for (const auto& [key, image] : images_) {
            for (int g = 0; g < size; ++g) {
                for (int other = 0; other < size; ++other) {
                    curvature_(g, other) +=
                        std::conj(image.amplitude[at(g)]) * image.amplitude[at(other)] / image.cost;
                }
                squares_.add(std::norm(image.amplitude[at(g)] / image.cost));
            }
        }
    }

    const ModeSet& modes_;
    std::vector<std::vector<Real>> states_;  ///< 1 - 2 n by label
    FieldForm field_;
    Matrix inside_;
    Matrix curvature_;
    CompensatedSum diagonal_;
    CompensatedSum squares_;
    std::map<std::vector<int>, Image> images_;
};

std::vector<ClassResponse> class_responses(const Solution& solution,
                                           const Levels& levels,
                                           const GroundSpace& ground) {
    std::vector<ClassResponse> classes;
    for (const UpCount up_count : {UpCount::even, UpCount::odd}) {
        std::vector<std::vector<Real>> states;
        for (const State& state : ground.states) {
            if (state.up_count == up_count) {
                states.push_back(levels.signs(state));
            }
        }
        if (!states.empty()) {
            classes.emplace_back(solution.of(up_count), std::move(states));
        }
    }
    return classes;
}

/// The norm of P M P - m, m its mean.
Real spread_of(const std::vector<ClassResponse>& classes, std::size_t states) {
    Complex trace = 0.0L;
    for (const ClassResponse& own : classes) {
        trace += own.inside().trace();
    }
    const Complex mean = trace / static_cast<Real>(states);
    Real square = 0.0L;
    for (const ClassResponse& own : classes) {
        const Eigen::Index size = own.inside().rows();
        square += (own.inside() - mean * Matrix::Identity(size, size)).squaredNorm();
    }
    return std::sqrt(square);
}

}  // namespace

std::variant<Bounded, Splits, std::string> zero_temperature_response(const Solution& solution,
                                                                     const Levels& levels,
                                                                     const GroundSpace& ground,
                                                                     const Context& context) {
    const Real length = static_cast<Real>(solution.form.length());
    std::vector<ClassResponse> classes = class_responses(solution, levels, ground);
    for (ClassResponse& own : classes) {
        if (!own.fits()) {
            return std::string(
                "the ground space is too large for second-order perturbation theory");
        }
        own.run(context);
    }
    const Real spread = spread_of(classes, ground.states.size()) / (length / 2);
    if (spread > surely_split) {
        return Splits{};
    }
    if (spread > surely_equal) {
        return std::string("whether the field splits the ground space is within rounding");
    }
    Bounded result;
    for (const ClassResponse& own : classes) {
        const Eigen::SelfAdjointEigenSolver<Matrix> solver(own.curvature());
        const Real kappa = solver.eigenvalues().maxCoeff();
        const Real y = std::sqrt(own.squares());
        const Real turn = ground.sector_gap ? 4 / *ground.sector_gap : 0.0L;
        const Real error = 2 * (own.mode_error() * y * (2 * y + turn) + own.field_error() * y) +
                           64 * real_epsilon * kappa;
        result.value = std::max(result.value, 2 * kappa / length);
        result.error = std::max(result.error, 2 * error / length);
    }
    return result;
}

}  // namespace chainmark::fermion
