#pragma once

#include <cstddef>
#include <iterator>
#include <optional>
#include <string>

#include <nlohmann/json.hpp>

#include "chainmark/formats/json.hpp"
#include "chainmark/formats/shown.hpp"

namespace chainmark {

/// Iterates over characters and tells through `cursor` how far the reader has come: the library
/// names no places.
class WatchedIterator {
public:
    // The names that iterators have. NOLINTBEGIN(readability-identifier-naming)
    using iterator_category = std::input_iterator_tag;
    using value_type = char;
    using difference_type = std::ptrdiff_t;
    using pointer = const char*;
    using reference = const char&;
    // NOLINTEND(readability-identifier-naming)

    WatchedIterator(const char* at, const char** cursor) : at_(at), cursor_(cursor) {}
    reference operator*() const { return *at_; }
    WatchedIterator& operator++() {
        *cursor_ = ++at_;
        return *this;
    }
    WatchedIterator operator++(int) {
        WatchedIterator before = *this;
        ++*this;
        return before;
    }
    friend bool operator==(const WatchedIterator& a, const WatchedIterator& b) {
        return a.at_ == b.at_;
    }
    friend bool operator!=(const WatchedIterator& a, const WatchedIterator& b) { return !(a == b); }

private:
    const char* at_;
    const char** cursor_;
};

/// Base of a handler of the library's events: keeps the first error and the place of reading.
class JsonEvents {
public:
    JsonEvents(const Text& text, const Context& context)
        : text_(text), context_(context), cursor_(text.bytes.get()) {}

    const std::optional<Error>& error() const { return error_; }

    bool parse_error(std::size_t byte, const std::string& token, const std::exception& problem) {
        const bool range = std::string_view(problem.what()).find("overflow") != std::string::npos;
        error_ =
            Error{ErrorCode::bad_syntax,
                  place_in(text_, byte == 0 ? 0 : byte - 1),
                  range ? "a number beyond the range of a double" : "no JSON at " + shown(token),
                  "JSON as in RFC 8259"};
        return false;
    }

protected:
    /// The last character that was read: the end of a string or a literal, behind a number.
    const char* last() const { return cursor_ - 1; }

    bool fail(std::string found, std::string allowed) {
        error_ = Error{ErrorCode::bad_syntax,
                       place_in(text_, static_cast<std::size_t>(last() - text_.bytes.get())),
                       std::move(found),
                       std::move(allowed)};
        return false;
    }
    bool fail(Error error) {
        error_ = std::move(error);
        return false;
    }
    void poll_sometimes() {
        constexpr unsigned often = 1U << 16;
        if (++events_ % often == 0) {
            poll(context_);
        }
    }

    // NOLINTBEGIN: shared by the handlers of this module alone
    const Text& text_;
    const Context& context_;
    const char* cursor_;
    // NOLINTEND

private:
    template <class Handler>
    friend std::optional<Error> run_events(Handler& handler);
    unsigned events_ = 0;
    std::optional<Error> error_;
};

/// Runs the handler over its text; the first error, if any.
template <class Handler>
std::optional<Error> run_events(Handler& handler) {
    JsonEvents& base = handler;
    const char* begin = base.text_.bytes.get();
    const bool done =
        nlohmann::json::sax_parse(WatchedIterator(begin, &base.cursor_),
                                  WatchedIterator(begin + base.text_.size, &base.cursor_),
                                  &handler);
    if (!done && !base.error_) {
        base.error_ = Error{ErrorCode::bad_syntax, {.source = base.text_.source}, "no JSON", ""};
    }
    return base.error_;
}

}  // namespace chainmark
