#include "chainmark/fermion/closed_frames.hpp"

#include <cmath>

namespace chainmark::fermion {

std::vector<Run> runs_of(const std::vector<Real>& values) {
    std::vector<Run> runs;
    for (std::size_t m = 0; m < values.size(); ++m) {
        const auto label = static_cast<std::int64_t>(m);
        if (runs.empty() || runs.back().value != values[m]) {
            runs.push_back({label, label, values[m]});
        }
        ++runs.back().b;
    }
    return runs;
}

MajoranaBlock majorana_block(std::complex<Real> normal, std::complex<Real> anomalous) {
    const std::complex<Real> twice = 2.0L * anomalous;
    return {{{normal.imag() - twice.imag(), normal.real() + twice.real()},
             {twice.real() - normal.real(), normal.imag() + twice.imag()}}};
}

std::optional<int> pure_parity(const std::vector<Real>& s, int vacuum) {
    int parity = vacuum;
    for (const Real value : s) {
        if (std::abs(value) != 1.0L) {
            return std::nullopt;
        }
        parity = value < 0 ? -parity : parity;
    }
    return parity;
}

}  // namespace chainmark::fermion
