#pragma once

#include <array>
#include <complex>
#include <cstdint>
#include <vector>

#include "chainmark/sector/packing.hpp"

namespace chainmark::sector {

/// The maps of configurations to configurations that a sector may use:
///   h = T^t R^r Z^z,   T: site j to j + step around the ring,  R: j to L-1-j,  Z: m to -m.
/// On an antiperiodic ring a digit n that T or a power of it carries over the end gives (-1)^n.
struct Group {
    Packing packing;
    int step = 0;  ///< 0: no translations
    bool reflection = false;
    bool inversion = false;
    bool wrap_sign = false;

    int translations() const { return step == 0 ? 1 : packing.length / step; }
    int order() const { return translations() * (reflection ? 2 : 1) * (inversion ? 2 : 1); }
    bool is_trivial() const { return order() == 1; }

    /// Maps are numbered t + translations (r + 2 z).
    int number(int t, int r, int z) const { return t + translations() * (r + 2 * z); }
    /// Maps have numbers below this.
    int numbers() const { return translations() * (inversion ? 4 : reflection ? 2 : 1); }
};

/// A one-dimensional representation: the eigenvalues of T, R and Z.
///   T|psi> = exp(-i k step)|psi>,   k = (2 pi n + phi N)/L with phi N = pi wrapped_up.
struct Irrep {
    int momentum = 0;    ///< n; 0 without translations
    int reflection = 1;  ///< +1, -1
    int inversion = 1;   ///< +1, -1
    int wrapped_up = 0;  ///< N where T carries the sign of an antiperiodic boundary, else 0

    bool operator==(const Irrep&) const = default;
};

/// Eigenvalues of all maps, by number, followed by the same times -1 (for the sign of the wrap).
std::vector<std::complex<double>> characters(const Group& group, const Irrep& irrep);

/// The smallest image of a configuration and the map that takes the configuration there:
///   h|s> = (-1)^odd |word>, so a state of the representation has psi(s) = (-1)^odd chi(h)
///   psi(word).
struct Image {
    Word word = 0;
    int map = 0;
    bool odd = false;

    /// Index into `characters`.
    int character(int numbers) const { return odd ? map + numbers : map; }
};

/// Finds smallest images. For translations only those images can be smallest that bring a longest
/// run of zero digits to the top, which leaves about two candidates instead of all of them.
class ImageFinder {
public:
    explicit ImageFinder(const Group& group);

    const Group& group() const { return group_; }

    Image smallest(Word word) const;

    /// Calls visit(image) for the maps that leave a configuration in place. False (and the calls
    /// mean nothing) where the configuration is not its own smallest image.
    template <class Visit>
    bool for_each_fixing(Word word, Visit&& visit) const {
        return visit_candidates(word, [&](const Image& image) {
            if (image.word == word) {
                visit(image);
            }
            return image.word >= word;
        });
    }

private:
    /// Calls visit(image) for every image of `word` that can be the smallest, until it returns
    /// false; all smallest ones are among them, each with every map that leads to it. Returns
    /// whether all calls returned true.
    template <class Visit>
    bool visit_candidates(Word word, Visit&& visit) const;

    /// The images of one variant (as it is, reversed, inverted, both) under the translations that
    /// bring an end of a run of `run` zeros to the top.
    template <class Visit>
    bool visit_translates(Word word, Word upper_ends, int run, int variant, Visit& visit) const;

    /// Leaves of the sites of zeros in two words the upper ends of the longest runs in either;
    /// returns the length of these runs.
    int shrink_to_longest(Word (&ends)[2]) const {
        int run = 1;
        for (; run < group_.packing.length; ++run) {
            const Word longer[2] = {ends[0] & group_.packing.rotated(ends[0], 1),
                                    ends[1] & group_.packing.rotated(ends[1], 1)};
            if ((longer[0] | longer[1]) == 0) {
                break;
            }
            ends[0] = longer[0];
            ends[1] = longer[1];
        }
        return run;
    }

    bool wraps_odd(Word before, int sites) const;

    Group group_;
    Word tops_ = 0;  ///< sites that a translation can bring to the top
    int translations_ = 1;
    // Tables in the place of divisions.
    std::array<std::uint8_t, 64> site_of_bit_{};
    std::array<std::uint8_t, 64> step_of_sites_{};
};

/// What counts the up spins.
enum class Conserved { nothing, parity, up_count };

/// Dimension of the representation among the configurations with digit sum `value` (or of that
/// parity, or all):  (1/|G|) sum_h chi(h)* Tr(h), with Tr(h) from the cycles of h (Burnside's
/// lemma, common practice). In long double: exact below 2^62.
double count_states(const Group& group, const Irrep& irrep, Conserved conserved, int value);

template <class Visit>
bool ImageFinder::visit_translates(
    Word word, Word upper_ends, int run, int variant, Visit& visit) const {
    const int length = group_.packing.length;
    for (Word left = upper_ends; left != 0; left &= left - 1) {
        const int site = site_of_bit_[static_cast<std::size_t>(std::countr_zero(left))];
        // A run that ends at site p begins at p - run + 1: there the reversed word's run ends,
        // counted from the other side.
        int sites = variant % 2 == 0 ? length - 1 - site : site - run + 1;
        sites += sites < 0 ? length : 0;
        sites -= sites >= length ? length : 0;
        const int map = step_of_sites_[static_cast<std::size_t>(sites)] + translations_ * variant;
        if (!visit(Image{group_.packing.rotated(word, sites),
                         map,
                         group_.wrap_sign && wraps_odd(word, sites)})) {
            return false;
        }
    }
    return true;
}

template <class Visit>
bool ImageFinder::visit_candidates(Word word, Visit&& visit) const {
    const Packing& packing = group_.packing;
    const Word turned[2] = {word, packing.inverted(word)};
    Word ends[2] = {packing.zeros(turned[0]), group_.inversion ? packing.zeros(turned[1]) : 0};
    int run = 0;  // 0: every translation is tried
    if (group_.step == 1 && (ends[0] | ends[1]) != 0) {
        run = shrink_to_longest(ends);
    } else {
        ends[0] = tops_;
        ends[1] = tops_;
    }
    for (int z = 0; z < (group_.inversion ? 2 : 1); ++z) {
        if (ends[z] == 0) {
            continue;
        }
        if (!visit_translates(turned[z], ends[z], run, 2 * z, visit)) {
            return false;
        }
        if (group_.reflection &&
            !visit_translates(packing.reversed(turned[z]), ends[z], run, 2 * z + 1, visit)) {
            return false;
        }
    }
    return true;
}

}  // namespace chainmark::sector
