#include "chainmark/sector/lanczos.hpp"

#include <cmath>
#include <optional>
#include <stdexcept>

#include <fmt/format.h>

#include "chainmark/base/numerics.hpp"
#include "chainmark/sector/tridiagonal.hpp"
#include "chainmark/sector/vector_sums.hpp"

namespace chainmark::sector {
namespace {

constexpr int most_steps = 400;  // of one run; then anew from its vector
constexpr int most_runs = 40;
constexpr std::size_t most_kept = 150;  // vectors kept from the first run

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
          noise_(epsilon * op.row_sum() * (4.0 + std::sqrt(static_cast<double>(op.n_strings())))) {}

    EigenPair<Scalar> run(const std::function<Scalar(std::int64_t)>& start) {
        Vector begin;
        for (int attempt = 0; attempt < most_runs; ++attempt) {
            first_run(begin, start);
            Vector vector = second_run(begin, start);
            EigenPair<Scalar> pair = measure(std::move(vector));
            if (good_enough(pair)) {
                return pair;
            }
            begin = std::move(pair.vector);
        }
        throw std::runtime_error(
            fmt::format("the Lanczos iteration did not converge in {} runs of {} steps",
                        most_runs,
                        most_steps));
    }

private:
    int threads() const { return op_.threads(); }

    /// Fills x with the start vector, outside the span of what is found.
    void fill_start(const Vector& begin,
                    const std::function<Scalar(std::int64_t)>& start,
                    Vector& x) const {
        sum_over_runs<long double>(dim_, threads(), [&](std::int64_t first, std::int64_t last) {
            for (std::int64_t i = first; i < last; ++i) {
                const auto at = static_cast<std::size_t>(i);
                // Another vector in every search: the one that found a copy of a degenerate level
                // has nothing left in that level once the copy is moved away.
                x[at] = !begin.empty() ? begin[at]
                        : start        ? start(i)
                                       : Scalar(scattered(i, found_.size()));
            }
            return 0.0;
        });
        for (const EigenPair<Scalar>& pair : found_) {
            const Scalar overlap =
                inner_product(metric_, pair.vector.data(), x.data(), dim_, threads());
            add_scaled(metric_, pair.vector.data(), x.data(), -overlap, dim_, threads());
        }
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

    /// One step: y becomes the next x (unnormalized). `previous` and `current`: the norms s.
    double step(Vector& x, Vector& y, double previous, double current, double* alpha) const {
        const double keep = previous == 0.0 ? 0.0 : current / previous;
        const double dot = multiply(x, y, 1.0 / current, keep);
        const double a = alpha_known_ ? *alpha : dot / current;
        *alpha = a;
        return std::sqrt(
            add_scaled(metric_, x.data(), y.data(), Scalar(-a / current), dim_, threads()));
    }

    void prepare_kept() {
        // Half of the budget at most: a second run costs time, running out costs the answer.
        if (lease_ || !context_.memory) {
            return;
        }
        const double bytes = static_cast<double>(size_ * sizeof(Scalar));
        auto count = static_cast<std::size_t>(context_.memory->limit() / 2 / bytes);
        count = std::min(count, most_kept);
        for (; count >= 2; count = count * 3 / 4) {
            if (auto lease = context_.memory->take(static_cast<double>(count) * bytes)) {
                lease_.emplace(std::move(*lease));
                capacity_ = count;
                return;
            }
        }
    }

    void first_run(const Vector& begin, const std::function<Scalar(std::int64_t)>& start) {
        prepare_kept();
        x_.resize(size_);
        y_.resize(size_);
        alpha_.clear();
        beta_.clear();
        norms_.clear();
        kept_ = 0;
        alpha_known_ = false;
        fill_start(begin, start, x_);
        double previous = 0.0;
        double current = norm(x_);
        while (true) {
            keep(x_);
            norms_.push_back(current);
            alpha_.push_back(0.0);
            const double next = step(x_, y_, previous, current, &alpha_.back());
            std::swap(x_, y_);
            previous = current;
            current = next;
            if (finished(next)) {
                return;
            }
            beta_.push_back(next);
        }
    }

    void keep(const Vector& x) {
        if (kept_ >= capacity_) {
            return;
        }
        if (kept_ == slabs_.size() * per_slab()) {
            slabs_.emplace_back(std::min(per_slab(), capacity_ - kept_) * size_);
        }
        Scalar* const place = saved(kept_);
        sum_over_runs<long double>(dim_, threads(), [&](std::int64_t first, std::int64_t last) {
            std::copy(x.data() + first, x.data() + last, place + first);
            return 0.0;
        });
        ++kept_;
    }

    /// Kept vectors share allocations of this size or more, so that they lie in huge pages.
    std::size_t per_slab() const {
        constexpr std::size_t slab = std::size_t{1} << 26;
        return std::max<std::size_t>(1, slab / (size_ * sizeof(Scalar)));
    }
    Scalar* saved(std::size_t j) {
        return slabs_[j / per_slab()].data() + (j % per_slab()) * size_;
    }

    /// Whether the run ends with this beta; sets the Ritz values and the vector's coefficients.
    bool finished(double beta) {
        const auto steps = static_cast<int>(alpha_.size());
        const bool whole_space = steps >= dim_ - static_cast<std::int64_t>(found_.size());
        const bool broken_off = beta <= epsilon * op_.row_sum();
        const bool last = whole_space || broken_off || steps >= most_steps;
        // A test costs as much as a product in some thousand states.
        const int steps_between_tests = dim_ > 100000 ? 1 : 4;
        if (!last && steps % steps_between_tests != 0) {
            return false;
        }
        const TridiagonalPairs pairs = lowest_of_tridiagonal(alpha_, beta_, 2);
        ritz_vector_ = pairs.vectors[0];
        const double residual = beta * std::abs(pairs.vectors[0].back());
        next_ = op_.row_sum();
        if (pairs.values.size() > 1) {
            next_ = pairs.values[1] - beta * std::abs(pairs.vectors[1].back());
        }
        if (last) {
            return true;
        }
        const double gap = next_ - pairs.values[0];
        const bool value_is_known =
            gap > 0 && residual <= gap / 4 && residual * residual <= gap * noise_ / 4;
        return residual <= goal() || (aim_ == Aim::value && value_is_known);
    }

    /// Residual that counts as converged.
    double goal() const { return 16 * noise_; }

    bool good_enough(const EigenPair<Scalar>& pair) const {
        const double gap = pair.next - pair.value;
        return pair.residual <= 4 * goal() ||
               (aim_ == Aim::value && gap > 0 && pair.residual * pair.residual <= gap * noise_);
    }

    /// sum_j c_j v_j.
    Vector second_run(const Vector& begin, const std::function<Scalar(std::int64_t)>& start) {
        const std::size_t steps = ritz_vector_.size();
        Vector result(size_);
        sum_over_runs<long double>(dim_, threads(), [&](std::int64_t first, std::int64_t last) {
            std::fill(result.data() + first, result.data() + last, Scalar(0.0));
            for (std::size_t j = 0; j < std::min(kept_, steps); ++j) {
                const double factor = ritz_vector_[j] / norms_[j];
                const Scalar* const kept = saved(j);
                for (std::int64_t i = first; i < last; ++i) {
                    result[static_cast<std::size_t>(i)] += factor * kept[i];
                }
            }
            return 0.0;
        });
        if (kept_ >= steps) {
            return result;
        }
        alpha_known_ = true;
        std::size_t j = 0;
        if (kept_ >= 2) {
            j = kept_ - 1;
            x_.assign(saved(j), saved(j) + size_);
            y_.assign(saved(j - 1), saved(j - 1) + size_);
        } else {
            fill_start(begin, start, x_);
        }
        for (; j < steps; ++j) {
            if (j >= kept_) {
                add_scaled(metric_,
                           x_.data(),
                           result.data(),
                           Scalar(ritz_vector_[j] / norms_[j]),
                           dim_,
                           threads());
            }
            if (j + 1 < steps) {
                step(x_, y_, j == 0 ? 0.0 : norms_[j - 1], norms_[j], &alpha_[j]);
                std::swap(x_, y_);
            }
        }
        return result;
    }

    /// Normalizes, and measures with H itself.
    EigenPair<Scalar> measure(Vector vector) {
        // What leaked in from the found vectors, by rounding, is taken out.
        for (const EigenPair<Scalar>& other : found_) {
            const Scalar overlap =
                inner_product(metric_, other.vector.data(), vector.data(), dim_, threads());
            add_scaled(metric_, other.vector.data(), vector.data(), -overlap, dim_, threads());
        }
        const double length = norm(vector);
        EigenPair<Scalar> pair;
        pair.vector = std::move(vector);
        sum_over_runs<long double>(dim_, threads(), [&](std::int64_t first, std::int64_t last) {
            for (std::int64_t i = first; i < last; ++i) {
                pair.vector[static_cast<std::size_t>(i)] /= length;
            }
            return 0.0;
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

    Vector x_;
    Vector y_;
    std::vector<Vector> slabs_;  ///< x_0 ... x_{kept-1} of the first run
    std::size_t kept_ = 0;
    std::size_t capacity_ = 0;
    std::optional<MemoryBudget::Lease> lease_;
    std::vector<double> alpha_;
    std::vector<double> beta_;
    std::vector<double> norms_;  ///< s_j
    std::vector<double> ritz_vector_;
    double next_ = 0.0;
    bool alpha_known_ = false;
};

}  // namespace

template <class Scalar>
EigenPair<Scalar> lowest_outside(const LinearOperator<Scalar>& op,
                                 const std::vector<EigenPair<Scalar>>& found,
                                 Aim aim,
                                 const std::function<Scalar(std::int64_t)>& start,
                                 const Context& context) {
    return Search<Scalar>(op, found, aim, context).run(start);
}

template EigenPair<double> lowest_outside(const LinearOperator<double>&,
                                          const std::vector<EigenPair<double>>&,
                                          Aim,
                                          const std::function<double(std::int64_t)>&,
                                          const Context&);
template EigenPair<std::complex<double>> lowest_outside(
    const LinearOperator<std::complex<double>>&,
    const std::vector<EigenPair<std::complex<double>>>&,
    Aim,
    const std::function<std::complex<double>(std::int64_t)>&,
    const Context&);

}  // namespace chainmark::sector
