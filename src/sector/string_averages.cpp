#include "chainmark/sector/string_averages.hpp"

namespace chainmark::sector {
namespace {

using Complex = std::complex<double>;

constexpr std::size_t longest_run = 256;  ///< configurations that are summed in double

/// A run of configurations with their amplitudes.
struct Run {
    const Word* words;
    const Complex* psi;
    const double* weights;  ///< |psi|^2
    std::size_t count;
};

double diagonal_sum(const PackedOperator& op, const Run& run) {
    const PackedString& string = op.diagonal().front();
    double sum = 0.0;
    for (std::size_t i = 0; i < run.count; ++i) {
        sum += run.weights[i] * op.factor_value(string, run.words[i]);
    }
    return sum;
}

Complex hop_sum(const PackedOperator& op,
                const HalvesBasis& configurations,
                const Complex* all,
                const Run& run) {
    const PackedString& string = op.hops().front();
    Complex sum = 0.0;
    for (std::size_t i = 0; i < run.count; ++i) {
        const Word word = run.words[i];
        if (string.acts_on(word)) {
            const Complex& bra = all[configurations.rank(word ^ string.flip)];
            sum += op.factor_value(string, word) * std::conj(bra) * run.psi[i];
        }
    }
    return sum;
}

}  // namespace

std::vector<Complex> string_averages(const HalvesBasis& configurations,
                                     const Eigen::VectorXcd& psi,
                                     const std::vector<PackedOperator>& ops,
                                     const Context& context) {
    using Wide = std::complex<long double>;
    const std::vector<std::size_t> first = pieces_of(configurations);
    std::vector<std::vector<Wide>> parts(first.size() - 1);
    parallel_for(parts.size(), context.threads, [&](std::size_t p) {
        poll(context);
        parts[p].assign(ops.size(), Wide(0));
        const std::int64_t start = configurations.start(first[p]);
        std::vector<Word> words;
        std::vector<double> weights;
        configurations.for_each_in(first[p], first[p + 1], [&](std::int64_t index, Word word) {
            words.push_back(word);
            weights.push_back(std::norm(psi[index]));
        });
        for (std::size_t from = 0; from < words.size(); from += longest_run) {
            const Run part{words.data() + from,
                           psi.data() + start + from,
                           weights.data() + from,
                           std::min(longest_run, words.size() - from)};
            for (std::size_t o = 0; o < ops.size(); ++o) {
                parts[p][o] += ops[o].hops().empty()
                                   ? Wide(diagonal_sum(ops[o], part))
                                   : Wide(hop_sum(ops[o], configurations, psi.data(), part));
            }
        }
    });
    std::vector<Complex> result;
    for (std::size_t o = 0; o < ops.size(); ++o) {
        Wide sum = 0;
        for (const std::vector<Wide>& part : parts) {
            sum += part[o];
        }
        const std::vector<PackedString>& strings =
            ops[o].hops().empty() ? ops[o].diagonal() : ops[o].hops();
        result.push_back(strings.front().coefficient * Complex(sum));
    }
    return result;
}

}  // namespace chainmark::sector
