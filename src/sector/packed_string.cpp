#include "chainmark/sector/packed_string.hpp"

#include <algorithm>
#include <bit>
#include <cmath>
#include <map>
#include <stdexcept>

#include <fmt/format.h>

namespace chainmark::sector {
namespace {

/// Longest table of the amplitudes of one string at S > 1/2.
constexpr std::size_t largest_table = 1 << 16;

PackedString packed(const Packing& packing, const Term& term) {
    PackedString result;
    result.coefficient = term.coefficient;
    for (const SiteFactor& factor : term.string) {
        if (!factor.op.is_diagonal()) {
            result.mask |= packing.site_bits(factor.site);
            result.from |= packing.place(factor.op.from, factor.site);
            result.flip |= packing.place(factor.op.from ^ factor.op.to, factor.site);
        } else if (packing.two_s == 1) {
            result.signs |= packing.site_bits(factor.site);
            result.coefficient /= 2;
        } else {
            result.factors.push_back({factor.site, factor.op.degree});
        }
    }
    return result;
}

}  // namespace

PackedOperator::PackedOperator(const Packing& packing, const std::vector<Term>& terms)
    : packing_(packing) {
    gram_.resize(static_cast<std::size_t>(packing.two_s) + 1);
    for (int degree = 1; degree <= packing.two_s; ++degree) {
        for (int digit = 0; digit <= packing.two_s; ++digit) {
            gram_[static_cast<std::size_t>(degree)].push_back(
                gram_value(packing.two_s, degree, digit));
        }
    }
    // Of strings on the same sites only those that start from the same digits act together.
    std::map<Word, std::map<Word, double>> acting;
    for (const Term& term : terms) {
        PackedString string = packed(packing, term);
        double largest = std::abs(string.coefficient);
        for (const PackedString::Factor& factor : string.factors) {
            double peak = 0.0;
            for (const double value : gram_[factor.degree]) {
                peak = std::max(peak, std::abs(value));
            }
            largest *= peak;
        }
        acting[string.mask][string.from] += largest;
        real_ = real_ && string.coefficient.imag() == 0.0;
        (string.is_diagonal() ? diagonal_ : hops_).push_back(std::move(string));
    }
    for (const auto& [mask, by_digits] : acting) {
        double most = 0.0;
        for (const auto& [from, sum] : by_digits) {
            most = std::max(most, sum);
        }
        row_sum_ += most;
    }
    for (const PackedString& string : hops_) {
        tabulate(string);
    }
}

double PackedOperator::diagonal_element(Word s) const {
    double sum = 0.0;
    for (const PackedString& string : diagonal_) {
        sum += string.coefficient.real() * factor_value(string, s);
    }
    return sum;
}

std::optional<PackedOperator::Source> PackedOperator::source(Word target) const {
    const PackedString& string = hops_.empty() ? diagonal_.front() : hops_.front();
    const Word word = target ^ string.flip;
    if (!string.acts_on(word)) {
        return std::nullopt;
    }
    return Source{word, string.coefficient.real() * factor_value(string, word)};
}

std::uint32_t PackedOperator::amplitude_index(std::complex<double> value) {
    const auto at = std::find(amplitudes_.begin(), amplitudes_.end(), value);
    if (at == amplitudes_.end()) {
        amplitudes_.push_back(value);
        return static_cast<std::uint32_t>(amplitudes_.size() - 1);
    }
    return static_cast<std::uint32_t>(at - amplitudes_.begin());
}

/// <s|H|s'> with s' = s ^ flip is the conjugate of <s'|string|s>.
void PackedOperator::tabulate(const PackedString& string) {
    const std::complex<double> coefficient = std::conj(string.coefficient);
    table_start_.push_back(table_.size());
    if (packing_.two_s == 1) {
        table_.push_back(amplitude_index(coefficient));
        table_.push_back(amplitude_index(-coefficient));
        return;
    }
    const auto digits = static_cast<std::size_t>(packing_.two_s) + 1;
    std::size_t size = 1;
    for (std::size_t i = 0; i < string.factors.size() && size <= largest_table; ++i) {
        size *= digits;
    }
    if (size > largest_table) {
        throw std::runtime_error(
            fmt::format("a term with {} diagonal factors of spin {}/2 beside its ladder operators "
                        "is too long for this route",
                        string.factors.size(),
                        packing_.two_s));
    }
    for (std::size_t number = 0; number < size; ++number) {
        double value = 1.0;
        std::size_t rest = number;
        for (const PackedString::Factor& factor : string.factors) {
            value *= gram_[factor.degree][rest % digits];
            rest /= digits;
        }
        table_.push_back(amplitude_index(coefficient * value));
    }
}

int PackedOperator::neighbours(Word s, Word* words, std::uint32_t* which) const {
    int count = 0;
    if (packing_.two_s == 1) {
        // Written always and kept where the string acts: half of the tests would be mispredicted.
        for (std::size_t h = 0; h < hops_.size(); ++h) {
            const PackedString& string = hops_[h];
            const auto minus = static_cast<std::size_t>(std::popcount(~s & string.signs) & 1);
            words[count] = s ^ string.flip;
            which[count] = table_[2 * h + minus];
            count += string.acts_on(s) ? 1 : 0;
        }
        return count;
    }
    for (std::size_t h = 0; h < hops_.size(); ++h) {
        const PackedString& string = hops_[h];
        if (!string.acts_on(s)) {
            continue;
        }
        std::size_t number = 0;
        for (std::size_t i = string.factors.size(); i-- > 0;) {
            number = number * (static_cast<std::size_t>(packing_.two_s) + 1) +
                     static_cast<std::size_t>(packing_.digit(s, string.factors[i].site));
        }
        words[count] = s ^ string.flip;
        which[count] = table_[table_start_[h] + number];
        ++count;
    }
    return count;
}

}  // namespace chainmark::sector
