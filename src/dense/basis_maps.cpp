#include "chainmark/dense/basis_maps.hpp"

#include <algorithm>
#include <numeric>

namespace chainmark::dense {
namespace {

using Complex = std::complex<double>;

/// |digits> to phase |moved digits>; false where the moved state is not in the subset.
template <class Move>
std::optional<BasisMap> map_of(const Subset& subset, Move&& move) {
    BasisMap map;
    for (Eigen::Index i = 0; i < subset.size(); ++i) {
        std::vector<int> digits = subset.digits(i);
        map.phase.push_back(move(digits));
        map.to.push_back(subset.find(digits));
        if (map.to.back() < 0) {
            return std::nullopt;
        }
    }
    return map;
}

}  // namespace

Subset::Subset(const Chain& chain, std::optional<int> up_count, std::optional<int> parity)
    : chain_(chain) {
    const Eigen::Index dim = full_dim(chain.length(), chain.two_s);
    for (Eigen::Index state = 0; state < dim; ++state) {
        std::vector<int> digits;
        Eigen::Index rest = state;
        for (int site = 0; site < chain.length(); ++site) {
            digits.push_back(static_cast<int>(rest % chain.site_dim()));
            rest /= chain.site_dim();
        }
        const int sum = std::accumulate(digits.begin(), digits.end(), 0);
        const bool inside =
            (!up_count || sum == *up_count) && (!parity || (sum % 2 == 0 ? 1 : -1) == *parity);
        place_.push_back(inside ? size() : -1);
        if (inside) {
            states_.push_back(state);
            digits_.push_back(std::move(digits));
        }
    }
}

int Subset::up_count(Eigen::Index i) const {
    return std::accumulate(digits(i).begin(), digits(i).end(), 0);
}

Eigen::Index Subset::find(const std::vector<int>& digits) const {
    Eigen::Index state = 0;
    for (auto digit = digits.rbegin(); digit != digits.rend(); ++digit) {
        state = state * chain_.site_dim() + *digit;
    }
    return place_[static_cast<std::size_t>(state)];
}

bool Subset::is_closed_under(const FullMatrix<Complex>& matrix) const {
    for (Eigen::Index i = 0; i < size(); ++i) {
        for (FullMatrix<Complex>::InnerIterator it(matrix, state(i)); it; ++it) {
            if (it.value() != 0.0 && place_[static_cast<std::size_t>(it.col())] < 0) {
                return false;
            }
        }
    }
    return true;
}

FullMatrix<Complex> Subset::block_of(const FullMatrix<Complex>& matrix) const {
    std::vector<Eigen::Triplet<Complex>> elements;
    for (Eigen::Index i = 0; i < size(); ++i) {
        for (FullMatrix<Complex>::InnerIterator it(matrix, state(i)); it; ++it) {
            const Eigen::Index col = place_[static_cast<std::size_t>(it.col())];
            if (col >= 0) {
                elements.emplace_back(static_cast<int>(i), static_cast<int>(col), it.value());
            }
        }
    }
    FullMatrix<Complex> block(size(), size());
    block.setFromTriplets(elements.begin(), elements.end());
    return block;
}

FullMatrix<Complex> BasisMap::matrix() const {
    std::vector<Eigen::Triplet<Complex>> elements;
    for (std::size_t i = 0; i < to.size(); ++i) {
        elements.emplace_back(static_cast<int>(to[i]), static_cast<int>(i), phase[i]);
    }
    const auto size = static_cast<Eigen::Index>(to.size());
    FullMatrix<Complex> result(size, size);
    result.setFromTriplets(elements.begin(), elements.end());
    return result;
}

std::optional<BasisMap> translation(const Subset& subset, int sites) {
    const Complex around = subset.chain().wrap_phase();
    return map_of(subset, [&](std::vector<int>& digits) {
        Complex phase = 1.0;
        for (int step = 0; step < sites; ++step) {
            for (int up = 0; up < digits.back(); ++up) {
                phase *= around;
            }
            std::rotate(digits.rbegin(), digits.rbegin() + 1, digits.rend());
        }
        return phase;
    });
}

std::optional<BasisMap> reflection(const Subset& subset) {
    return map_of(subset, [](std::vector<int>& digits) {
        std::reverse(digits.begin(), digits.end());
        return Complex(1.0);
    });
}

std::optional<BasisMap> inversion(const Subset& subset) {
    return map_of(subset, [&](std::vector<int>& digits) {
        for (int& digit : digits) {
            digit = subset.chain().two_s - digit;
        }
        return Complex(1.0);
    });
}

bool commutes(const BasisMap& map, const FullMatrix<Complex>& h, double weight) {
    constexpr double relative = 1e-13;
    for (Eigen::Index row = 0; row < h.rows(); ++row) {
        for (FullMatrix<Complex>::InnerIterator it(h, row); it; ++it) {
            const auto a = static_cast<std::size_t>(row);
            const auto b = static_cast<std::size_t>(it.col());
            const Complex moved = map.phase[a] * it.value() * std::conj(map.phase[b]);
            if (std::abs(moved - h.coeff(map.to[a], map.to[b])) > relative * weight) {
                return false;
            }
        }
    }
    return true;
}

}  // namespace chainmark::dense
