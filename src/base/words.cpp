#include "chainmark/base/words.hpp"

#include <algorithm>

#include <fmt/format.h>

namespace chainmark {
namespace {

/// Optimal string alignment distance.
int edit_distance(std::string_view a, std::string_view b) {
    const std::size_t width = b.size() + 1;
    std::vector<int> table((a.size() + 1) * width);
    const auto at = [&](std::size_t i, std::size_t j) -> int& { return table[i * width + j]; };
    for (std::size_t i = 0; i <= a.size(); ++i) {
        at(i, 0) = static_cast<int>(i);
    }
    for (std::size_t j = 0; j <= b.size(); ++j) {
        at(0, j) = static_cast<int>(j);
    }
    for (std::size_t i = 1; i <= a.size(); ++i) {
        for (std::size_t j = 1; j <= b.size(); ++j) {
            const int replace = at(i - 1, j - 1) + (a[i - 1] == b[j - 1] ? 0 : 1);
            at(i, j) = std::min({replace, at(i - 1, j) + 1, at(i, j - 1) + 1});
            if (i > 1 && j > 1 && a[i - 1] == b[j - 2] && a[i - 2] == b[j - 1]) {
                at(i, j) = std::min(at(i, j), at(i - 2, j - 2) + 1);
            }
        }
    }
    return at(a.size(), b.size());
}

/// ASCII letters only: the words of the program have no others.
bool equal_but_for_case(std::string_view a, std::string_view b) {
    const auto lower = [](char c) {
        return c >= 'A' && c <= 'Z' ? static_cast<char>(c - 'A' + 'a') : c;
    };
    return std::equal(a.begin(), a.end(), b.begin(), b.end(), [&](char x, char y) {
        return lower(x) == lower(y);
    });
}

int distance(std::string_view word, std::string_view candidate) {
    if (equal_but_for_case(word, candidate)) {
        return 0;
    }
    const bool begun = word.size() >= 3 && candidate.starts_with(word);
    return begun ? 1 : edit_distance(word, candidate);
}

/// The distance up to which a word may be a slip for another.
int farthest(std::string_view word) {
    return word.size() < 2 ? 0 : std::max(1, static_cast<int>(word.size()) / 3);
}

}  // namespace

std::string nearest_word(std::string_view word, std::span<const std::string> allowed) {
    constexpr std::size_t longest = 60;
    if (word.size() > longest) {
        return {};
    }
    std::string best;
    int limit = farthest(word) + 1;
    for (const std::string& candidate : allowed) {
        const int found = distance(word, candidate);
        if (found < limit) {
            limit = found;
            best = candidate;
        }
    }
    return best;
}

std::string counted(std::size_t count, std::string_view noun) {
    return fmt::format("{} {}{}", count, noun, count == 1 ? "" : "s");
}

std::string join(const std::vector<std::string>& words, std::string_view separator) {
    return fmt::format("{}", fmt::join(words, separator));
}

std::string suggestion(std::string_view word, const std::vector<std::string>& allowed) {
    const std::string near = nearest_word(word, allowed);
    const std::string list = fmt::format("allowed: {}", join(allowed));
    return near.empty() ? list : fmt::format("did you mean '{}'? ({})", near, list);
}

}  // namespace chainmark
