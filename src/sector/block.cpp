#include "chainmark/sector/block.hpp"

#include <algorithm>
#include <cmath>
#include <optional>
#include <stdexcept>

#include <fmt/format.h>

#include "chainmark/base/error.hpp"
#include "chainmark/base/hermitian_eigen.hpp"
#include "chainmark/base/numerics.hpp"
#include "chainmark/base/parallel.hpp"
#include "chainmark/sector/dense_matrix.hpp"
#include "chainmark/sector/ground_proofs.hpp"
#include "chainmark/sector/halves_operator.hpp"
#include "chainmark/sector/inertia.hpp"
#include "chainmark/sector/memory.hpp"
#include "chainmark/sector/orbit_operator.hpp"
#include "chainmark/sector/scalar.hpp"
#include "chainmark/sector/start_vector.hpp"
#include "chainmark/sector/vector_sums.hpp"

namespace chainmark::sector {
namespace {

template <class Scalar>
class TypedBlock final : public Block {
public:
    using Matrix = Eigen::Matrix<Scalar, Eigen::Dynamic, Eigen::Dynamic>;

    TypedBlock(const Sector& sector, const SectorHamiltonian& hamiltonian)
        : sector_(sector),
          hamiltonian_(hamiltonian),
          dim_(count_states(
              sector.group, sector.label.irrep, sector.label.conserved, sector.label.value)) {}

    double dim() const override { return dim_; }

    void extend(std::size_t count, Aim aim, const Context& context) override {
        count = std::max(count, known());
        const auto wanted = std::min(static_cast<double>(count), dim_);
        if (static_cast<double>(known()) >= wanted && (aim == Aim::value || fit_for_use())) {
            return;
        }
        if (dim_ <= dense_limit || all_known()) {
            solve_completely(context);
            return;
        }
        prepare(context);
        if (!pairs_.empty() && !vectors_fit_ && (aim == Aim::vector || count > 1)) {
            refine(context);
        }
        while (static_cast<double>(pairs_.size()) < wanted) {
            const Aim this_aim = count == 1 ? aim : Aim::vector;
            pairs_.push_back(lowest_outside<Scalar>(
                *operator_,
                pairs_,
                this_aim,
                pairs_.empty() ? first_guess(context) : StartFiller<Scalar>{},
                context));
            vectors_fit_ = this_aim == Aim::vector;
        }
        publish();
    }

    void count_up_to(double energy, const Context& context) override {
        constexpr double largest = 5000;
        constexpr double most_operations = 1e9;
        if (all_known() || counted_up_to(energy) || tried_ == energy || dim_ > largest ||
            known() == 0 || sector_.group.is_trivial()) {
            return;
        }
        tried_ = energy;
        poll(context);
        make_basis(context);
        // The shift stands half way between `energy` and the first known level above it.
        const auto above = std::find_if(
            energies_.begin(), energies_.end(), [energy](double e) { return e > energy; });
        if (above == energies_.end()) {
            return;
        }
        const double shift = (energy + *above) / 2;
        const auto inertia = count_below<Scalar>(sparse_matrix(*rows_), shift, most_operations);
        if (inertia && inertia->below == above - energies_.begin() &&
            shift - inertia->error > energy) {
            counted_up_to_ = energy;
        }
    }

    void solve_completely(const Context& context) override {
        if (all_known() && fit_for_use()) {
            return;
        }
        poll(context);
        make_basis(context);
        // Twice the matrix for the product, and what LAPACK takes.
        const auto lease = take(context, 5 * dim_ * dim_ * sizeof(Scalar));
        const Matrix matrix = orbits_ ? dense_matrix(*rows_)
                                      : dense_matrix<Scalar>(*configurations_, hamiltonian_.packed);
        HermitianEigen<Scalar> solution = hermitian_eigen(matrix);
        poll(context);
        const double noise =
            epsilon * hamiltonian_.packed.row_sum() *
            (4.0 + std::sqrt(static_cast<double>(hamiltonian_.packed.n_strings())));
        const Eigen::VectorXd residuals =
            (matrix * solution.vectors - solution.vectors * solution.values.asDiagonal())
                .colwise()
                .norm()
                .transpose()
                .array() +
            noise;
        const Eigen::VectorXd bounds = cluster_bounds(solution.values, residuals);
        energies_.assign(solution.values.begin(), solution.values.end());
        bounds_.assign(bounds.begin(), bounds.end());
        residuals_.assign(residuals.begin(), residuals.end());
        pairs_.clear();
        vectors_ = std::move(solution.vectors);
    }

    void forget_operator() override {
        operator_.reset();
        matrix_lease_.reset();
        vector_lease_.reset();
    }

    void forget() override {
        forget_operator();
        rows_.reset();
        orbits_.reset();
        configurations_.reset();
        basis_lease_.reset();
        vectors_.resize(0, 0);
        pairs_.clear();
        vectors_fit_ = false;
    }

    Eigen::VectorXcd expanded(std::size_t level,
                              const HalvesBasis& all,
                              const Context& context) const override {
        CHAINMARK_EXPECTS(fit_for_use());
        Eigen::VectorXcd result(all.dim());
        constexpr std::size_t piece = 64;  // upper halves
        const std::size_t highs = all.highs().size();
        parallel_for((highs + piece - 1) / piece, context.threads, [&](std::size_t p) {
            poll(context);
            const std::size_t last = std::min(highs, (p + 1) * piece);
            all.for_each_in(p * piece, last, [&](std::int64_t index, Word word) {
                result[index] = amplitude(level, word) * gauge_phase(word);
            });
        });
        return result;
    }

    Eigen::VectorXd expectations(const std::vector<Term>& symmetric,
                                 const Context& context) const override {
        CHAINMARK_EXPECTS(fit_for_use());
        const auto count = static_cast<Eigen::Index>(known());
        const auto pieces =
            static_cast<std::size_t>((row_count() + rows_in_piece - 1) / rows_in_piece);
        std::vector<Eigen::VectorXd> sums(pieces);
        const PackedOperator op = packed_for_block(symmetric);
        const auto orbit_rows = rows_of(op);
        parallel_for(pieces, context.threads, [&](std::size_t p) {
            poll(context);
            const Rows rows = rows_in(p, op, orbit_rows);
            sums[p] = Eigen::VectorXd(count);
            for (Eigen::Index level = 0; level < count; ++level) {
                const Scalar* v = column(level);
                double sum = 0.0;
                for (std::size_t r = 0; r + 1 < rows.start.size(); ++r) {
                    sum += real_product(v[rows.first + static_cast<std::int64_t>(r)],
                                        rows.times(r, v));
                }
                sums[p][level] = sum;
            }
        });
        Eigen::VectorXd result = Eigen::VectorXd::Zero(count);
        for (const Eigen::VectorXd& part : sums) {
            result += part;
        }
        return result;
    }

    Eigen::MatrixXd squared_elements(const std::vector<Term>& symmetric,
                                     const Context& context) const override {
        CHAINMARK_EXPECTS(vectors_.cols() == vectors_.rows() && vectors_.cols() > 0);
        const auto lease = take(context, 3 * dim_ * dim_ * sizeof(Scalar));
        Matrix image(vectors_.rows(), vectors_.cols());
        const PackedOperator op = packed_for_block(symmetric);
        const auto orbit_rows = rows_of(op);
        for (std::size_t p = 0; static_cast<std::int64_t>(p) * rows_in_piece < row_count(); ++p) {
            poll(context);
            const Rows rows = rows_in(p, op, orbit_rows);
            for (Eigen::Index level = 0; level < image.cols(); ++level) {
                for (std::size_t r = 0; r + 1 < rows.start.size(); ++r) {
                    image(rows.first + static_cast<std::int64_t>(r), level) =
                        rows.times(r, column(level));
                }
            }
        }
        return (vectors_.adjoint() * image).cwiseAbs2();
    }

private:
    bool fit_for_use() const { return vectors_.cols() > 0 || (vectors_fit_ && !pairs_.empty()); }

    /// Some rows of an operator: <v|A|v> is the sum of v_r* times(r, v) over all rows, v being a
    /// column as it is stored (the weights of orbits are part of the elements).
    struct Rows {
        std::int64_t first = 0;
        std::vector<std::size_t> start;
        std::vector<std::int64_t> column;
        std::vector<Scalar> element;

        Scalar times(std::size_t r, const Scalar* v) const {
            Scalar sum(0);
            for (std::size_t i = start[r]; i < start[r + 1]; ++i) {
                sum += element[i] * v[column[i]];
            }
            return sum;
        }
        void add(std::int64_t at, Scalar value) {
            column.push_back(at);
            element.push_back(value);
        }
    };
    static constexpr std::int64_t rows_in_piece = 1 << 12;

    const Scalar* column(Eigen::Index level) const {
        return pairs_.empty() ? vectors_.col(level).data()
                              : pairs_[static_cast<std::size_t>(level)].vector.data();
    }

    std::int64_t row_count() const { return orbits_ ? orbits_->dim() : configurations_->dim(); }

    /// What an operator with imaginary coefficients adds to a real block's averages is zero.
    PackedOperator packed_for_block(std::vector<Term> terms) const {
        if constexpr (std::is_same_v<Scalar, double>) {
            for (Term& term : terms) {
                term.coefficient = term.coefficient.real();
            }
        }
        return {sector_.group.packing, terms};
    }

    std::optional<OrbitRows<Scalar>> rows_of(const PackedOperator& op) const {
        std::optional<OrbitRows<Scalar>> rows;
        if (orbits_) {
            rows.emplace(*orbits_, op);
        }
        return rows;
    }

    Rows rows_in(std::size_t piece,
                 const PackedOperator& op,
                 const std::optional<OrbitRows<Scalar>>& of_orbits) const {
        Rows rows;
        rows.first = static_cast<std::int64_t>(piece) * rows_in_piece;
        const std::int64_t last = std::min(row_count(), rows.first + rows_in_piece);
        if (of_orbits) {
            add_orbit_rows(*of_orbits, last, rows);
            return rows;
        }
        std::size_t high = 0;
        while (configurations_->start(high + 1) <= rows.first) {
            ++high;
        }
        for (; high < configurations_->highs().size() && configurations_->start(high) < last;
             ++high) {
            configurations_->for_each_in(high, high + 1, [&](std::int64_t index, Word word) {
                if (index < rows.first || index >= last) {
                    return;
                }
                rows.start.push_back(rows.element.size());
                op.apply(word, [&](Word target, std::complex<double> value) {
                    rows.add(configurations_->rank(target), as_scalar<Scalar>(std::conj(value)));
                });
            });
        }
        rows.start.push_back(rows.element.size());
        return rows;
    }

    void add_orbit_rows(const OrbitRows<Scalar>& of_orbits, std::int64_t last, Rows& rows) const {
        typename OrbitRows<Scalar>::Block block;
        for (std::int64_t from = rows.first; from < last; from += OrbitRows<Scalar>::rows_at_once) {
            const std::int64_t to = std::min(last, from + OrbitRows<Scalar>::rows_at_once);
            of_orbits.fill(from, to, block);
            std::size_t at = 0;
            for (std::int64_t row = from; row < to; ++row) {
                const auto scale = [&](std::int64_t other) {
                    return pairs_.empty() ? std::sqrt(orbits_->weight(row) / orbits_->weight(other))
                                          : orbits_->weight(row);
                };
                rows.start.push_back(rows.element.size());
                rows.add(row, scale(row) * of_orbits.diagonal_element(row));
                for (int n = block.row_length[static_cast<std::size_t>(row - from)]; n > 0;
                     --n, ++at) {
                    rows.add(block.column[at],
                             scale(block.column[at]) * of_orbits.coefficients()[block.code[at]]);
                }
            }
        }
        rows.start.push_back(rows.element.size());
    }

    static std::optional<MemoryBudget::Lease> take(const Context& context, double bytes) {
        return take_memory(context, bytes, "a sector");
    }

    void make_basis(const Context& context) {
        if (orbits_ || configurations_) {
            return;
        }
        if (auto lease =
                take(context, sector_.group.is_trivial() ? 0.0 : OrbitBasis::bytes(dim_))) {
            basis_lease_.emplace(std::move(*lease));
        }
        if (sector_.group.is_trivial()) {
            configurations_.emplace(
                sector_.group.packing, sector_.label.conserved, sector_.label.value);
        } else {
            orbits_.emplace(sector_.group, sector_.label, context);
            rows_.emplace(*orbits_, hamiltonian_.packed);
        }
    }

    void prepare(const Context& context) {
        if (operator_) {
            return;
        }
        make_basis(context);
        if (configurations_) {
            operator_ = make_by_halves<Scalar>(*configurations_, hamiltonian_.terms, context);
            return;
        }
        // Stored elements where they fit beside the vectors, else computed in each product.
        if (auto lease = take(context, lanczos_bytes<Scalar>(dim_))) {
            vector_lease_.emplace(std::move(*lease));
        }
        if (context.memory) {
            if (auto lease = context.memory->take(stored_bytes(*rows_))) {
                matrix_lease_.emplace(std::move(*lease));
            }
        }
        operator_ = matrix_lease_ || !context.memory ? make_stored(*rows_, context)
                                                     : make_matrix_free(*rows_, context);
    }

    /// Where the search for the sector's lowest state starts; empty: anywhere.
    StartFiller<Scalar> first_guess(const Context& context) const {
        const std::optional<SignRotation>& rotation = hamiltonian_.sign_rotation;
        if (!rotation || !StartVector::applies(hamiltonian_) ||
            !holds_positive_state(*rotation, sector_)) {
            return {};
        }
        return [this, &context, guess = StartVector(hamiltonian_, *rotation)](Scalar* x) {
            for_each_word(context,
                          [&](std::int64_t i, Word word) { x[i] = guess.amplitude(word); });
        };
    }

    /// visit(i, smallest configuration of component i), on all threads.
    template <class Visit>
    void for_each_word(const Context& context, Visit&& visit) const {
        const std::int64_t count =
            orbits_ ? orbits_->dim() : static_cast<std::int64_t>(configurations_->highs().size());
        const std::int64_t piece = orbits_ ? 1 << 12 : 64;
        parallel_for(static_cast<std::size_t>((count + piece - 1) / piece),
                     context.threads,
                     [&](std::size_t p) {
                         poll(context);
                         const std::int64_t first = static_cast<std::int64_t>(p) * piece;
                         const std::int64_t last = std::min(count, first + piece);
                         if (configurations_) {
                             configurations_->for_each_in(static_cast<std::size_t>(first),
                                                          static_cast<std::size_t>(last),
                                                          visit);
                             return;
                         }
                         for (std::int64_t i = first; i < last; ++i) {
                             visit(i, orbits_->word(i));
                         }
                     });
    }

    /// The vectors of a list that was made for its energies alone, to full accuracy.
    void refine(const Context& context) {
        const BigVector<Scalar> start = std::move(pairs_.front().vector);
        pairs_.clear();
        const StartFiller<Scalar> from = [&start](Scalar* x) {
            std::copy(start.begin(), start.end(), x);
        };
        pairs_.push_back(lowest_outside<Scalar>(*operator_, pairs_, Aim::vector, from, context));
        vectors_fit_ = true;
    }

    /// Energies with bounds from the pairs. Each level is within its residual; where the residuals
    /// separate it from its neighbours, also within residual^2 / distance
    /// (T. Kato, J. Phys. Soc. Jpn. 4, 334 (1949); G. Temple, Proc. R. Soc. London A 119, 276
    /// (1928); both quoted from memory).
    void publish() {
        std::sort(pairs_.begin(), pairs_.end(), [](const auto& a, const auto& b) {
            // A copy that an earlier search could not separate may come out a rounding lower.
            return a.value < b.value;
        });
        const auto count = static_cast<Eigen::Index>(pairs_.size());
        Eigen::VectorXd values(count);
        Eigen::VectorXd residuals(count);
        for (Eigen::Index i = 0; i < count; ++i) {
            values[i] = pairs_[static_cast<std::size_t>(i)].value;
            residuals[i] = pairs_[static_cast<std::size_t>(i)].residual;
        }
        Eigen::VectorXd bounds = cluster_bounds(values, residuals);
        for (Eigen::Index i = 0; i < count; ++i) {
            const EigenPair<Scalar>& pair = pairs_[static_cast<std::size_t>(i)];
            // The search saw no level below `next`, which is an estimate: half the distance is
            // used.
            double distance = i + 1 < count ? values[i + 1] - residuals[i + 1] - values[i]
                                            : (pair.next - values[i]) / 2;
            if (i > 0) {
                distance = std::min(distance, values[i] - values[i - 1] - residuals[i - 1]);
            }
            if (distance > 2 * residuals[i]) {
                bounds[i] =
                    std::min(bounds[i], residuals[i] * residuals[i] / distance + pair.noise);
            }
        }
        energies_.assign(values.begin(), values.end());
        residuals_.assign(residuals.begin(), residuals.end());
        bounds_.assign(bounds.begin(), bounds.end());
    }

    std::complex<double> amplitude(std::size_t level, Word word) const {
        const auto column = static_cast<Eigen::Index>(level);
        if (configurations_) {
            const std::int64_t index = configurations_->rank(word);
            return pairs_.empty() ? vectors_(index, column)
                                  : pairs_[level].vector[static_cast<std::size_t>(index)];
        }
        const ImageFinder& finder = orbits_->finder();
        const Image image = finder.smallest(word);
        const std::int64_t index = orbits_->index().find(orbits_->words(), image.word);
        if (index < 0) {
            return 0.0;
        }
        const std::complex<double> character =
            orbits_
                ->characters()[static_cast<std::size_t>(image.character(finder.group().numbers()))];
        return character * (pairs_.empty()
                                ? vectors_(index, column) / std::sqrt(orbits_->weight(index))
                                : pairs_[level].vector[static_cast<std::size_t>(index)]);
    }

    /// psi(s) = exp(i gauge sum_j j n_j) times the amplitude in the gauge.
    std::complex<double> gauge_phase(Word word) const {
        const double gauge = hamiltonian_.symmetries.gauge;
        if (gauge == 0.0) {
            return 1.0;
        }
        double angle = 0.0;
        for (int site = 0; site < sector_.group.packing.length; ++site) {
            angle += site * sector_.group.packing.digit(word, site);
        }
        return std::polar(1.0, gauge * angle);
    }

    Sector sector_;
    const SectorHamiltonian& hamiltonian_;
    double dim_;
    std::optional<OrbitBasis> orbits_;  ///< of a group,
    std::optional<OrbitRows<Scalar>> rows_;
    std::optional<HalvesBasis> configurations_;  ///< or of none
    std::optional<MemoryBudget::Lease> basis_lease_;
    std::optional<MemoryBudget::Lease> vector_lease_;
    std::optional<MemoryBudget::Lease> matrix_lease_;
    std::unique_ptr<LinearOperator<Scalar>> operator_;
    std::vector<EigenPair<Scalar>> pairs_;                     ///< levels found by searches,
    double tried_ = std::numeric_limits<double>::quiet_NaN();  ///< last energy given to the count
    bool vectors_fit_ = false;  ///< (their vectors converged, not only the energies)
    Matrix vectors_;            ///< or all of them, over the orthonormal basis
};

}  // namespace

std::unique_ptr<Block> make_block(const Sector& sector, const SectorHamiltonian& hamiltonian) {
    bool real = hamiltonian.packed.is_real();
    for (const std::complex<double>& character : characters(sector.group, sector.label.irrep)) {
        real = real && character.imag() == 0.0;
    }
    if (real) {
        return std::make_unique<TypedBlock<double>>(sector, hamiltonian);
    }
    return std::make_unique<TypedBlock<std::complex<double>>>(sector, hamiltonian);
}

BlockCost cost_of_lowest(double dim, const SectorHamiltonian& hamiltonian, bool trivial_group) {
    // Measured on a machine of two cores: see DEVELOPERS.md.
    const double hops = 1.0 + static_cast<double>(hamiltonian.packed.most_hops()) / 2;
    const double steps = 160;
    if (trivial_group) {
        return {4 * dim * 16, steps * dim * hops * 0.7e-9};
    }
    return {dim * 16 * 4 + OrbitBasis::bytes(dim), dim * hops * (steps * 1e-9 + 60e-9)};
}

}  // namespace chainmark::sector
