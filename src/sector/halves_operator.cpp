#include "chainmark/sector/halves_operator.hpp"

#include <algorithm>
#include <array>
#include <cmath>
#include <iterator>
#include <map>

#include "chainmark/base/big_vector.hpp"
#include "chainmark/base/error.hpp"
#include "chainmark/base/parallel.hpp"
#include "chainmark/sector/scalar.hpp"
#include "chainmark/sector/vector_sums.hpp"

namespace chainmark::sector {
namespace {

/// The part of a string on the sites first ... last-1, counted from `first`.
OperatorString part_of(const OperatorString& string, int first, int last) {
    OperatorString result;
    for (SiteFactor factor : string) {
        if (factor.site >= first && factor.site < last) {
            factor.site -= first;
            result.push_back(factor);
        }
    }
    return result;
}

/// A matrix from one class of lower halves to another: its elements, row by row.
template <class Scalar>
struct SmallMatrix {
    std::vector<std::int32_t> row;
    std::vector<std::int32_t> row_start = {0};  ///< places of each row's first element
    std::vector<std::int32_t> column;
    std::vector<Scalar> value;
};

/// U (x) D with all D that share one U added up.
template <class Scalar>
struct Product {
    PackedOperator upper;          ///< one string with coefficient 1
    bool lower_is_number = false;  ///< D = number times the identity
    Scalar number = 0.0;
    std::vector<SmallMatrix<Scalar>> lower = {};  ///< by the class of the row
};

/// D = sum of lower strings, one matrix for every class of rows.
template <class Scalar>
std::vector<SmallMatrix<Scalar>> lower_matrices(const HalvesBasis& basis,
                                                const Packing& low_packing,
                                                const std::vector<Term>& strings) {
    // Element <i|D|j> of the conjugate transpose by applying the conjugate strings to row i.
    std::vector<Term> adjoint;
    std::complex<double> identity = 0.0;
    for (const Term& term : strings) {
        if (term.string.empty()) {
            identity += term.coefficient;
        } else {
            adjoint.push_back({conjugate(term.string), std::conj(term.coefficient)});
        }
    }
    const PackedOperator op(low_packing, adjoint);
    std::vector<SmallMatrix<Scalar>> result(basis.n_classes());
    for (std::size_t c = 0; c < basis.n_classes(); ++c) {
        SmallMatrix<Scalar>& matrix = result[c];
        for (const Word row : basis.lows(static_cast<int>(c))) {
            std::map<std::int32_t, std::complex<double>> elements;
            const auto rank = [&](Word word) {
                return static_cast<std::int32_t>(basis.low_rank(word));
            };
            if (identity != 0.0) {
                elements[rank(row)] += identity;
            }
            op.apply(row, [&](Word word, std::complex<double> amplitude) {
                elements[rank(word)] += std::conj(amplitude);
            });
            for (const auto& element : elements) {
                matrix.row.push_back(rank(row));
                matrix.column.push_back(element.first);
                matrix.value.push_back(as_scalar<Scalar>(element.second));
            }
            matrix.row_start.push_back(static_cast<std::int32_t>(matrix.column.size()));
        }
    }
    return result;
}

/// Whether a string is diagonal and acts on the upper sites alone: a number for a whole block.
bool is_number_of_block(const OperatorString& string, int low_sites) {
    return !string.empty() &&
           std::all_of(string.begin(), string.end(), [low_sites](const SiteFactor& factor) {
               return factor.site >= low_sites && factor.op.is_diagonal();
           });
}

std::vector<Term> numbers_of_blocks(const std::vector<Term>& terms, int low_sites) {
    std::vector<Term> result;
    std::copy_if(terms.begin(), terms.end(), std::back_inserter(result), [&](const Term& term) {
        return is_number_of_block(term.string, low_sites);
    });
    return result;
}

template <class Scalar>
class ByHalves final : public LinearOperator<Scalar> {
public:
    ByHalves(const HalvesBasis& basis, const std::vector<Term>& terms, const Context& context)
        : basis_(basis),
          context_(context),
          n_strings_(terms.size()),
          row_sum_(PackedOperator(basis.packing(), terms).row_sum()),
          block_diagonal_(basis.packing(), numbers_of_blocks(terms, basis.packing().length / 2)) {
        const Packing& packing = basis.packing();
        const int low_sites = packing.length / 2;
        std::map<OperatorString, std::vector<Term>> by_upper;
        for (const Term& term : terms) {
            if (is_number_of_block(term.string, low_sites)) {
                continue;
            }
            OperatorString upper = term.string;
            std::erase_if(upper, [&](const SiteFactor& f) { return f.site < low_sites; });
            by_upper[upper].push_back({part_of(term.string, 0, low_sites), term.coefficient});
        }
        for (const auto& [upper, lower] : by_upper) {
            if (upper.empty()) {
                within_ = lower_matrices<Scalar>(basis, Packing(low_sites, packing.two_s), lower);
                continue;
            }
            Product<Scalar> product{PackedOperator(packing, {{upper, 1.0}})};
            product.lower_is_number = lower.size() == 1 && lower.front().string.empty();
            if (product.lower_is_number) {
                product.number = as_scalar<Scalar>(lower.front().coefficient);
            } else {
                product.lower =
                    lower_matrices<Scalar>(basis, Packing(low_sites, packing.two_s), lower);
            }
            products_.push_back(std::move(product));
        }
        share_out();
    }

    std::int64_t dim() const override { return basis_.dim(); }
    Metric metric() const override { return {}; }
    double row_sum() const override { return row_sum_; }
    std::size_t n_strings() const override { return n_strings_; }
    int threads() const override { return pieces_.size() < 2 ? 1 : context_.threads; }

    double multiply(const Scalar* x, Scalar* y, double scale, double keep) const override {
        std::vector<long double> dots(pieces_.size());
        parallel_for(pieces_.size(), threads(), [&](std::size_t p) {
            poll(context_);
            thread_local Scratch scratch;
            for (std::size_t g = pieces_[p].first; g < pieces_[p].second; ++g) {
                const Group& group = groups_[g];
                add_within(group, x, scratch);
                for (std::size_t b = 0; b < group.size(); ++b) {
                    Scalar* const sum = scratch.sum.data() + b * block_size(group[b]);
                    add_between(group[b], x, sum);
                    dots[p] += store(group[b], sum, x, y, scale, keep);
                }
            }
        });
        long double dot = 0.0L;
        for (const long double part : dots) {
            dot += part;
        }
        return static_cast<double>(dot);
    }

private:
    /// Blocks of one class. The lower sites' matrix is the same in all of them: it works on `width`
    /// blocks at a time, whose numbers then lie side by side, so that a matrix element multiplies
    /// `width` neighbours instead of one number gathered alone.
    using Group = std::vector<std::size_t>;
    static constexpr std::size_t width = 8;

    struct Scratch {
        std::vector<Scalar> side_by_side;  ///< [place in the block][block of the group]
        std::vector<Scalar> sum;           ///< [block of the group][place in the block]
    };

    std::size_t block_size(std::size_t h) const {
        return static_cast<std::size_t>(basis_.start(h + 1) - basis_.start(h));
    }

    void share_out() {
        std::vector<Group> open(basis_.n_classes());
        for (std::size_t h = 0; h < basis_.highs().size(); ++h) {
            Group& group = open[static_cast<std::size_t>(basis_.class_of_high(h))];
            group.push_back(h);
            if (group.size() == width) {
                groups_.push_back(std::move(group));
                group.clear();
            }
        }
        std::copy_if(open.begin(), open.end(), std::back_inserter(groups_), [](const Group& group) {
            return !group.empty();
        });
        const std::int64_t wanted = std::clamp<std::int64_t>(basis_.dim() / 64, 1000, 1 << 15);
        std::int64_t taken = 0;
        std::size_t first = 0;
        for (std::size_t g = 0; g < groups_.size(); ++g) {
            taken += static_cast<std::int64_t>(groups_[g].size() * block_size(groups_[g].front()));
            if (taken >= wanted || g + 1 == groups_.size()) {
                pieces_.emplace_back(first, g + 1);
                first = g + 1;
                taken = 0;
            }
        }
    }

    /// sum = the strings that leave the upper halves as they are.
    void add_within(const Group& group, const Scalar* x, Scratch& scratch) const {
        const std::size_t size = block_size(group.front());
        scratch.sum.resize(group.size() * size);
        if (within_.empty()) {
            std::fill(scratch.sum.begin(), scratch.sum.end(), Scalar(0.0));
        } else {
            scratch.side_by_side.resize(size * width);
            for (std::size_t b = 0; b < group.size(); ++b) {
                const Scalar* const in = x + basis_.start(group[b]);
                for (std::size_t i = 0; i < size; ++i) {
                    scratch.side_by_side[i * width + b] = in[i];
                }
            }
            const auto low_class = static_cast<std::size_t>(basis_.class_of_high(group.front()));
            multiply_side_by_side(within_[low_class], group.size(), scratch);
        }
        for (std::size_t b = 0; b < group.size(); ++b) {
            const double diagonal = block_diagonal_.diagonal_element(basis_.highs()[group[b]]);
            const Scalar* const in = x + basis_.start(group[b]);
            Scalar* const sum = scratch.sum.data() + b * size;
            for (std::size_t i = 0; i < size; ++i) {
                sum[i] += diagonal * in[i];
            }
        }
    }

    static void multiply_side_by_side(const SmallMatrix<Scalar>& matrix,
                                      std::size_t n_blocks,
                                      Scratch& scratch) {
        const std::size_t size = matrix.row_start.size() - 1;
        for (std::size_t i = 0; i < size; ++i) {
            std::array<Scalar, width> row{};
            for (auto e = static_cast<std::size_t>(matrix.row_start[i]);
                 e < static_cast<std::size_t>(matrix.row_start[i + 1]);
                 ++e) {
                const Scalar* const in =
                    &scratch.side_by_side[static_cast<std::size_t>(matrix.column[e]) * width];
                for (std::size_t b = 0; b < width; ++b) {
                    row[b] += matrix.value[e] * in[b];
                }
            }
            for (std::size_t b = 0; b < n_blocks; ++b) {
                scratch.sum[b * size + i] = row[b];
            }
        }
    }

    /// sum += the strings that change the upper half, into block h.
    void add_between(std::size_t h, const Scalar* x, Scalar* sum) const {
        const Word high = basis_.highs()[h];
        const std::size_t size = block_size(h);
        const auto low_class = static_cast<std::size_t>(basis_.class_of_high(h));
        for (const Product<Scalar>& product : products_) {
            const auto from = product.upper.source(high);
            if (!from || basis_.high_index(from->word) < 0) {
                continue;
            }
            const auto source = static_cast<std::size_t>(basis_.high_index(from->word));
            const Scalar* const in = x + basis_.start(source);
            if (product.lower_is_number) {
                const Scalar number = from->amplitude * product.number;
                for (std::size_t i = 0; i < size; ++i) {
                    sum[i] += number * in[i];
                }
                continue;
            }
            const SmallMatrix<Scalar>& matrix = product.lower[low_class];
            for (std::size_t e = 0; e < matrix.value.size(); ++e) {
                sum[matrix.row[e]] += from->amplitude * matrix.value[e] * in[matrix.column[e]];
            }
        }
    }

    long double store(std::size_t h,
                      const Scalar* sum,
                      const Scalar* x,
                      Scalar* y,
                      double scale,
                      double keep) const {
        const auto size = static_cast<std::int64_t>(block_size(h));
        const Scalar* const in = x + basis_.start(h);
        Scalar* const out = y + basis_.start(h);
        long double total = 0.0L;
        for (std::int64_t first = 0; first < size; first += run_length) {
            const std::int64_t last = std::min(size, first + run_length);
            total += sum_in_lanes<double>(first, last, [&](std::int64_t i) {
                const Scalar value = keep == 0.0 ? scale * sum[i] : scale * sum[i] - keep * out[i];
                out[i] = value;
                return real_product(in[i], value);
            });
        }
        return total;
    }

    const HalvesBasis& basis_;
    Context context_;
    std::size_t n_strings_;
    double row_sum_;
    PackedOperator block_diagonal_;  ///< diagonal strings of the upper sites: one number a block
    std::vector<SmallMatrix<Scalar>> within_;  ///< strings of the lower sites, by class; or empty
    std::vector<Product<Scalar>> products_;
    std::vector<Group> groups_;
    std::vector<std::pair<std::size_t, std::size_t>> pieces_;  ///< ranges of groups
};

}  // namespace

template <class Scalar>
std::unique_ptr<LinearOperator<Scalar>> make_by_halves(const HalvesBasis& basis,
                                                       const std::vector<Term>& terms,
                                                       const Context& context) {
    return std::make_unique<ByHalves<Scalar>>(basis, terms, context);
}

template std::unique_ptr<LinearOperator<double>> make_by_halves(const HalvesBasis&,
                                                                const std::vector<Term>&,
                                                                const Context&);
template std::unique_ptr<LinearOperator<std::complex<double>>> make_by_halves(
    const HalvesBasis&, const std::vector<Term>&, const Context&);

}  // namespace chainmark::sector
