#include "chainmark/operators/chain.hpp"

#include <fmt/format.h>

#include "chainmark/base/numerics.hpp"
#include "chainmark/base/words.hpp"

namespace chainmark {

std::complex<double> Chain::wrap_phase() const {
    if (!is_ring() || twist == 0.0) {
        return 1.0;
    }
    if (twist == pi) {
        return -1.0;
    }
    return std::polar(1.0, -twist);
}

std::string to_string(const Chain& chain) {
    if (chain.is_infinite()) {
        return "infinite chain";
    }
    if (!chain.is_ring()) {
        return "open chain of " + counted(static_cast<std::size_t>(chain.length()), "site");
    }
    if (chain.twist == 0.0) {
        return fmt::format("ring of {} sites", chain.length());
    }
    if (chain.twist == pi) {
        return fmt::format("antiperiodic ring of {} sites", chain.length());
    }
    return fmt::format("ring of {} sites, twist {}", chain.length(), chain.twist);
}

}  // namespace chainmark
