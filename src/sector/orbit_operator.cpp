#include "chainmark/sector/orbit_operator.hpp"

#include <algorithm>
#include <bit>
#include <cmath>
#include <unordered_map>
#include <unordered_set>

#include "chainmark/base/big_vector.hpp"
#include "chainmark/base/parallel.hpp"
#include "chainmark/sector/vector_sums.hpp"

namespace chainmark::sector {
namespace {

/// What both operators do with the sum over a row.
template <class Scalar>
class RowSink {
public:
    RowSink(const Scalar* x, Scalar* y, double scale, double keep, const Metric& metric)
        : x_(x), y_(y), scale_(scale), keep_(keep), metric_(metric) {}

    void take(std::int64_t row, Scalar sum) {
        Scalar value = scale_ * sum;
        if (keep_ != 0.0) {
            value -= keep_ * y_[row];
        }
        y_[row] = value;
        run_ += metric_.weight(row) * real_product(x_[row], value);
        if (++in_run_ == run_length) {
            flush();
        }
    }

    long double total() {
        flush();
        return total_;
    }

private:
    void flush() {
        total_ += run_;
        run_ = 0.0;
        in_run_ = 0;
    }

    const Scalar* x_;
    Scalar* y_;
    double scale_;
    double keep_;
    Metric metric_;
    double run_ = 0.0;
    int in_run_ = 0;
    long double total_ = 0.0L;
};

/// The common part: dimensions, metric, and the loop over pieces of the rows.
template <class Scalar>
class OrbitOperator : public LinearOperator<Scalar> {
public:
    OrbitOperator(const OrbitRows<Scalar>& rows, const Context& context)
        : context_(context),
          dim_(rows.basis().dim()),
          metric_(rows.basis().metric()),
          row_sum_(rows.op().row_sum()),
          n_strings_(rows.op().n_strings()) {
        // Enough pieces to share, and none so large that a stop request waits for it.
        piece_ = std::clamp<std::int64_t>(dim_ / 64, OrbitRows<Scalar>::rows_at_once, 1 << 18);
        piece_ = (piece_ + OrbitRows<Scalar>::rows_at_once - 1) / OrbitRows<Scalar>::rows_at_once *
                 OrbitRows<Scalar>::rows_at_once;
    }

    std::int64_t dim() const override { return dim_; }
    Metric metric() const override { return metric_; }
    double row_sum() const override { return row_sum_; }
    std::size_t n_strings() const override { return n_strings_; }
    int threads() const override {
        constexpr std::int64_t worth_a_thread = 4000;
        return dim_ < worth_a_thread ? 1 : context_.threads;
    }

    double multiply(const Scalar* x, Scalar* y, double scale, double keep) const override {
        std::vector<long double> dots(pieces());
        parallel_for(pieces(), threads(), [&](std::size_t piece) {
            poll(context_);
            RowSink<Scalar> sink(x, y, scale, keep, metric_);
            multiply_rows(piece, x, sink);
            dots[piece] = sink.total();
        });
        long double dot = 0.0L;
        for (const long double part : dots) {
            dot += part;
        }
        return static_cast<double>(dot);
    }

protected:
    std::size_t pieces() const { return static_cast<std::size_t>((dim_ + piece_ - 1) / piece_); }
    std::int64_t first_row(std::size_t piece) const {
        return static_cast<std::int64_t>(piece) * piece_;
    }
    std::int64_t end_row(std::size_t piece) const {
        return std::min(dim_, first_row(piece) + piece_);
    }
    const Context& context() const { return context_; }

private:
    virtual void multiply_rows(std::size_t piece, const Scalar* x, RowSink<Scalar>& sink) const = 0;

    Context context_;
    std::int64_t dim_;
    Metric metric_;
    double row_sum_;
    std::size_t n_strings_;
    std::int64_t piece_;
};

template <class Scalar>
class MatrixFree final : public OrbitOperator<Scalar> {
public:
    MatrixFree(const OrbitRows<Scalar>& rows, const Context& context)
        : OrbitOperator<Scalar>(rows, context), rows_(rows) {}

private:
    void multiply_rows(std::size_t piece, const Scalar* x, RowSink<Scalar>& sink) const override {
        const Scalar* values = rows_.coefficients().data();
        for_each_row(
            rows_,
            this->first_row(piece),
            this->end_row(piece),
            [&](std::int64_t row, const std::uint32_t* column, const std::uint32_t* code, int n) {
                Scalar sum = rows_.diagonal_element(row) * x[row];
                for (int i = 0; i < n; ++i) {
                    sum += values[code[i]] * x[column[i]];
                }
                sink.take(row, sum);
            });
    }

    const OrbitRows<Scalar>& rows_;
};

template <class Scalar>
int column_bits(const OrbitRows<Scalar>& rows) {
    return static_cast<int>(std::bit_width(static_cast<std::uint64_t>(rows.basis().dim() - 1)));
}

/// The diagonal of some rows. Most chains have few distinct elements: then two bytes a row.
class PieceDiagonal {
public:
    void reserve(std::size_t rows) { codes_.reserve(rows); }

    void push_back(double element) {
        if (plain_.empty()) {
            const auto place = code_of_.try_emplace(element, values_.size());
            if (place.first->second < most_values) {
                if (place.second) {
                    values_.push_back(element);
                }
                codes_.push_back(static_cast<std::uint16_t>(place.first->second));
                return;
            }
            for (const std::uint16_t code : codes_) {
                plain_.push_back(values_[code]);
            }
            codes_ = {};
        }
        plain_.push_back(element);
    }

    /// To be called when all rows are there.
    void finish() { code_of_ = {}; }

    double operator[](std::size_t row) const {
        return plain_.empty() ? values_[codes_[row]] : plain_[row];
    }

private:
    static constexpr std::size_t most_values = 1 << 16;

    std::unordered_map<double, std::size_t> code_of_;
    std::vector<double> values_;
    BigVector<std::uint16_t> codes_;
    BigVector<double> plain_;  ///< the elements themselves, where there are too many values
};

/// Elements are columns with the code of their value in the bits above.
template <class Scalar, class Element>
class Stored final : public OrbitOperator<Scalar> {
public:
    Stored(const OrbitRows<Scalar>& rows, const Context& context)
        : OrbitOperator<Scalar>(rows, context),
          values_(rows.coefficients()),
          column_bits_(column_bits(rows)),
          has_diagonal_(!rows.op().diagonal().empty()),
          pieces_(this->pieces()) {
        parallel_for(pieces_.size(), this->threads(), [&](std::size_t i) {
            poll(context);
            fill(rows, i);
        });
    }

private:
    /// How many elements ahead of its use an amplitude is asked for: those of a large sector come
    /// from main memory. The elements end with as many zeros.
    static constexpr std::size_t ahead = 40;

    struct Piece {
        BigVector<std::uint16_t> row_length;
        PieceDiagonal diagonal;
        BigVector<Element> elements;
    };

    void fill(const OrbitRows<Scalar>& rows, std::size_t i) {
        Piece& piece = pieces_[i];
        const auto n_rows = static_cast<std::size_t>(this->end_row(i) - this->first_row(i));
        piece.row_length.reserve(n_rows);
        piece.diagonal.reserve(has_diagonal_ ? n_rows : 0);
        // Room for every string in every row; what stays unused is never touched.
        piece.elements.reserve(n_rows * rows.op().most_hops() + ahead);
        for_each_row(
            rows,
            this->first_row(i),
            this->end_row(i),
            [&](std::int64_t row,
                const std::uint32_t* column,
                const std::uint32_t* code,
                int count) {
                piece.row_length.push_back(static_cast<std::uint16_t>(count));
                if (has_diagonal_) {
                    piece.diagonal.push_back(rows.diagonal_element(row));
                }
                for (int e = 0; e < count; ++e) {
                    piece.elements.push_back(static_cast<Element>(
                        (static_cast<std::uint64_t>(code[e]) << column_bits_) | column[e]));
                }
            });
        piece.elements.insert(piece.elements.end(), ahead, Element(0));
        piece.diagonal.finish();
    }

    void multiply_rows(std::size_t i, const Scalar* x, RowSink<Scalar>& sink) const override {
        const Piece& piece = pieces_[i];
        const Element* element = piece.elements.data();
        const auto mask = static_cast<Element>((std::uint64_t{1} << column_bits_) - 1);
        const Scalar* values = values_.data();
        const int bits = column_bits_;
        std::int64_t row = this->first_row(i);
        for (std::size_t r = 0; r < piece.row_length.size(); ++r, ++row) {
            Scalar sum = has_diagonal_ ? piece.diagonal[r] * x[row] : Scalar(0.0);
            const Element* const end = element + piece.row_length[r];
            // Two sums: one would wait for its own last addition.
            Scalar other = 0.0;
            for (; element + 1 < end; element += 2) {
                __builtin_prefetch(x + (element[ahead] & mask));
                __builtin_prefetch(x + (element[ahead - 1] & mask));
                sum += values[element[0] >> bits] * x[element[0] & mask];
                other += values[element[1] >> bits] * x[element[1] & mask];
            }
            if (element != end) {
                sum += values[*element >> bits] * x[*element & mask];
                ++element;
            }
            sum += other;
            sink.take(row, sum);
        }
    }

    std::vector<Scalar> values_;
    int column_bits_;
    bool has_diagonal_;
    std::vector<Piece> pieces_;
};

template <class Scalar>
bool fits_in_32_bits(const OrbitRows<Scalar>& rows) {
    return column_bits(rows) + static_cast<int>(std::bit_width(rows.coefficients().size() - 1)) <=
           32;
}

}  // namespace

template <class Scalar>
std::unique_ptr<LinearOperator<Scalar>> make_matrix_free(const OrbitRows<Scalar>& rows,
                                                         const Context& context) {
    return std::make_unique<MatrixFree<Scalar>>(rows, context);
}

template <class Scalar>
std::unique_ptr<LinearOperator<Scalar>> make_stored(const OrbitRows<Scalar>& rows,
                                                    const Context& context) {
    if (fits_in_32_bits(rows)) {
        return std::make_unique<Stored<Scalar, std::uint32_t>>(rows, context);
    }
    return std::make_unique<Stored<Scalar, std::uint64_t>>(rows, context);
}

template <class Scalar>
double stored_bytes(const OrbitRows<Scalar>& rows) {
    // The mean number of elements in a row, from some ten thousand rows all over the basis.
    constexpr std::int64_t n_samples = 64;
    constexpr std::int64_t sample = 256;
    constexpr double margin = 1.05;
    const std::int64_t dim = rows.basis().dim();
    double counted = 0.0;
    double elements = 0.0;
    std::unordered_set<double> on_diagonal;
    for (std::int64_t s = 0; s < n_samples; ++s) {
        const std::int64_t first = dim * s / n_samples;
        const std::int64_t last = std::min(first + sample, dim * (s + 1) / n_samples);
        counted += static_cast<double>(last - first);
        for_each_row(rows,
                     first,
                     last,
                     [&](std::int64_t row,
                         const std::uint32_t* /*column*/,
                         const std::uint32_t* /*code*/,
                         int count) {
                         elements += count;
                         on_diagonal.insert(rows.diagonal_element(row));
                     });
    }
    const double per_row = margin * elements / std::max(counted, 1.0);
    const bool few_values = static_cast<double>(on_diagonal.size()) < counted / 4;
    const double diagonal = rows.op().diagonal().empty() ? 0.0
                            : few_values                 ? sizeof(std::uint16_t)
                                                         : sizeof(double);
    return static_cast<double>(dim) * (per_row * (fits_in_32_bits(rows) ? 4 : 8) + 2 + diagonal);
}

template std::unique_ptr<LinearOperator<double>> make_matrix_free(const OrbitRows<double>&,
                                                                  const Context&);
template std::unique_ptr<LinearOperator<std::complex<double>>> make_matrix_free(
    const OrbitRows<std::complex<double>>&, const Context&);
template std::unique_ptr<LinearOperator<double>> make_stored(const OrbitRows<double>&,
                                                             const Context&);
template std::unique_ptr<LinearOperator<std::complex<double>>> make_stored(
    const OrbitRows<std::complex<double>>&, const Context&);
template double stored_bytes(const OrbitRows<double>&);
template double stored_bytes(const OrbitRows<std::complex<double>>&);

}  // namespace chainmark::sector
