#include "chainmark/fermion/enclosures.hpp"

#include <algorithm>
#include <cmath>

#include <flint/flint.h>

#include "chainmark/fermion/ball_sums.hpp"

namespace chainmark::fermion {
namespace {

constexpr int largest_enclosed = 1'000'000;

bool is_covered(const Query& query) {
    switch (query.spec->id) {
        case QuantityId::ground_energy:
        case QuantityId::ground_energy_per_site:
        case QuantityId::gap:
        case QuantityId::magnetization:
            return !query.options.sector;
        case QuantityId::spin_correlation:
            return query.options.axes == Axes::zz;
        default:
            return false;
    }
}

/// <Sz_i Sz_j>, minus <Sz_i><Sz_j> where asked.
Ball pair_value(const BallGround& ground, int i, int j, bool connected) {
    Ball value = i == j ? Ball(0.25) : ground.zz(i, j);
    if (connected) {
        value -= ground.local(i) * ground.local(j);
    }
    return value;
}

/// The mean over all pairs (i, i + r), which on a ring are all equal.
Ball distance_value(const UniformCouplings& chain,
                    const BallGround& ground,
                    int r,
                    const Options& options,
                    const Context& context) {
    if (chain.ring) {
        return pair_value(ground, 0, r, options.connected);
    }
    Ball sum;
    for (int i = 0; i + r < chain.length; ++i) {
        poll(context);
        sum += pair_value(ground, i, i + r, options.connected);
    }
    return sum / Ball(static_cast<double>(chain.length - r));
}

std::vector<Ball> correlations(const UniformCouplings& chain,
                               const BallGround& ground,
                               const Options& options,
                               const Context& context) {
    std::vector<Ball> values;
    for (const auto& [i, j] : options.pairs) {
        poll(context);
        values.push_back(pair_value(ground, i, j, options.connected));
    }
    for (const int r : options.distance) {
        poll(context);
        values.push_back(distance_value(chain, ground, r, options, context));
    }
    return values;
}

/// The balls of an answer at the present precision; empty where there are none.
std::vector<Ball> answer_in_balls(const UniformCouplings& chain,
                                  const Query& query,
                                  const Context& context) {
    const std::optional<BallGround> ground =
        chain.ring ? ground_of_ring(chain) : ground_of_open_chain(chain);
    if (!ground) {
        return {};
    }
    const Ball length(static_cast<double>(chain.length));
    switch (query.spec->id) {
        case QuantityId::ground_energy:
            return {ground->energy};
        case QuantityId::ground_energy_per_site:
            return {ground->energy / length};
        default:
            break;
    }
    if (!ground->unique) {
        return {};
    }
    switch (query.spec->id) {
        case QuantityId::gap:
            return {ground->gap};
        case QuantityId::magnetization:
            return {ground->magnetization};
        default:
            return correlations(chain, *ground, query.options, context);
    }
}

/// radius <= 10^-digits max(|mid|, 1 where |mid| is below 10^-digits).
bool is_narrow(const Ball& ball, int digits) {
    const slong zero_bits = arb_rel_accuracy_bits(ball.get());
    const auto wanted = static_cast<slong>(std::ceil(digits * std::log2(10.0)));
    if (zero_bits >= wanted) {
        return true;
    }
    mag_t size;
    mag_init(size);
    arb_get_mag(size, ball.get());
    const bool tiny = mag_cmp_2exp_si(size, -wanted) <= 0;
    mag_clear(size);
    return tiny;
}

/// "[mid +/- radius]" of the library, whose radius holds the rounding of mid to decimals.
Enclosure text_of(const Ball& ball, int digits) {
    constexpr int guard = 4;
    char* raw = arb_get_str(ball.get(), digits + guard, 0);
    std::string text(raw);
    flint_free(raw);
    if (text.empty() || text.front() != '[') {
        return {text, "0"};
    }
    text = text.substr(1, text.size() - 2);
    const std::size_t sign = text.find("+/-");
    std::string mid = text.substr(0, sign);
    while (!mid.empty() && mid.back() == ' ') {
        mid.pop_back();
    }
    return {mid.empty() ? "0" : mid, text.substr(sign + 4)};
}

void append(Reference& reference, const Ball& ball, int digits) {
    const double nearest =
        ball.contains_zero() ? 0.0 : arf_get_d(arb_midref(ball.get()), ARF_RND_NEAR);
    const Ball rest = ball - Ball(nearest);
    mag_t size;
    mag_init(size);
    arb_get_mag(size, rest.get());
    const double bound = std::nextafter(mag_get_d(size), INFINITY);
    reference.bound.push_back(mag_is_zero(size) != 0 ? 0.0 : bound);
    mag_clear(size);
    reference.value.data.emplace_back(nearest);
    reference.enclosure.push_back(text_of(ball, digits));
}

Reference reference_of(const std::vector<Ball>& balls, const Query& query, int digits) {
    Reference reference;
    const bool array = query.spec->id == QuantityId::spin_correlation;
    reference.value.kind = array ? Kind::array : Kind::number;
    if (array) {
        reference.value.shape = {balls.size()};
    }
    reference.basis = Basis::enclosure;
    for (const Ball& ball : balls) {
        append(reference, ball, digits);
    }
    return reference;
}

}  // namespace

bool can_enclose() {
    return true;
}

std::optional<Reference> enclose(const Problem& problem,
                                 const Query& query,
                                 const Context& context) {
    if (!is_covered(query) || problem.temperature || problem.chain.is_infinite() ||
        problem.chain.length() > largest_enclosed) {
        return std::nullopt;
    }
    const std::optional<UniformCouplings> chain = recognise_uniform(problem);
    if (!chain) {
        return std::nullopt;
    }
    constexpr int most_attempts = 4;
    const auto wanted = static_cast<slong>(std::ceil(context.digits * std::log2(10.0)));
    slong bits = wanted + 64 + 2 * static_cast<slong>(std::ceil(std::log2(chain->length + 1)));
    for (int attempt = 0; attempt < most_attempts; ++attempt, bits *= 2) {
        poll(context);
        Ball::bits = bits;
        const std::vector<Ball> balls = answer_in_balls(*chain, query, context);
        const bool narrow = std::all_of(balls.begin(), balls.end(), [&](const Ball& ball) {
            return is_narrow(ball, context.digits);
        });
        if (!balls.empty() && narrow) {
            return reference_of(balls, query, context.digits);
        }
    }
    return std::nullopt;
}

}  // namespace chainmark::fermion
