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

namespace {

std::string shape_text(const Chain& chain) {
    if (chain.is_infinite()) {
        return "infinite chain";
    }
    const std::string sites = counted(static_cast<std::size_t>(chain.length()), "site");
    if (!chain.is_ring()) {
        return "open chain of " + sites;
    }
    return (chain.twist == pi ? "antiperiodic ring of " : "ring of ") + sites;
}

}  // namespace

std::string to_string(const Chain& chain) {
    std::string text = shape_text(chain);
    if (chain.two_s != 1) {
        text += fmt::format(" of spin {}", spin_text(chain.two_s));
    }
    if (!chain.is_infinite() && chain.is_ring() && chain.twist != 0.0 && chain.twist != pi) {
        text += fmt::format(", twist {}", chain.twist);
    }
    return text;
}

std::string spin_text(int two_s) {
    return two_s % 2 == 0 ? fmt::format("{}", two_s / 2) : fmt::format("{}/2", two_s);
}

}  // namespace chainmark
