#include "chainmark/formats/matrix_market_header.hpp"

#include <algorithm>
#include <array>
#include <cctype>
#include <charconv>
#include <utility>

#include <fmt/format.h>

#include "chainmark/base/words.hpp"
#include "chainmark/formats/shown.hpp"

namespace chainmark {
namespace {

using Field = MatrixMarketHeader::Field;
using Symmetry = MatrixMarketHeader::Symmetry;

constexpr const char* example = "%%MatrixMarket matrix coordinate real general";

std::string lower(std::string_view text) {
    std::string result(text);
    std::transform(result.begin(), result.end(), result.begin(), [](unsigned char c) {
        return static_cast<char>(std::tolower(c));
    });
    return result;
}

template <class T, std::size_t N>
using Words = std::array<std::pair<const char*, T>, N>;

constexpr Words<bool, 2> layouts{{{"coordinate", true}, {"array", false}}};
constexpr Words<Field, 5> fields{{{"real", Field::real},
                                  {"double", Field::real},
                                  {"integer", Field::integer},
                                  {"complex", Field::complex},
                                  {"pattern", Field::pattern}}};
constexpr Words<Symmetry, 4> symmetries{{{"general", Symmetry::general},
                                         {"symmetric", Symmetry::symmetric},
                                         {"skew-symmetric", Symmetry::skew},
                                         {"hermitian", Symmetry::hermitian}}};

/// Looks a word of the first line up.
template <class T, std::size_t N>
Result<void> look_up(const LineReader& lines,
                     std::string_view word,
                     const Words<T, N>& table,
                     T& value) {
    std::vector<std::string> allowed;
    for (const auto& entry : table) {
        if (lower(word) == entry.first) {
            value = entry.second;
            return {};
        }
        allowed.emplace_back(entry.first);
    }
    return refuse(ErrorCode::bad_syntax,
                  {lines.stream().source(), 1, 1},
                  word.empty() ? "the first line ends too early"
                               : fmt::format("{} in the first line", shown(word)),
                  suggestion(word, allowed));
}

Result<void> read_banner(LineReader& lines, MatrixMarketHeader& header) {
    std::string_view line;
    Result<bool> any = lines.next(line);
    if (!any) {
        return tl::unexpected(any.error());
    }
    const std::string_view banner = next_word(line);
    const std::string_view object = next_word(line);
    if (lower(banner) != "%%matrixmarket" || lower(object) != "matrix") {
        return refuse(ErrorCode::bad_syntax,
                      {lines.stream().source(), 1, 1},
                      "the first line is not that of a Matrix Market matrix",
                      example);
    }
    Result<void> done = look_up(lines, next_word(line), layouts, header.coordinate);
    if (done) {
        done = look_up(lines, next_word(line), fields, header.field);
    }
    if (done) {
        done = look_up(lines, next_word(line), symmetries, header.symmetry);
    }
    return done;
}

/// The combinations that the definition excludes.
Result<void> check_kind(const LineReader& lines, const MatrixMarketHeader& header) {
    const Place place{lines.stream().source(), 1, 1};
    const auto no = [&](const char* found, const char* allowed) -> Result<void> {
        return refuse(ErrorCode::bad_syntax, place, found, allowed);
    };
    if (header.field == Field::pattern && !header.coordinate) {
        return no("array with pattern holds no numbers", "array with real, integer or complex");
    }
    if (header.symmetry == Symmetry::hermitian && header.field != Field::complex) {
        return no("hermitian belongs to complex numbers", "symmetric for real ones");
    }
    if (header.field == Field::pattern && header.symmetry == Symmetry::skew) {
        return no("a pattern cannot be skew-symmetric", "general or symmetric");
    }
    if (header.symmetry != Symmetry::general && header.rows != header.columns) {
        return refuse(ErrorCode::bad_syntax,
                      {lines.stream().source(), lines.line(), 1},
                      fmt::format("{} x {} cannot be symmetric", header.rows, header.columns),
                      "a square matrix, or general");
    }
    return {};
}

/// Entries of an array file.
double array_entries(const MatrixMarketHeader& header) {
    const auto n = static_cast<double>(header.rows);
    switch (header.symmetry) {
        case Symmetry::general:
            return n * static_cast<double>(header.columns);
        case Symmetry::skew:
            return n * (n - 1) / 2;
        default:
            return n * (n + 1) / 2;
    }
}

Result<void> read_sizes(LineReader& lines, MatrixMarketHeader& header) {
    constexpr double most = 4e15;  // beyond any file
    std::string_view line;
    Result<bool> any = next_content(lines, line);
    if (!any) {
        return tl::unexpected(any.error());
    }
    const std::string written(line);
    bool right = *any;
    std::array<std::int64_t*, 3> numbers{&header.rows, &header.columns, &header.stored};
    for (std::size_t i = 0; right && i < (header.coordinate ? 3U : 2U); ++i) {
        const std::string_view word = next_word(line);
        const auto [end, error] =
            std::from_chars(word.data(), word.data() + word.size(), *numbers.at(i));
        right = error == std::errc() && end == word.data() + word.size() && *numbers.at(i) >= 0;
    }
    if (!right || !next_word(line).empty()) {
        return refuse(ErrorCode::bad_syntax,
                      {lines.stream().source(), lines.line(), 1},
                      *any ? fmt::format("{} where the sizes are expected", shown(written))
                           : "the file ends before its sizes",
                      header.coordinate ? "rows, columns and entries" : "rows and columns");
    }
    const double cells = static_cast<double>(header.rows) * static_cast<double>(header.columns);
    const double entries =
        header.coordinate ? static_cast<double>(header.stored) : array_entries(header);
    // Duplicates are legal, but not more of them than a file could hold.
    if (entries > most || (cells == 0 && entries > 0) ||
        std::max(header.rows, header.columns) > std::int64_t{1} << 62) {
        return refuse(ErrorCode::bad_syntax,
                      {lines.stream().source(), lines.line(), 1},
                      fmt::format("{}: impossible sizes", shown(written)),
                      "entries that fit into a file and into the matrix");
    }
    if (!header.coordinate) {
        header.stored = static_cast<std::int64_t>(entries);
    }
    return {};
}

}  // namespace

std::string_view next_word(std::string_view& line) {
    const auto is_blank = [](char c) { return c == ' ' || c == '\t' || c == '\r'; };
    std::size_t begin = 0;
    while (begin < line.size() && is_blank(line[begin])) {
        ++begin;
    }
    std::size_t end = begin;
    while (end < line.size() && !is_blank(line[end])) {
        ++end;
    }
    const std::string_view word = line.substr(begin, end - begin);
    line.remove_prefix(end);
    return word;
}

Result<bool> next_content(LineReader& lines, std::string_view& line) {
    while (true) {
        Result<bool> any = lines.next(line);
        if (!any || !*any) {
            return any;
        }
        const std::size_t first = line.find_first_not_of(" \t\r");
        if (first != std::string_view::npos && line[first] != '%') {
            return true;
        }
    }
}

Result<MatrixMarketHeader> read_matrix_market_header(LineReader& lines) {
    MatrixMarketHeader header;
    Result<void> done = read_banner(lines, header);
    if (done) {
        done = check_kind(lines, header);
    }
    if (done) {
        done = read_sizes(lines, header);
    }
    if (done) {
        done = check_kind(lines, header);
    }
    if (!done) {
        return tl::unexpected(done.error());
    }
    return header;
}

}  // namespace chainmark
