#pragma once

#include <algorithm>
#include <complex>
#include <random>
#include <vector>

#include "chainmark/sector/group.hpp"

/// The maps of a group, applied digit by digit: slow, and nothing of the route's word tricks.
namespace chainmark::test {

struct Moved {
    sector::Word word;
    bool odd;  ///< the sign of the antiperiodic boundary
};

/// T^t R^r Z^z |word>.
inline Moved moved(const sector::Group& group, int t, int r, int z, sector::Word word) {
    const sector::Packing& packing = group.packing;
    std::vector<int> digits;
    for (int site = 0; site < packing.length; ++site) {
        const int digit = packing.digit(word, site);
        digits.push_back(z == 1 ? packing.two_s - digit : digit);
    }
    if (r == 1) {
        std::reverse(digits.begin(), digits.end());
    }
    bool odd = false;
    for (int site = 0; site < t * group.step; ++site) {
        odd = odd != (group.wrap_sign && digits.back() % 2 != 0);
        std::rotate(digits.begin(), digits.end() - 1, digits.end());
    }
    sector::Word result = 0;
    for (int site = 0; site < packing.length; ++site) {
        result |= packing.place(digits[static_cast<std::size_t>(site)], site);
    }
    return {result, odd};
}

/// Calls visit(t, r, z) for every map of the group.
template <class Visit>
void for_each_map(const sector::Group& group, Visit&& visit) {
    for (int z = 0; z < (group.inversion ? 2 : 1); ++z) {
        for (int r = 0; r < (group.reflection ? 2 : 1); ++r) {
            for (int t = 0; t < group.translations(); ++t) {
                visit(t, r, z);
            }
        }
    }
}

/// Every configuration, ascending in its word.
inline std::vector<sector::Word> all_words(const sector::Packing& packing) {
    std::vector<sector::Word> words = {0};
    for (int site = packing.length - 1; site >= 0; --site) {
        std::vector<sector::Word> longer;
        for (const sector::Word word : words) {
            for (int digit = 0; digit <= packing.two_s; ++digit) {
                longer.push_back(word | packing.place(digit, site));
            }
        }
        words = std::move(longer);
    }
    return words;
}

inline sector::Word random_word(const sector::Packing& packing, std::mt19937_64& generator) {
    // Few different digits in some words: long runs and large stabilizers.
    const int largest = std::uniform_int_distribution<int>(0, packing.two_s)(generator);
    std::uniform_int_distribution<int> digit(0, largest);
    std::uniform_int_distribution<int> period(1, packing.length);
    const int repeat = period(generator);
    std::vector<int> digits;
    sector::Word word = 0;
    for (int site = 0; site < packing.length; ++site) {
        digits.push_back(site < repeat ? digit(generator)
                                       : digits[static_cast<std::size_t>(site - repeat)]);
        word |= packing.place(digits.back(), site);
    }
    return word;
}

inline bool counts(const sector::Packing& packing,
                   sector::Conserved conserved,
                   int value,
                   sector::Word word) {
    const int sum = packing.digit_sum(word);
    return conserved == sector::Conserved::nothing ||
           (conserved == sector::Conserved::up_count ? sum == value : sum % 2 == value);
}

/// The words that are the smallest of their orbit, in a sector whose representation allows it: the
/// sum of (-1)^odd chi(h)* over the maps that leave the word in place does not vanish.
inline std::vector<sector::Word> allowed_words(const sector::Group& group,
                                               const sector::Irrep& irrep,
                                               sector::Conserved conserved,
                                               int value) {
    const std::vector<std::complex<double>> chi = characters(group, irrep);
    std::vector<sector::Word> result;
    for (const sector::Word word : all_words(group.packing)) {
        if (!counts(group.packing, conserved, value, word)) {
            continue;
        }
        bool smallest = true;
        std::complex<double> sum = 0.0;
        for_each_map(group, [&](int t, int r, int z) {
            const Moved image = moved(group, t, r, z, word);
            smallest = smallest && image.word >= word;
            if (image.word == word) {
                const auto at = static_cast<std::size_t>(group.number(t, r, z));
                sum += image.odd ? -std::conj(chi[at]) : std::conj(chi[at]);
            }
        });
        if (smallest && std::abs(sum) > 0.5) {
            result.push_back(word);
        }
    }
    return result;
}

}  // namespace chainmark::test
