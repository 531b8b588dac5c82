#include "chainmark/sector/orbit_rows.hpp"

#include <map>

#include "chainmark/sector/scalar.hpp"

namespace chainmark::sector {
template <class Scalar>
OrbitRows<Scalar>::OrbitRows(const OrbitBasis& basis, const PackedOperator& op)
    : basis_(basis), op_(op) {
    std::map<std::pair<double, double>, std::uint32_t> seen;
    for (const std::complex<double>& amplitude : op.amplitudes()) {
        for (const std::complex<double>& character : basis.characters()) {
            const std::complex<double> value = amplitude * character;
            const auto next = static_cast<std::uint32_t>(coefficients_.size());
            const auto place = seen.emplace(std::pair(value.real(), value.imag()), next);
            if (place.second) {
                coefficients_.push_back(as_scalar<Scalar>(value));
            }
            codes_.push_back(place.first->second);
        }
    }
}

template <class Scalar>
void OrbitRows<Scalar>::fill(std::int64_t first, std::int64_t last, Block& block) const {
    const auto rows = static_cast<std::size_t>(last - first);
    const std::size_t room = rows * op_.most_hops() + 1;
    if (block.word_.size() < room) {
        block.word_.resize(room);
        block.which_.resize(room);
        block.column.resize(room);
        block.code.resize(room);
    }
    block.row_length.resize(rows);
    const ImageFinder& finder = basis_.finder();
    const WordIndex& index = basis_.index();
    std::size_t count = 0;
    for (std::size_t r = 0; r < rows; ++r) {
        const int n = op_.neighbours(basis_.word(first + static_cast<std::int64_t>(r)),
                                     block.word_.data() + count,
                                     block.which_.data() + count);
        block.row_length[r] = n;
        count += static_cast<std::size_t>(n);
    }
    // Each word becomes its smallest image, each amplitude the code of its element.
    const int numbers = finder.group().numbers();
    for (std::size_t i = 0; i < count; ++i) {
        const Image image = finder.smallest(block.word_[i]);
        index.prefetch_bucket(image.word);
        block.word_[i] = image.word;
        block.which_[i] = codes_[block.which_[i] * 2 * static_cast<std::size_t>(numbers) +
                                 static_cast<std::size_t>(image.character(numbers))];
    }
    for (std::size_t i = 0; i < count; ++i) {
        index.prefetch_word(basis_.words(), block.word_[i]);
    }
    std::size_t from = 0;
    std::size_t to = 0;
    for (std::size_t r = 0; r < rows; ++r) {
        const std::size_t start = to;
        const std::size_t end = from + static_cast<std::size_t>(block.row_length[r]);
        for (; from < end; ++from) {
            const std::int64_t column = index.find(basis_.words(), block.word_[from]);
            if (column >= 0) {
                block.column[to] = static_cast<std::uint32_t>(column);
                block.code[to] = block.which_[from];
                ++to;
            }
        }
        block.row_length[r] = static_cast<int>(to - start);
    }
}

template class OrbitRows<double>;
template class OrbitRows<std::complex<double>>;

}  // namespace chainmark::sector
