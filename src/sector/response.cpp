#include "chainmark/sector/response.hpp"

#include <algorithm>
#include <cmath>
#include <limits>
#include <map>
#include <memory>
#include <stdexcept>

#include <Eigen/Eigenvalues>

#include "chainmark/base/numerics.hpp"
#include "chainmark/sector/halves_operator.hpp"
#include "chainmark/sector/memory.hpp"

namespace chainmark::sector {
namespace {

using Complex = std::complex<double>;
using Vector = Eigen::VectorXcd;

/// Relative to the norm of M: a spread of P M P below the first is rounding, above the second none.
constexpr double surely_equal = 1e-9;
constexpr double surely_split = 1e-6;

/// The ground states of one parity, with H and M between all its configurations.
class ParityClass {
public:
    ParityClass(const Solution& solution, const Chain& chain, int value, const Context& context)
        : context_(context),
          configurations_(Packing(chain), solution.symmetries().conserved, value),
          op_(make_by_halves<Complex>(configurations_, solution.hamiltonian().terms, context)),
          m_(configurations_.dim()) {
        const Packing& packing = configurations_.packing();
        configurations_.for_each_in(
            0, configurations_.highs().size(), [&](std::int64_t index, Word word) {
                m_[index] = packing.digit_sum(word) - chain.length() * chain.spin();
            });
    }

    const HalvesBasis& configurations() const { return configurations_; }
    const LinearOperator<Complex>& op() const { return *op_; }
    const Eigen::VectorXd& m() const { return m_; }
    std::vector<Vector>& states() { return states_; }
    const std::vector<Vector>& states() const { return states_; }

    Vector apply(const Vector& x, double energy) const {
        Vector y = x;
        op_->multiply(x.data(), y.data(), 1.0, energy);
        return y;
    }

    /// Q x
    void project(Vector& x) const {
        for (const Vector& state : states_) {
            x -= state * state.dot(x);
        }
    }

    /// y with (H - energy) y = b in the range of Q, as near as rounding lets conjugate gradients
    /// come: past that point they wander off, so the best y is kept.
    Vector solve(const Vector& b, double energy) const {
        constexpr int most_steps = 20000;
        constexpr int patience = 30;  // steps without a better y that end the search
        const double target = 4 * epsilon * b.norm();
        Vector y = Vector::Zero(b.size());
        Vector best = y;
        Vector r = b;
        Vector p = r;
        double squares = r.squaredNorm();
        double least = squares;
        int waited = 0;
        for (int step = 0; std::sqrt(least) > target && waited < patience; ++step) {
            if (step > most_steps) {
                throw std::runtime_error(
                    "conjugate gradients for the susceptibility do not converge: a level lies very "
                    "close to the ground space");
            }
            poll(context_);
            Vector image = apply(p, energy);
            project(image);
            const double curvature = p.dot(image).real();
            if (!(curvature > 0)) {
                break;
            }
            const double alpha = squares / curvature;
            y += alpha * p;
            r -= alpha * image;
            const double next = r.squaredNorm();
            p = r + (next / squares) * p;
            squares = next;
            ++waited;
            if (squares < least) {
                least = squares;
                best = y;
                waited = 0;
            }
        }
        project(best);
        return best;
    }

private:
    Context context_;
    HalvesBasis configurations_;
    std::unique_ptr<LinearOperator<Complex>> op_;
    Eigen::VectorXd m_;
    std::vector<Vector> states_;
};

/// From the ground space to the next level of the same parity.
double gap_in_class(const Problem& problem, Solution& solution, int value, std::size_t members) {
    const auto accept = [&](std::size_t sector) {
        return solution.sectors()[sector].label.value == value;
    };
    const std::vector<SectorLevel> levels = solution.lowest(problem, members + 1, accept);
    return levels.size() > members ? levels[members].energy - levels[members].bound -
                                         levels[members - 1].energy - levels[members - 1].bound
                                   : std::numeric_limits<double>::infinity();
}

/// kappa of one parity class, and what bounds its error.
Response second_order(const ParityClass& space, double mean, double gap, double constant_energy) {
    const auto count = static_cast<Eigen::Index>(space.states().size());
    const double norm_m = space.m().cwiseAbs().maxCoeff();
    std::vector<Vector> sources;
    std::vector<Vector> solutions;
    std::vector<Vector> rests;
    double residuals = 0.0;
    for (const Vector& state : space.states()) {
        residuals += space.apply(state, constant_energy).squaredNorm();
        Vector b = space.m().asDiagonal() * state;
        space.project(b);
        solutions.push_back(space.solve(b, constant_energy));
        Vector rest = space.apply(solutions.back(), constant_energy);
        space.project(rest);
        rests.push_back(b - rest);
        sources.push_back(std::move(b));
    }
    Eigen::MatrixXcd kappa(count, count);
    for (Eigen::Index a = 0; a < count; ++a) {
        for (Eigen::Index b = 0; b < count; ++b) {
            const auto i = static_cast<std::size_t>(a);
            const auto j = static_cast<std::size_t>(b);
            kappa(a, b) = solutions[i].dot(sources[j]) + solutions[i].dot(rests[j]);
        }
    }
    double moved = 0.0;
    double left = 0.0;
    double length = 0.0;
    for (std::size_t i = 0; i < solutions.size(); ++i) {
        Vector y = space.m().asDiagonal() * solutions[i] - mean * solutions[i];
        space.project(y);
        moved += y.squaredNorm();
        left += rests[i].squaredNorm();
        length += solutions[i].squaredNorm();
    }
    Response result;
    const Eigen::SelfAdjointEigenSolver<Eigen::MatrixXcd> solver((kappa + kappa.adjoint()) / 2.0,
                                                                 Eigen::EigenvaluesOnly);
    result.value = solver.eigenvalues().maxCoeff();
    const double noise =
        epsilon * space.op().row_sum() *
        (8.0 + std::sqrt(static_cast<double>(space.op().n_strings())));  // of a product with H
    const double tilt = (std::sqrt(residuals) + noise) / gap;
    result.bound =
        2 * tilt * std::sqrt(moved) * (1 + tilt * norm_m / std::max(1e-300, std::sqrt(moved))) +
        left / gap + 2 * noise * length +
        64 * epsilon * (result.value + norm_m * std::sqrt(length));
    return result;
}

}  // namespace

std::variant<Response, Splits, std::string> zero_temperature_response(const Problem& problem,
                                                                      Solution& solution,
                                                                      const GroundSpace& ground,
                                                                      const Context& context) {
    const Chain& chain = problem.chain;
    const Conserved conserved = solution.symmetries().conserved;
    std::map<int, std::vector<SectorLevel>> by_class;
    double largest = 0.0;
    for (const SectorLevel& member : ground.members) {
        const int value = solution.sectors()[member.sector].label.value;
        by_class[value].push_back(member);
        largest = std::max(largest, HalvesBasis::count(Packing(chain), conserved, value));
    }
    const auto members = static_cast<double>(ground.members.size());
    const auto lease = take_memory(
        context, 16 * largest * (6 + 5 * members), "the susceptibility in the space of all states");
    const double norm = chain.length() * chain.spin();
    std::vector<double> diagonal;
    std::vector<std::unique_ptr<ParityClass>> spaces;
    std::vector<double> gaps;
    double spread = 0.0;
    for (const auto& [value, levels] : by_class) {
        auto& space =
            *spaces.emplace_back(std::make_unique<ParityClass>(solution, chain, value, context));
        for (const SectorLevel& level : levels) {
            space.states().push_back(solution.state(level, space.configurations()));
        }
        for (std::size_t a = 0; a < levels.size(); ++a) {
            for (std::size_t b = 0; b < levels.size(); ++b) {
                const Complex element =
                    space.states()[a].dot(Vector(space.m().asDiagonal() * space.states()[b]));
                if (a == b) {
                    diagonal.push_back(element.real());
                } else {
                    spread = std::max(spread, std::abs(element));
                }
            }
        }
        gaps.push_back(gap_in_class(problem, solution, value, levels.size()));
    }
    const auto [low, high] = std::minmax_element(diagonal.begin(), diagonal.end());
    spread = std::max(spread, *high - *low) / norm;
    if (spread > surely_split) {
        return Splits{};
    }
    if (spread > surely_equal) {
        return "whether the field splits the ground space is within the rounding";
    }
    double mean = 0.0;
    for (const double m : diagonal) {
        mean += m / members;
    }
    const double energy = ground.lowest().energy - solution.constant();
    Response result;
    for (std::size_t s = 0; s < spaces.size(); ++s) {
        if (!(gaps[s] > 0)) {
            return "the distance of the next level is within the rounding";
        }
        const Response part = second_order(*spaces[s], mean, gaps[s], energy);
        result.bound = std::max(result.bound, part.bound);
        result.value = std::max(result.value, part.value);
    }
    return Response{2 * result.value / chain.length(), 2 * result.bound / chain.length()};
}

}  // namespace chainmark::sector
