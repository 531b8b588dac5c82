#pragma once

#include <string>
#include <vector>

#include <tl/expected.hpp>

namespace chainmark {

/// What kind of input was wrong. `error_id` gives the stable word people can search for.
enum class ErrorCode {
    cannot_read,
    cannot_write,
    bad_syntax,
    unknown_key,
    missing_key,
    wrong_type,
    bad_value,
    unknown_name,
    grid_too_large,
    bad_chain,
    not_hermitian,
    bad_option,
    over_memory,
};

/// Stable identifier of a code, e.g. "unknown_key".
std::string error_id(ErrorCode code);

/// Where in the input something stands. Line and column count from 1; 0 means unknown.
struct Place {
    std::string source;  ///< file name, "--set" or the like
    int line = 0;
    int column = 0;
};

/// "case.toml:12:3", "case.toml" where the line is unknown.
std::string to_string(const Place& place);

/// Wrong input, as data: what was found, and what would be right.
struct Error {
    ErrorCode code = ErrorCode::bad_value;
    Place where;
    std::string found;    ///< a clause: "[system] has no key 'boundry'"
    std::string allowed;  ///< a clause: "did you mean 'boundary'?"; may be empty
};

/// "case.toml:12:3: [system] has no key 'boundry'; did you mean 'boundary'?"
std::string to_string(const Error& error);

using Errors = std::vector<Error>;

template <class T>
using Result = tl::expected<T, Error>;

/// A value, or every error that was found on the way to it.
template <class T>
using Checked = tl::expected<T, Errors>;

/// Throws std::logic_error with file and line: a broken invariant is our mistake, not the user's.
[[noreturn]] void broken_invariant(const char* condition, const char* file, int line);

}  // namespace chainmark

#define CHAINMARK_EXPECTS(condition) \
    ((condition) ? void(0) : ::chainmark::broken_invariant(#condition, __FILE__, __LINE__))
