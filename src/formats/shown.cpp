#include "chainmark/formats/shown.hpp"

#include <fmt/format.h>

namespace chainmark {

std::string shown(std::string_view text) {
    constexpr std::size_t longest = 40;
    std::string result = "'";
    for (const char c : text.substr(0, longest)) {
        const auto byte = static_cast<unsigned char>(c);
        if (byte >= 0x20 && byte < 0x7f) {
            result += c;
        } else {
            result += fmt::format("\\x{:02x}", byte);
        }
    }
    return result + (text.size() > longest ? "...'" : "'");
}

tl::unexpected<Error> refuse(ErrorCode code, Place where, std::string found, std::string allowed) {
    return tl::unexpected(Error{code, std::move(where), std::move(found), std::move(allowed)});
}

}  // namespace chainmark
