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

}  // namespace

std::string nearest_word(std::string_view word, std::span<const std::string> allowed) {
    constexpr std::size_t longest = 60;
    if (word.size() > longest) {
        return {};
    }
    std::string best;
    int best_distance = std::max(1, static_cast<int>(word.size()) / 3) + 1;
    for (const std::string& candidate : allowed) {
        const bool extended = word.size() >= 3 && candidate.size() > word.size() &&
                              std::string_view(candidate).substr(0, word.size()) == word;
        const int distance = extended ? 1 : edit_distance(word, candidate);
        if (distance < best_distance) {
            best_distance = distance;
            best = candidate;
        }
    }
    return best;
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
