#include "chainmark/sector/lanczos.hpp"

#include <cmath>
#include <limits>
#include <stdexcept>

#include <fmt/format.h>

#include "chainmark/base/numerics.hpp"
#include "chainmark/sector/kept_vectors.hpp"
#include "chainmark/sector/tridiagonal.hpp"
#include "chainmark/sector/vector_sums.hpp"

namespace chainmark::sector {
namespace {

constexpr int most_steps = 400;  // of one run; then anew from its vector
constexpr int most_runs = 40;
constexpr std::size_t most_kept = 150;

/// A number in [-1/2, 1/2) that looks random, from its index and the number of its vector alone
/// (the finalizer of a 64-bit mixing function, common practice), so that every thread can make its
/// own.
double scattered(std::int64_t index, std::size_t vector) {
    std::uint64_t z = static_cast<std::uint64_t>(index) + 0x9e3779b97f4a7c15U * (vector + 1);
    z = (z ^ (z >> 30)) * 0xbf58476d1ce4e5b9U;
    z = (z ^ (z >> 27)) * 0x94d049bb133111ebU;
    return static_cast<double>((z ^ (z >> 31)) >> 11) * 0x1p-53 - 0.5;
}

/// One search: the recurrence
///   w = H v_j - beta_j v_{j-1},  alpha_j = <v_j|w>,  w -= alpha_j v_j,  beta_{j+1} = ||w||,
/// with v_j = x_j / s_j kept as x_j and s_j, so that no pass is spent on normalizing.
template <class Scalar>
class Search {
public:
    using Vector = BigVector<Scalar>;
    using Kept = KeptVectors<Scalar>;

    Search(const LinearOperator<Scalar>& op,
           const std::vector<EigenPair<Scalar>>& found,
           Aim aim,
           const Context& context)
        : op_(op),
          found_(found),
          aim_(aim),
          context_(context),
          metric_(op.metric()),
          dim_(op.dim()),
          size_(static_cast<std::size_t>(op.dim())),
          // What the residual of a perfect vector still shows.
          noise_(epsilon * op.row_sum() * (4.0 + std::sqrt(static_cast<double>(op.n_strings())))),
          kept_(size_, most_kept, context) {}

    EigenPair<Scalar> run(const StartFiller<Scalar>& start) {
        begin_.resize(size_);
        x_.resize(size_);
        y_.resize(size_);
        fill(start);
        for (int attempt = 0; attempt < most_runs; ++attempt) {
            iterate();
            if (all_kept()) {
                sum_kept();
            } else {
                iterate_again();
            }
            take_out_found(begin_);  // what leaked in by rounding
            if (cut_short_) {
                continue;
            }
            EigenPair<Scalar> pair = measure(std::move(begin_));
            if (good_enough(pair)) {
                return pair;
            }
            begin_ = std::move(pair.vector);
        }
        throw std::runtime_error(
            fmt::format("the Lanczos iteration did not converge in {} runs of {} steps",
                        most_runs,
                        most_steps));
    }

private:
    int threads() const { return op_.threads(); }

    /// Fills begin_ with the start vector, outside the span of what is found.
    void fill(const StartFiller<Scalar>& start) {
        if (start) {
            start(begin_.data());
        } else {
            each_run([&](std::int64_t first, std::int64_t last) {
                for (std::int64_t i = first; i < last; ++i) {
                    // Another vector in every search: the one that found a copy of a degenerate
                    // level has nothing left in that level once the copy is moved away.
                    begin_[static_cast<std::size_t>(i)] = scattered(i, found_.size());
                }
            });
        }
        take_out_found(begin_);
    }

    void take_out_found(Vector& x) const {
        for (const EigenPair<Scalar>& pair : found_) {
            const Scalar overlap =
                inner_product(metric_, pair.vector.data(), x.data(), dim_, threads());
            add_scaled(metric_, pair.vector.data(), x.data(), -overlap, dim_, threads());
        }
    }

    template <class Part>
    void each_run(Part&& part) const {
        sum_over_runs<long double>(dim_, threads(), [&](std::int64_t first, std::int64_t last) {
            part(first, last);
            return 0.0;
        });
    }

    void copy(const Vector& from, Vector& to) const {
        each_run([&](std::int64_t first, std::int64_t last) {
            std::copy(from.data() + first, from.data() + last, to.data() + first);
        });
    }

    double norm(const Vector& x) const {
        return std::sqrt(std::real(inner_product(metric_, x.data(), x.data(), dim_, threads())));
    }

    /// y = scale (H + moved part) x - keep y; returns Re <x|y>.
    double multiply(const Vector& x, Vector& y, double scale, double keep) const {
        poll(context_);
        double dot = op_.multiply(x.data(), y.data(), scale, keep);
        for (const EigenPair<Scalar>& pair : found_) {
            const Scalar overlap =
                inner_product(metric_, pair.vector.data(), x.data(), dim_, threads());
            const double lift = scale * (op_.row_sum() - pair.value);
            add_scaled(metric_, pair.vector.data(), y.data(), lift * overlap, dim_, threads());
            dot += lift * std::norm(overlap);
        }
        return dot;
    }

    /// Step j: y_, which holds x_{j-1}, becomes x_{j+1} and changes places with x_. Returns its
    /// norm.
    double step(std::size_t j, typename Kept::Stored* place) {
        const double scale = 1.0 / norms_[j];
        const double dot = multiply(x_, y_, scale, j == 0 ? 0.0 : norms_[j] / norms_[j - 1]);
        if (j == alpha_.size()) {
            alpha_.push_back(dot * scale);
        }
        const double square = add_scaled(
            metric_, x_.data(), y_.data(), Scalar(-alpha_[j] * scale), dim_, threads(), place);
        std::swap(x_, y_);
        return std::sqrt(square);
    }

    /// Runs the recurrence from begin_ until `finished`; the vectors after the first are kept where
    /// there is room.
    void iterate() {
        alpha_.clear();
        beta_.clear();
        copy(begin_, x_);
        norms_ = {norm(x_)};
        next_before_ = next_;
        cut_short_ = false;
        while (true) {
            const std::size_t j = alpha_.size();
            const double next = step(j, kept_.place(j));
            if (finished(next)) {
                return;
            }
            beta_.push_back(next);
            norms_.push_back(next);
        }
    }

    /// Whether all vectors of the run so far are there.
    bool all_kept() const { return alpha_.size() <= kept_.capacity() + 1; }

    /// Whether the run ends with this beta; sets the Ritz values and the vector's coefficients.
    bool finished(double beta) {
        const auto steps = static_cast<int>(alpha_.size());
        const bool whole_space = steps >= dim_ - static_cast<std::int64_t>(found_.size());
        const bool broken_off = beta <= epsilon * op_.row_sum();
        const bool last = whole_space || broken_off || steps >= most_steps;
        // A test costs as much as a product in some thousand states.
        const int steps_between_tests = dim_ > 100000 ? 1 : 4;
        const bool kept_are_full = alpha_.size() == kept_.capacity() + 1;
        if (!last && !kept_are_full && steps % steps_between_tests != 0) {
            return false;
        }
        const TridiagonalPairs pairs = lowest_of_tridiagonal(alpha_, beta_, 2);
        ritz_vector_ = pairs.vectors[0];
        const double residual = beta * std::abs(pairs.vectors[0].back());
        see_next(pairs, beta, whole_space);
        if (steps == 1) {
            first_residual_ = residual;
        }
        if (last || residual <= goal()) {
            return true;
        }
        const double gap = next_ - pairs.values[0];
        const bool value_is_known =
            gap > 0 && residual <= gap / 4 && residual * residual <= gap * noise_ / 4;
        if ((aim_ == Aim::value && value_is_known) ||
            (all_kept() && residual <= rounding_of_kept())) {
            return true;
        }
        // Starting anew from what is kept costs about two steps: much less than running everything
        // once more for the vector, as long as a run gets ahead.
        cut_short_ = kept_are_full && residual * std::exp(1.0) <= first_residual_;
        return cut_short_;
    }

    /// Updates next_ from the second Ritz pair, once that tells something. A run that starts near
    /// the lowest state may be over before: then what an earlier run saw still stands.
    void see_next(const TridiagonalPairs& pairs, double beta, bool whole_space) {
        double seen = op_.row_sum();
        if (pairs.values.size() > 1) {
            seen = pairs.values[1] - beta * std::abs(pairs.vectors[1].back());
        }
        next_ = next_before_;
        if (seen > pairs.values[0] && (pairs.values.size() > 1 || whole_space)) {
            next_ = std::isinf(next_before_) ? seen : std::min(seen, next_before_);
        }
    }

    /// The residual that the rounding of the kept vectors leaves in their sum.
    double rounding_of_kept() const {
        double square = 0.0;
        for (std::size_t j = 1; j < ritz_vector_.size(); ++j) {
            square += ritz_vector_[j] * ritz_vector_[j];
        }
        return Kept::rounding * op_.row_sum() * std::sqrt(square);
    }

    /// Residual that counts as converged.
    double goal() const { return 16 * noise_; }

    bool good_enough(const EigenPair<Scalar>& pair) const {
        const double gap = pair.next - pair.value;
        return pair.residual <= 4 * goal() ||
               (aim_ == Aim::value && gap > 0 && pair.residual * pair.residual <= gap * noise_);
    }

    /// begin_ = sum_j c_j v_j from what is kept.
    void sum_kept() {
        std::vector<double> factors;
        for (std::size_t j = 1; j < ritz_vector_.size(); ++j) {
            factors.push_back(ritz_vector_[j] / norms_[j]);
        }
        kept_.add_to(begin_, ritz_vector_[0] / norms_[0], factors, threads());
    }

    /// The same by running the recurrence once more, from begin_.
    void iterate_again() {
        std::swap(begin_, x_);
        each_run([&](std::int64_t first, std::int64_t last) {
            for (std::int64_t i = first; i < last; ++i) {
                begin_[static_cast<std::size_t>(i)] =
                    ritz_vector_[0] / norms_[0] * x_[static_cast<std::size_t>(i)];
            }
        });
        for (std::size_t j = 0; j + 1 < ritz_vector_.size(); ++j) {
            step(j, nullptr);
            add_scaled(metric_,
                       x_.data(),
                       begin_.data(),
                       Scalar(ritz_vector_[j + 1] / norms_[j + 1]),
                       dim_,
                       threads());
        }
    }

    /// Normalizes, and measures with H itself.
    EigenPair<Scalar> measure(Vector vector) {
        const double length = norm(vector);
        EigenPair<Scalar> pair;
        pair.vector = std::move(vector);
        each_run([&](std::int64_t first, std::int64_t last) {
            for (std::int64_t i = first; i < last; ++i) {
                pair.vector[static_cast<std::size_t>(i)] /= length;
            }
        });
        poll(context_);
        pair.value = op_.multiply(pair.vector.data(), y_.data(), 1.0, 0.0);
        pair.residual =
            std::sqrt(add_scaled(
                metric_, pair.vector.data(), y_.data(), Scalar(-pair.value), dim_, threads())) +
            noise_;
        pair.noise = noise_;
        pair.next = next_;
        return pair;
    }

    const LinearOperator<Scalar>& op_;
    const std::vector<EigenPair<Scalar>>& found_;
    Aim aim_;
    const Context& context_;
    Metric metric_;
    std::int64_t dim_;
    std::size_t size_;
    double noise_;

    Vector begin_;  ///< the run's x_0, then the sum
    Vector x_;
    Vector y_;
    Kept kept_;  ///< x_1, x_2, ... of a run
    std::vector<double> alpha_;
    std::vector<double> beta_;
    std::vector<double> norms_;  ///< s_j
    std::vector<double> ritz_vector_;
    double next_ = -std::numeric_limits<double>::infinity();
    double next_before_ = 0.0;     ///< next_ after the earlier runs
    double first_residual_ = 0.0;  ///< after the first step of the run
    bool cut_short_ = false;       ///< the run ended since the kept vectors were full
};

}  // namespace

template <class Scalar>
EigenPair<Scalar> lowest_outside(const LinearOperator<Scalar>& op,
                                 const std::vector<EigenPair<Scalar>>& found,
                                 Aim aim,
                                 const StartFiller<Scalar>& start,
                                 const Context& context) {
    return Search<Scalar>(op, found, aim, context).run(start);
}

template EigenPair<double> lowest_outside(const LinearOperator<double>&,
                                          const std::vector<EigenPair<double>>&,
                                          Aim,
                                          const StartFiller<double>&,
                                          const Context&);
template EigenPair<std::complex<double>> lowest_outside(
    const LinearOperator<std::complex<double>>&,
    const std::vector<EigenPair<std::complex<double>>>&,
    Aim,
    const StartFiller<std::complex<double>>&,
    const Context&);

}  // namespace chainmark::sector
