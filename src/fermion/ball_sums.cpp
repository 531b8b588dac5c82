#include "chainmark/fermion/ball_sums.hpp"

#include <memory>

namespace chainmark::fermion {
namespace {

Ball whole(int n) {
    return Ball(static_cast<double>(n));
}

Ball field_of(const UniformCouplings& chain) {
    return Ball(chain.field_parts[0]) + Ball(chain.field_parts[1]);
}

/// cos(pi p/n) and sin(pi p/n) for all p: one evaluation a quarter turn would do, but the table is
/// small beside the sums.
class Angles {
public:
    explicit Angles(int n) : n_(n) {
        for (int p = 0; p < 2 * n; ++p) {
            table_.push_back(cos_pi_ball(p, n));
        }
    }

    const Ball& cos(long long p) const { return table_[reduced(p)]; }

    /// sin(pi p/n) from the table where n is even, else evaluated.
    Ball sin(long long p) const {
        return n_ % 2 == 0 ? cos(p - n_ / 2) : sin_pi_ball(static_cast<slong>(reduced(p)), n_);
    }

private:
    std::size_t reduced(long long p) const {
        const long long turn = 2LL * n_;
        return static_cast<std::size_t>(((p % turn) + turn) % turn);
    }

    int n_;
    std::vector<Ball> table_;
};

/// A momentum k = pi p/L, with -k where `paired`.
struct BallMode {
    int p = 0;
    bool paired = false;
    Ball a = {};       ///< 2 hop cos k - h
    Ball b = {};       ///< 2 pair sin k
    Ball energy = {};  ///< sqrt(a^2 + b^2)
    bool up = false;   ///< unpaired: occupied in the lowest state
};

/// The lowest state of one parity of the up count.
struct ClassGround {
    std::vector<BallMode> modes;
    Ball energy = {};
    Ball next = {};  ///< distance of the second level of the class; certain only where positive
};

/// The two smallest of the energies met, each a ball.
struct TwoSmallest {
    Ball first;
    Ball second;
    std::size_t index = 0;  ///< of `first` by midpoints
    std::size_t count = 0;

    void add(const Ball& energy, std::size_t at) {
        if (count == 0) {
            first = energy;
            index = at;
        } else if (count == 1) {
            add_smallest(energy, at, larger(first, energy));
        } else {
            add_smallest(energy, at, smaller(second, larger(first, energy)));
        }
        ++count;
    }

private:
    void add_smallest(const Ball& energy, std::size_t at, Ball new_second) {
        if (arf_cmp(arb_midref(energy.get()), arb_midref(first.get())) < 0) {
            index = at;
        }
        first = smaller(first, energy);
        second = std::move(new_second);
    }
};

/// All momenta of a class. Fermions of an even number on a periodic ring are antiperiodic, p odd.
std::vector<BallMode> modes_of(const UniformCouplings& chain, const Angles& angles, bool even) {
    const Ball field = field_of(chain);
    const int first = even != chain.antiperiodic ? 1 : 0;
    std::vector<BallMode> modes;
    for (int p = first; p <= chain.length; p += 2) {
        BallMode mode{.p = p, .paired = p != 0 && p != chain.length};
        mode.a = Ball(2 * chain.hop) * angles.cos(p) - field;
        mode.b = mode.paired && chain.pair != 0.0 ? Ball(2 * chain.pair) * angles.sin(p) : Ball();
        mode.energy = mode.b.is_zero() ? absolute(mode.a) : length_of(mode.a, mode.b);
        modes.push_back(std::move(mode));
    }
    return modes;
}

/// Fills each mode in the best way; where the parity is then wrong, the cheapest one is turned.
/// Nothing where the sign of an unpaired energy is open.
std::optional<ClassGround> class_ground(const UniformCouplings& chain,
                                        const Angles& angles,
                                        bool even) {
    ClassGround ground{.modes = modes_of(chain, angles, even)};
    Ball sum;
    TwoSmallest smallest;
    bool odd_filling = false;
    for (std::size_t i = 0; i < ground.modes.size(); ++i) {
        BallMode& mode = ground.modes[i];
        smallest.add(mode.energy, i);
        sum += mode.energy;
        if (mode.paired) {
            smallest.add(mode.energy, i);
            sum += mode.energy;
        } else if (mode.a.is_negative()) {
            mode.up = true;
            odd_filling = !odd_filling;
        } else if (mode.a.contains_zero() && !mode.a.is_zero()) {
            return std::nullopt;
        }
    }
    ground.energy = Ball(chain.constant) - sum / Ball(2.0);
    if (odd_filling != even) {
        ground.next = smallest.first + smallest.second;
        return ground;
    }
    ground.energy += smallest.first;
    ground.next = smallest.second - smallest.first;
    BallMode& turned = ground.modes[smallest.index];
    turned.up = !turned.up;  // a paired one is degenerate with its partner: `next` is then 0
    return ground;
}

/// <Sz> from the occupations: a pair holds 1 - a/e fermions.
Ball magnetization_of(const UniformCouplings& chain, const std::vector<BallMode>& modes) {
    Ball count;
    for (const BallMode& mode : modes) {
        if (mode.paired) {
            count += Ball(1.0) - mode.a / mode.energy;
        } else if (mode.up) {
            count += Ball(1.0);
        }
    }
    return count / whole(chain.length) - Ball(0.5);
}

/// G(r) = <(c+_0 - c_0)(c+_r + c_r)> = -(1/L) sum_k (a cos kr + b sin kr)/e.
Ball contraction(const UniformCouplings& chain,
                 const Angles& angles,
                 const std::vector<BallMode>& modes,
                 int r) {
    Ball sum;
    for (const BallMode& mode : modes) {
        const long long turn = static_cast<long long>(mode.p) * r;
        if (!mode.paired) {
            sum += mode.up ? angles.cos(turn) : -angles.cos(turn);
            continue;
        }
        Ball term = mode.a * angles.cos(turn);
        if (!mode.b.is_zero()) {
            term += mode.b * angles.sin(turn);
        }
        sum -= Ball(2.0) * term / mode.energy;
    }
    return sum / whole(chain.length);
}

}  // namespace

std::optional<BallGround> ground_of_ring(const UniformCouplings& chain) {
    const auto angles = std::make_shared<const Angles>(chain.length);
    std::optional<ClassGround> even = class_ground(chain, *angles, true);
    std::optional<ClassGround> odd = class_ground(chain, *angles, false);
    if (!even || !odd) {
        return std::nullopt;
    }
    const Ball window(chain.window);
    const Ball difference = odd->energy - even->energy;
    const bool even_below = surely_less(window, difference);
    const bool odd_below = surely_less(window, -difference);
    if (!even_below && !odd_below) {
        return BallGround{.energy = smaller(even->energy, odd->energy)};
    }
    ClassGround& lowest = even_below ? *even : *odd;
    BallGround ground{.energy = lowest.energy};
    if (!surely_less(window, lowest.next)) {
        return ground;
    }
    ground.unique = true;
    ground.gap = smaller(lowest.next, absolute(difference));
    const auto modes = std::make_shared<const std::vector<BallMode>>(std::move(lowest.modes));
    ground.magnetization = magnetization_of(chain, *modes);
    ground.local = [m = ground.magnetization](int) { return m; };
    ground.zz = [chain, angles, modes, m = ground.magnetization](int i, int j) {
        const Ball forth = contraction(chain, *angles, *modes, j - i);
        const Ball back = chain.pair == 0.0 ? forth : contraction(chain, *angles, *modes, i - j);
        return m * m - forth * back / Ball(4.0);
    };
    return ground;
}

namespace {

/// sum_{m=1}^n cos(pi m x/M) = sin(pi n x/2M) cos(pi (n+1) x/2M)/sin(pi x/2M).
Ball cosine_sum(int n, int x, int intervals) {
    const int twice = 2 * intervals;
    if (x % twice == 0) {
        return whole(n);
    }
    return sin_pi_ball(static_cast<slong>(n) * x, twice) *
           cos_pi_ball(static_cast<slong>(n + 1) * x, twice) / sin_pi_ball(x, twice);
}

}  // namespace

/// Modes sqrt(2/(L+1)) sin(k_m (j+1)), k_m = pi m/(L+1), of energies 2 hop cos k_m - h. With hop <
/// 0 the lowest `filled` ones are m = 1 ... filled; with hop > 0 the last ones, which a sign on
/// every other site turns into the first.
std::optional<BallGround> ground_of_open_chain(const UniformCouplings& chain) {
    const int length = chain.length;
    const Ball field = field_of(chain);
    const Ball window(chain.window);
    Ball sum;
    Ball smallest;
    int filled = 0;
    for (int m = 1; m <= length; ++m) {
        const Ball a = Ball(2 * chain.hop) * cos_pi_ball(m, length + 1) - field;
        const Ball size = absolute(a);
        sum += size;
        smallest = m == 1 ? size : smaller(smallest, size);
        filled += a.is_negative() ? 1 : 0;
    }
    BallGround ground{.energy = Ball(chain.constant) - sum / Ball(2.0)};
    if (!surely_less(window, smallest)) {
        return ground;
    }
    ground.unique = true;
    ground.gap = smallest;
    ground.magnetization = whole(filled) / whole(length) - Ball(0.5);
    // C(i, j) = <c+_i c_j>, up to a sign on every other site
    const auto kernel = [filled, length](int i, int j) {
        const Ball near = cosine_sum(filled, i > j ? i - j : j - i, length + 1);
        return (near - cosine_sum(filled, i + j + 2, length + 1)) / whole(length + 1);
    };
    ground.local = [kernel](int j) { return kernel(j, j) - Ball(0.5); };
    ground.zz = [kernel](int i, int j) {
        const Ball exchange = kernel(i, j);
        return (kernel(i, i) - Ball(0.5)) * (kernel(j, j) - Ball(0.5)) - exchange * exchange;
    };
    return ground;
}

}  // namespace chainmark::fermion
