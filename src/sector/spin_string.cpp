#include "chainmark/sector/spin_string.hpp"

#include <cmath>

#include "chainmark/base/error.hpp"
#include "chainmark/operators/site_matrix.hpp"
#include "chainmark/sector/observable.hpp"

namespace chainmark::sector {
namespace {

SiteMatrix between(Axis axis, int two_s) {
    if (two_s == 1) {
        SiteMatrix twice = spin_matrix(axis, two_s);
        for (SiteMatrix::Entry& entry : twice.entries) {
            entry *= 2.0L;
        }
        return twice;
    }
    CHAINMARK_EXPECTS(two_s % 2 == 0);
    SiteMatrix result = SiteMatrix::zero(two_s);
    const int spin = two_s / 2;
    const std::size_t dim = result.dim();
    for (int digit = 0; digit <= two_s; ++digit) {
        const int m = digit - spin;
        const int to = axis == Axis::z ? digit : two_s - digit;
        const int power = axis == Axis::z ? m : axis == Axis::x ? spin : spin + m;
        result.entries[static_cast<std::size_t>(to) * dim + static_cast<std::size_t>(digit)] =
            power % 2 == 0 ? 1.0L : -1.0L;
    }
    return result;
}

}  // namespace

SpinString::SpinString(const Chain& chain, int i, int j, Axis axis, double weight)
    : packing_(chain), weight_(weight), norm_(std::abs(weight) * chain.spin() * chain.spin()) {
    for (int site = i; site <= j; ++site) {
        const SiteMatrix matrix =
            site == i || site == j ? spin_matrix(axis, chain.two_s) : between(axis, chain.two_s);
        Factor factor{site % chain.length(), std::vector<std::vector<Element>>(matrix.dim())};
        const int turns = site / chain.length();
        for (int to = 0; to <= chain.two_s; ++to) {
            for (int from = 0; from <= chain.two_s; ++from) {
                const auto at =
                    static_cast<std::size_t>(to) * matrix.dim() + static_cast<std::size_t>(from);
                std::complex<double> value(matrix.entries[at]);
                if (value == 0.0) {
                    continue;
                }
                for (int k = 0; k < turns * std::abs(to - from); ++k) {
                    value *= to > from ? chain.wrap_phase() : std::conj(chain.wrap_phase());
                }
                factor.columns[static_cast<std::size_t>(from)].push_back({to, value});
            }
        }
        sites_ |= packing_.site_bits(factor.site);
        factors_.push_back(std::move(factor));
    }
}

double SpinString::norm() const {
    return norm_;
}

}  // namespace chainmark::sector
