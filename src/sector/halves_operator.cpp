#include "chainmark/sector/halves_operator.hpp"

#include <algorithm>
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

/// A matrix from one class of lower halves to another, in compressed rows.
template <class Scalar>
struct SmallMatrix {
    std::vector<std::int32_t> row_start = {0};
    std::vector<std::int32_t> column;
    std::vector<Scalar> value;
};

/// U (x) D with all D that share one U added up.
template <class Scalar>
struct Product {
    PackedOperator upper;          ///< one string with coefficient 1; none: the identity
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
            Product<Scalar> product{PackedOperator(
                packing, upper.empty() ? std::vector<Term>{} : std::vector<Term>{{upper, 1.0}})};
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
            std::vector<Scalar> sum;
            for (std::size_t h = pieces_[p].first; h < pieces_[p].second; ++h) {
                block(h, x, sum);
                dots[p] += store(h, sum, x, y, scale, keep);
            }
        });
        long double dot = 0.0L;
        for (const long double part : dots) {
            dot += part;
        }
        return static_cast<double>(dot);
    }

private:
    void share_out() {
        const std::int64_t wanted = std::clamp<std::int64_t>(basis_.dim() / 64, 1000, 1 << 15);
        std::size_t first = 0;
        for (std::size_t h = 1; h <= basis_.highs().size(); ++h) {
            if (h == basis_.highs().size() || basis_.start(h) - basis_.start(first) >= wanted) {
                pieces_.emplace_back(first, h);
                first = h;
            }
        }
    }

    /// sum = the block h of H x.
    void block(std::size_t h, const Scalar* x, std::vector<Scalar>& sum) const {
        const Word high = basis_.highs()[h];
        const auto size = static_cast<std::size_t>(basis_.start(h + 1) - basis_.start(h));
        const auto low_class = static_cast<std::size_t>(basis_.class_of_high(h));
        const double diagonal = block_diagonal_.diagonal_element(high);
        sum.resize(size);
        for (std::size_t i = 0; i < size; ++i) {
            sum[i] = diagonal * x[basis_.start(h) + static_cast<std::int64_t>(i)];
        }
        for (const Product<Scalar>& product : products_) {
            double factor = 1.0;
            std::size_t source = h;
            if (product.upper.n_strings() != 0) {
                const auto from = product.upper.source(high);
                if (!from || basis_.high_index(from->word) < 0) {
                    continue;
                }
                source = static_cast<std::size_t>(basis_.high_index(from->word));
                factor = from->amplitude;
            }
            const Scalar* in = x + basis_.start(source);
            if (product.lower_is_number) {
                const Scalar number = factor * product.number;
                for (std::size_t i = 0; i < size; ++i) {
                    sum[i] += number * in[i];
                }
                continue;
            }
            const SmallMatrix<Scalar>& matrix = product.lower[low_class];
            for (std::size_t i = 0; i < size; ++i) {
                Scalar row(0.0);
                for (auto e = static_cast<std::size_t>(matrix.row_start[i]);
                     e < static_cast<std::size_t>(matrix.row_start[i + 1]);
                     ++e) {
                    row += matrix.value[e] * in[matrix.column[e]];
                }
                sum[i] += factor * row;
            }
        }
    }

    long double store(std::size_t h,
                      const std::vector<Scalar>& sum,
                      const Scalar* x,
                      Scalar* y,
                      double scale,
                      double keep) const {
        const std::int64_t start = basis_.start(h);
        long double total = 0.0L;
        for (std::size_t first = 0; first < sum.size(); first += run_length) {
            const std::size_t last = std::min(sum.size(), first + run_length);
            double run = 0.0;
            for (std::size_t i = first; i < last; ++i) {
                const std::int64_t at = start + static_cast<std::int64_t>(i);
                const Scalar value = keep == 0.0 ? scale * sum[i] : scale * sum[i] - keep * y[at];
                y[at] = value;
                run += real_product(x[at], value);
            }
            total += run;
        }
        return total;
    }

    const HalvesBasis& basis_;
    Context context_;
    std::size_t n_strings_;
    double row_sum_;
    PackedOperator block_diagonal_;  ///< diagonal strings of the upper sites: one number a block
    std::vector<Product<Scalar>> products_;
    std::vector<std::pair<std::size_t, std::size_t>> pieces_;  ///< ranges of blocks
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
