#include "chainmark/sector/group.hpp"

#include <cmath>

#include "chainmark/base/numerics.hpp"

namespace chainmark::sector {
namespace {

/// exp(i pi p / q); the quarter turns exactly.
std::complex<double> half_turns(long long p, long long q) {
    p = ((p % (2 * q)) + 2 * q) % (2 * q);
    if ((2 * p) % q == 0) {
        constexpr std::complex<double> quarters[] = {{1, 0}, {0, 1}, {-1, 0}, {0, -1}};
        return quarters[2 * p / q];
    }
    const long double angle =
        std::numbers::pi_v<long double> * static_cast<long double>(p) / static_cast<long double>(q);
    return {static_cast<double>(std::cos(angle)), static_cast<double>(std::sin(angle))};
}

}  // namespace

std::vector<std::complex<double>> characters(const Group& group, const Irrep& irrep) {
    const auto half = static_cast<std::size_t>(group.numbers());
    std::vector<std::complex<double>> result(2 * half);
    const long long wave = 2LL * irrep.momentum + irrep.wrapped_up;
    for (int z = 0; z < (group.inversion ? 2 : 1); ++z) {
        for (int r = 0; r < (group.reflection ? 2 : 1); ++r) {
            for (int t = 0; t < group.translations(); ++t) {
                std::complex<double> value =
                    half_turns(-wave * group.step * t, group.packing.length);
                if ((r == 1 && irrep.reflection < 0) != (z == 1 && irrep.inversion < 0)) {
                    value = -value;
                }
                const auto at = static_cast<std::size_t>(group.number(t, r, z));
                result[at] = value;
                result[at + half] = -value;
            }
        }
    }
    return result;
}

ImageFinder::ImageFinder(const Group& group) : group_(group), translations_(group.translations()) {
    const Packing& packing = group_.packing;
    for (int bit = 0; bit < packing.length * packing.width; ++bit) {
        site_of_bit_[static_cast<std::size_t>(bit)] =
            static_cast<std::uint8_t>(bit / packing.width);
    }
    for (int sites = 0; group_.step != 0 && sites < packing.length; ++sites) {
        step_of_sites_[static_cast<std::size_t>(sites)] =
            static_cast<std::uint8_t>(sites / group_.step);
    }
    if (group_.step == 0) {
        tops_ = Word{1} << ((packing.length - 1) * packing.width);
    } else {
        for (int site = packing.length - 1; site >= 0; site -= group_.step) {
            tops_ |= Word{1} << (site * packing.width);
        }
    }
}

bool ImageFinder::wraps_odd(Word before, int sites) const {
    if (!group_.wrap_sign || sites == 0) {
        return false;
    }
    const Packing& packing = group_.packing;
    return packing.digit_sum(before >> ((packing.length - sites) * packing.width)) % 2 != 0;
}

Image ImageFinder::smallest(Word word) const {
    Image best{~Word{0}, 0, false};
    visit_candidates(word, [&best](const Image& image) {
        if (image.word < best.word) {
            best = image;
        }
        return true;
    });
    return best;
}

namespace {

/// Tr(h) by digit sum: coefficient of q^n in the product over the cycles of h. Without Z a cycle of
/// c sites carries one digit d everywhere, q^(c d), with (-1)^d for every site that wraps; with Z
/// digits alternate between d and 2S - d, which an odd cycle allows for d = S alone.
std::vector<long double> trace_by_sum(const Group& group, int t, int r, int z) {
    const int length = group.packing.length;
    const int two_s = group.packing.two_s;
    const int shift = t * group.step;
    std::vector<long double> trace(static_cast<std::size_t>(length * two_s) + 1, 0.0L);
    trace[0] = 1.0L;
    std::vector<bool> seen(static_cast<std::size_t>(length), false);
    for (int start = 0; start < length; ++start) {
        int sites = 0;
        int wraps = 0;
        for (int j = start; !seen[static_cast<std::size_t>(j)]; ++sites) {
            seen[static_cast<std::size_t>(j)] = true;
            const int turned = r == 0 ? j : length - 1 - j;
            wraps += turned + shift >= length ? 1 : 0;
            j = (turned + shift) % length;
        }
        if (sites == 0) {
            continue;
        }
        std::vector<long double> next(trace.size(), 0.0L);
        const auto add = [&](int digits, long double factor) {
            for (std::size_t n = 0; n + static_cast<std::size_t>(digits) < trace.size(); ++n) {
                next[n + static_cast<std::size_t>(digits)] += factor * trace[n];
            }
        };
        if (z == 0) {
            for (int d = 0; d <= two_s; ++d) {
                add(sites * d, group.wrap_sign && (wraps * d) % 2 != 0 ? -1.0L : 1.0L);
            }
        } else if (sites % 2 == 0) {
            add(sites / 2 * two_s, two_s + 1.0L);
        } else if (two_s % 2 == 0) {
            add(sites * two_s / 2, 1.0L);
        }
        trace = std::move(next);
    }
    return trace;
}

}  // namespace

double count_states(const Group& group, const Irrep& irrep, Conserved conserved, int value) {
    const std::vector<std::complex<double>> chi = characters(group, irrep);
    long double sum = 0.0L;
    for (int z = 0; z < (group.inversion ? 2 : 1); ++z) {
        for (int r = 0; r < (group.reflection ? 2 : 1); ++r) {
            for (int t = 0; t < group.translations(); ++t) {
                const std::vector<long double> trace = trace_by_sum(group, t, r, z);
                const auto at = static_cast<std::size_t>(group.number(t, r, z));
                const auto real_part = static_cast<long double>(chi[at].real());
                for (std::size_t n = 0; n < trace.size(); ++n) {
                    const int sum_of_digits = static_cast<int>(n);
                    const bool counts =
                        conserved == Conserved::nothing ||
                        (conserved == Conserved::up_count && sum_of_digits == value) ||
                        (conserved == Conserved::parity && sum_of_digits % 2 == value);
                    if (counts) {
                        sum += real_part * trace[n];
                    }
                }
            }
        }
    }
    return static_cast<double>(std::round(sum / group.order()));
}

}  // namespace chainmark::sector
