#pragma once

#include <complex>
#include <cstdint>
#include <optional>
#include <vector>

#include "chainmark/operators/term_list.hpp"
#include "chainmark/sector/packing.hpp"

namespace chainmark::sector {

/// An operator string acting on configurations as integers:
///   string |s> = amplitude(s) |s ^ flip>  where (s & mask) == from, else 0.
/// The diagonal factors in it depend on few digits of s; their distinct products are tabulated, so
/// that an amplitude is one of a few numbers.
struct PackedString {
    Word flip = 0;
    Word mask = 0;  ///< all bits of the sites that |to><from| acts on
    Word from = 0;
    Word signs = 0;  ///< S = 1/2: the sites of Sz, each giving 1/2 or -1/2
    struct Factor {
        int site;
        std::uint8_t degree;  ///< of Sz[degree]
    };
    std::vector<Factor> factors;       ///< other spins: the diagonal factors
    std::complex<double> coefficient;  ///< with the 1/2 of every Sz at S = 1/2

    bool acts_on(Word s) const { return (s & mask) == from; }
    bool is_diagonal() const { return mask == 0; }
};

/// Strings in packed form, the diagonal ones apart, and everything needed to apply them.
class PackedOperator {
public:
    PackedOperator(const Packing& packing, const std::vector<Term>& terms);

    const Packing& packing() const { return packing_; }
    const std::vector<PackedString>& diagonal() const { return diagonal_; }
    const std::vector<PackedString>& hops() const { return hops_; }

    /// <s| sum of diagonal strings |s>; real, since H is Hermitian.
    double diagonal_element(Word s) const;

    /// The distinct values that <s| H |s ^ flip> takes over all hops and configurations.
    const std::vector<std::complex<double>>& amplitudes() const { return amplitudes_; }

    /// Upper bound of the number of non-zero off-diagonal elements in a row.
    std::size_t most_hops() const { return hops_.size(); }

    /// Fills `words` and `which` (an index into amplitudes()) with the configurations s' != s and
    /// the elements <s|H|s'>; returns their number. Needs room for most_hops() + 1, and that the
    /// strings together are Hermitian.
    int neighbours(Word s, Word* words, std::uint32_t* which) const;

    /// Calls visit(word, <word|A|s>) for every string, for any operator A.
    template <class Visit>
    void apply(Word s, Visit&& visit) const {
        for (const PackedString& string : diagonal_) {
            visit(s, string.coefficient * factor_value(string, s));
        }
        for (const PackedString& string : hops_) {
            if (string.acts_on(s)) {
                visit(s ^ string.flip, string.coefficient * factor_value(string, s));
            }
        }
    }

    /// The product of the diagonal factors at a configuration, without the coefficient.
    double factor_value(const PackedString& string, Word s) const {
        double value = __builtin_parityll(~s & string.signs) == 0 ? 1.0 : -1.0;
        for (const PackedString::Factor& factor : string.factors) {
            value *= gram_[factor.degree][static_cast<std::size_t>(packing_.digit(s, factor.site))];
        }
        return value;
    }

    /// For an operator of one string with coefficient 1: the configuration that it takes to
    /// `target`, and the amplitude; nothing where there is none.
    struct Source {
        Word word;
        double amplitude;
    };
    std::optional<Source> source(Word target) const;

    /// Largest possible sum over a row of |contributions|, before they cancel: an upper bound of
    /// ||H|| and the scale of its rounding.
    double row_sum() const { return row_sum_; }
    std::size_t n_strings() const { return diagonal_.size() + hops_.size(); }
    bool is_real() const { return real_; }

private:
    std::uint32_t amplitude_index(std::complex<double> value);
    void tabulate(const PackedString& string);

    Packing packing_;
    std::vector<PackedString> diagonal_;
    std::vector<PackedString> hops_;
    std::vector<std::vector<double>> gram_;  ///< [degree][digit]
    std::vector<std::complex<double>> amplitudes_;
    /// S = 1/2: [2 hop + sign]; other spins: [table_start_[hop] + mixed-radix number of its
    /// digits].
    std::vector<std::uint32_t> table_;
    std::vector<std::size_t> table_start_;
    double row_sum_ = 0.0;
    bool real_ = true;
};

}  // namespace chainmark::sector
