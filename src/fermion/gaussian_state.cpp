#include "chainmark/fermion/gaussian_state.hpp"

namespace chainmark::fermion {

RealMatrix GaussianState::covariance(int first, int count) const {
    RealMatrix gamma(2 * count, 2 * count);
    const auto put = [&](int i, int j, const MajoranaBlock& own) {
        for (int a = 0; a < 2; ++a) {
            for (int b = 0; b < 2; ++b) {
                const auto element = static_cast<double>(
                    own[static_cast<std::size_t>(a)][static_cast<std::size_t>(b)]);
                gamma(2 * i + a, 2 * j + b) = element;
                gamma(2 * j + b, 2 * i + a) = -element;
            }
        }
    };
    for (int r = 0; r < count; ++r) {
        MajoranaBlock own{};
        for (int i = 0; i + r < count; ++i) {
            if (i == 0 || !homogeneous()) {
                own = block(first + i, first + i + r);
            }
            put(i, i + r, own);
        }
    }
    for (int a = 0; a < 2 * count; ++a) {
        gamma(a, a) = 0.0;
    }
    return gamma;
}

}  // namespace chainmark::fermion
