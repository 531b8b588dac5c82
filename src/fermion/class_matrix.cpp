#include "chainmark/fermion/class_matrix.hpp"

#include <algorithm>
#include <cmath>

namespace chainmark::fermion {

ClassMatrix::ClassMatrix(const QuadraticForm& form, UpCount up_count) {
    const int sites = form.length();
    rows_.resize(2 * static_cast<std::size_t>(sites));
    for (int j = 0; j < sites; ++j) {
        add(2 * j, 2 * j + 1, form.field_at(j, up_count));
    }
    // With c = (g_even - i g_odd)/2, hop c+_i c_j + pair c+_i c+_j + h.c. is -(i/2) times
    //   -Im(hop + pair) g_{2i} g_{2j} - Im(hop - pair) g_{2i+1} g_{2j+1}
    //   + Re(hop - pair) g_{2i} g_{2j+1} - Re(hop + pair) g_{2i+1} g_{2j}.
    for (const Bond& bond : form.bonds) {
        using Wide = std::complex<Real>;
        const Real sign = form.wraps(bond) ? -static_cast<Real>(parity_of(up_count)) : 1.0L;
        const Wide sum = sign * (Wide(bond.hop) + Wide(bond.pair));
        const Wide difference = sign * (Wide(bond.hop) - Wide(bond.pair));
        const int i = 2 * bond.first;
        const int j = 2 * ((bond.first + bond.range) % sites);
        add(i, j, -sum.imag());
        add(i + 1, j + 1, -difference.imag());
        add(i, j + 1, difference.real());
        add(i + 1, j, -sum.real());
    }
    merge();
}

void ClassMatrix::add(int a, int b, Real value) {
    if (value == 0.0L) {
        return;
    }
    bipartite_ = bipartite_ && (a + b) % 2 != 0;
    rows_[static_cast<std::size_t>(a)].push_back({b, value});
    rows_[static_cast<std::size_t>(b)].push_back({a, -value});
}

void ClassMatrix::merge() {
    for (std::vector<Element>& row : rows_) {
        std::sort(row.begin(), row.end(), [](const Element& x, const Element& y) {
            return x.column < y.column;
        });
        std::size_t kept = 0;
        for (const Element& element : row) {
            if (kept > 0 && row[kept - 1].column == element.column) {
                row[kept - 1].value += element.value;
            } else {
                row[kept++] = element;
            }
        }
        row.resize(kept);
    }
}

Real ClassMatrix::row_sum_norm() const {
    Real largest = 0.0L;
    for (const std::vector<Element>& row : rows_) {
        Real sum = 0.0L;
        for (const Element& element : row) {
            sum += std::abs(element.value);
        }
        largest = std::max(largest, sum);
    }
    return largest;
}

std::size_t ClassMatrix::longest_row() const {
    std::size_t longest = 0;
    for (const std::vector<Element>& row : rows_) {
        longest = std::max(longest, row.size());
    }
    return longest;
}

RealMatrix ClassMatrix::even_odd_block() const {
    const Eigen::Index sites = size() / 2;
    RealMatrix block = RealMatrix::Zero(sites, sites);
    for (int a = 0; a < size(); a += 2) {
        for (const Element& element : row(a)) {
            if (element.column % 2 != 0) {
                block(a / 2, element.column / 2) = static_cast<double>(element.value);
            }
        }
    }
    return block;
}

RealMatrix ClassMatrix::dense() const {
    RealMatrix matrix = RealMatrix::Zero(size(), size());
    for (int a = 0; a < size(); ++a) {
        for (const Element& element : row(a)) {
            matrix(a, element.column) = static_cast<double>(element.value);
        }
    }
    return matrix;
}

}  // namespace chainmark::fermion
