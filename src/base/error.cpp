#include "chainmark/base/error.hpp"

#include <stdexcept>

#include <fmt/format.h>

namespace chainmark {

std::string error_id(ErrorCode code) {
    switch (code) {
        case ErrorCode::cannot_read:
            return "cannot_read";
        case ErrorCode::cannot_write:
            return "cannot_write";
        case ErrorCode::bad_syntax:
            return "bad_syntax";
        case ErrorCode::unknown_key:
            return "unknown_key";
        case ErrorCode::missing_key:
            return "missing_key";
        case ErrorCode::wrong_type:
            return "wrong_type";
        case ErrorCode::bad_value:
            return "bad_value";
        case ErrorCode::unknown_name:
            return "unknown_name";
        case ErrorCode::grid_too_large:
            return "grid_too_large";
        case ErrorCode::bad_chain:
            return "bad_chain";
        case ErrorCode::not_hermitian:
            return "not_hermitian";
        case ErrorCode::bad_option:
            return "bad_option";
        case ErrorCode::over_memory:
            return "over_memory";
    }
    return "error";
}

std::string to_string(const Place& place) {
    if (place.line <= 0) {
        return place.source;
    }
    return fmt::format("{}:{}:{}", place.source, place.line, place.column);
}

std::string to_string(const Error& error) {
    const std::string where = to_string(error.where);
    return fmt::format("{}{}{}{}{}",
                       where,
                       where.empty() ? "" : ": ",
                       error.found,
                       error.allowed.empty() ? "" : "; ",
                       error.allowed);
}

void broken_invariant(const char* condition, const char* file, int line) {
    throw std::logic_error(fmt::format("{}:{}: broken invariant: {}", file, line, condition));
}

}  // namespace chainmark
