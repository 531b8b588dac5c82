#pragma once

#include <span>
#include <string>
#include <string_view>
#include <vector>

/// Help with words for messages.
namespace chainmark {

/// The allowed word closest to `word` by edit distance (insert, delete, replace, swap of
/// neighbours), or an empty string where none is closer than about a third of its length. Letters
/// in the other case are no distance at all where the words are equal but for them; a single letter
/// has no other neighbours.
std::string nearest_word(std::string_view word, std::span<const std::string> allowed);

/// "did you mean 'boundary'? (allowed: sites, boundary, spin)"; the question only where a word is
/// near.
std::string suggestion(std::string_view word, const std::vector<std::string>& allowed);

/// "1 site", "3 sites": for nouns whose plural ends in s.
std::string counted(std::size_t count, std::string_view noun);

/// "a, b, c"
std::string join(const std::vector<std::string>& words, std::string_view separator = ", ");

}  // namespace chainmark
