#pragma once

#include <cstring>
#include <limits>
#include <string>
#include <vector>

#include <fmt/format.h>

#include "chainmark/formats/shown.hpp"
#include "chainmark/formats/table.hpp"

namespace chainmark {

/// The separator that stands for any run of spaces and tabs.
constexpr char blanks = ' ';

/// "tabs", "blanks", "','".
inline std::string separator_name(char separator) {
    switch (separator) {
        case '\t':
            return "tabs";
        case blanks:
            return "blanks";
        default:
            return fmt::format("'{}'", separator);
    }
}

/// Walks through the lines of a text and cuts them into cells. Quoted cells are unescaped where
/// they stand, which only moves text to the front.
class LineCutter {
public:
    LineCutter(Text& text, std::size_t begin, std::size_t end, std::int32_t line)
        : bytes_(text.bytes.get()), source_(&text.source), at_(begin), end_(end), line_(line) {}

    std::size_t at() const { return at_; }
    std::int32_t line() const { return line_; }
    void set_separator(char separator) { separator_ = separator; }
    char separator() const { return separator_; }

    bool at_end() const { return at_ >= end_; }

    /// The character the line starts with behind blanks; '\n' for a blank line.
    char first_character() const {
        std::size_t i = at_;
        while (i < end_ && is_blank(bytes_[i], true)) {
            ++i;
        }
        return i < end_ ? bytes_[i] : '\n';
    }

    void skip_line() {
        const void* found = std::memchr(bytes_ + at_, '\n', end_ - at_);
        at_ = found == nullptr ? end_ : to_index(found) + 1;
        ++line_;
    }

    /// Cuts the line at hand; its cells are appended.
    Result<void> cut(std::vector<CellSpan>& cells) {
        while (true) {
            skip_blanks();
            if (separator_ == blanks &&
                (at_ >= end_ || bytes_[at_] == '\n' || bytes_[at_] == '#')) {
                skip_line();
                return {};
            }
            Result<CellSpan> cell = at_ < end_ && bytes_[at_] == '"' ? quoted_cell() : plain_cell();
            if (!cell) {
                return tl::unexpected(cell.error());
            }
            cells.push_back(*cell);
            if (at_ >= end_ || bytes_[at_] == '\n') {
                skip_line();
                return {};
            }
            ++at_;  // behind the separator
        }
    }

private:
    static bool is_digit(char c) { return c >= '0' && c <= '9'; }
    static bool is_blank(char c, bool tabs) { return c == ' ' || c == '\r' || (c == '\t' && tabs); }
    bool tab_is_blank() const { return separator_ != '\t'; }
    bool ends_cell(char c) const {
        return c == '\n' || c == separator_ || (separator_ == blanks && c == '\t');
    }
    std::size_t to_index(const void* place) const {
        return static_cast<std::size_t>(static_cast<const char*>(place) - bytes_);
    }
    /// With copies of the members: they need not be loaded again for every character.
    std::size_t end_of_cell(std::size_t at) const {
        const char* bytes = bytes_;
        const std::size_t end = end_;
        const char separator = separator_;
        const char other = separator == blanks ? '\t' : separator;
        while (at < end && bytes[at] != '\n' && bytes[at] != separator && bytes[at] != other) {
            ++at;
        }
        return at;
    }
    void skip_blanks() {
        while (at_ < end_ && is_blank(bytes_[at_], tab_is_blank())) {
            ++at_;
        }
    }

    Place place(std::size_t index) const {
        std::size_t first = index;
        while (first > 0 && bytes_[first - 1] != '\n') {
            --first;
        }
        return {*source_, line_, static_cast<int>(index - first) + 1};
    }

    Result<CellSpan> span(std::size_t begin, std::size_t end, std::int32_t line) const {
        if (end - begin > std::numeric_limits<std::uint32_t>::max()) {
            return refuse(ErrorCode::bad_syntax, {*source_, line, 1}, "a cell of over 4 GiB");
        }
        return CellSpan{begin, static_cast<std::uint32_t>(end - begin), line};
    }

    Result<CellSpan> plain_cell() {
        const std::size_t begin = at_;
        if (at_ < end_ && bytes_[at_] == '(') {
            const std::size_t close = std::string_view(bytes_, end_).find_first_of(")\n", at_);
            at_ = close != std::string_view::npos && bytes_[close] == ')' ? close : at_;
        }
        at_ = end_of_cell(at_);
        std::size_t end = at_;
        while (end > begin && is_blank(bytes_[end - 1], true)) {
            --end;
        }
        const std::string_view text(bytes_ + begin, end - begin);
        const std::size_t comma = separator_ == ';' ? text.find(',') : std::string_view::npos;
        if (comma != std::string_view::npos && comma > 0 && comma + 1 < text.size() &&
            is_digit(text[comma - 1]) && is_digit(text[comma + 1])) {
            return refuse(ErrorCode::bad_syntax,
                          place(begin),
                          fmt::format("{} has a decimal comma", shown(text)),
                          "decimals behind a point (0.5, not 0,5) and columns separated by commas "
                          "or tabs");
        }
        return span(begin, end, line_);
    }

    Result<CellSpan> quoted_cell() {
        const std::size_t open = at_;
        const Place opened = place(open);
        const std::int32_t line = line_;
        std::size_t to = ++at_;
        while (true) {
            if (at_ >= end_) {
                return refuse(ErrorCode::bad_syntax,
                              opened,
                              "a quote is opened and not closed",
                              "a closing quote; a quote inside quotes is written twice");
            }
            if (bytes_[at_] == '"') {
                if (at_ + 1 >= end_ || bytes_[at_ + 1] != '"') {
                    break;
                }
                ++at_;
            }
            line_ += bytes_[at_] == '\n' ? 1 : 0;
            bytes_[to++] = bytes_[at_++];
        }
        ++at_;
        skip_blanks();
        const bool ended = at_ >= end_ || ends_cell(bytes_[at_]) || separator_ == blanks;
        if (!ended) {
            return refuse(ErrorCode::bad_syntax,
                          opened,
                          "text follows a closing quote",
                          fmt::format("{} or the end of the line; a quote inside quotes is written "
                                      "twice",
                                      separator_name(separator_)));
        }
        if (separator_ == blanks && at_ < end_ && bytes_[at_] != '\n') {
            --at_;  // `cut` steps over one character
        }
        return span(open + 1, to, line);
    }

    char* bytes_;
    const std::string* source_;
    std::size_t at_;
    std::size_t end_;
    std::int32_t line_;
    char separator_ = ',';
};

}  // namespace chainmark
