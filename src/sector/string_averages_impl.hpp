#pragma once

#include <algorithm>

#include "chainmark/base/parallel.hpp"
#include "chainmark/sector/string_averages.hpp"

namespace chainmark::sector {

/// Upper halves of a basis in pieces of about 2^15 configurations; one more entry, their number.
inline std::vector<std::size_t> pieces_of(const HalvesBasis& basis) {
    constexpr std::int64_t size = 1 << 15;
    std::vector<std::size_t> first = {0};
    for (std::size_t h = 1; h < basis.highs().size(); ++h) {
        if (basis.start(h + 1) - basis.start(first.back()) > size) {
            first.push_back(h);
        }
    }
    first.push_back(basis.highs().size());
    return first;
}

inline bool holds(const HalvesBasis& basis, Word word) {
    switch (basis.conserved()) {
        case Conserved::up_count:
            return basis.packing().digit_sum(word) == basis.value();
        case Conserved::parity:
            return basis.packing().digit_sum(word) % 2 == basis.value();
        case Conserved::nothing:
            break;
    }
    return true;
}

/// sum(a, b) += bra(row, a)* value ket(index, b)
inline void add_outer(const StateMatrix& bra,
                      std::int64_t row,
                      std::complex<double> value,
                      const StateMatrix& ket,
                      std::int64_t index,
                      Eigen::MatrixXcd& sum) {
    const std::complex<double>* left = bra.data() + row * bra.cols();
    const std::complex<double>* right = ket.data() + index * ket.cols();
    for (Eigen::Index b = 0; b < ket.cols(); ++b) {
        const std::complex<double> x = value * right[b];
        for (Eigen::Index a = 0; a < bra.cols(); ++a) {
            sum(a, b) += std::conj(left[a]) * x;
        }
    }
}

template <class Operator>
std::vector<Eigen::MatrixXcd> elements_between(const StateSet& bras,
                                               const StateSet& kets,
                                               const std::vector<const Operator*>& ops,
                                               const Context& context) {
    const std::vector<std::size_t> first = pieces_of(kets.configurations);
    const std::size_t pieces = first.size() - 1;
    const Eigen::MatrixXcd zero = Eigen::MatrixXcd::Zero(bras.states.cols(), kets.states.cols());
    // Pieces are added in their order, a few at a time, so that the memory stays small.
    const auto at_once = static_cast<std::size_t>(std::max(1, 4 * context.threads));
    std::vector<Eigen::MatrixXcd> sums(ops.size(), zero);
    for (std::size_t done = 0; done < pieces; done += at_once) {
        std::vector<std::vector<Eigen::MatrixXcd>> parts(std::min(at_once, pieces - done));
        parallel_for(parts.size(), context.threads, [&](std::size_t p) {
            poll(context);
            parts[p].assign(ops.size(), zero);
            kets.configurations.for_each_in(
                first[done + p], first[done + p + 1], [&](std::int64_t index, Word word) {
                    for (std::size_t o = 0; o < ops.size(); ++o) {
                        ops[o]->apply(word, [&](Word target, std::complex<double> value) {
                            if (holds(bras.configurations, target)) {
                                const std::int64_t row = bras.configurations.rank(target);
                                add_outer(bras.states, row, value, kets.states, index, parts[p][o]);
                            }
                        });
                    }
                });
        });
        for (const auto& part : parts) {
            for (std::size_t o = 0; o < ops.size(); ++o) {
                sums[o] += part[o];
            }
        }
    }
    return sums;
}

}  // namespace chainmark::sector
