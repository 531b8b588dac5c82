#include "chainmark/sector/tridiagonal.hpp"

#include <algorithm>
#include <stdexcept>

#include <fmt/format.h>

// LAPACK's own name. NOLINTBEGIN(readability-identifier-naming)
extern "C" void dstevx_(const char* job,
                        const char* range,
                        const int* n,
                        double* d,
                        double* e,
                        const double* vl,
                        const double* vu,
                        const int* il,
                        const int* iu,
                        const double* abstol,
                        int* m,
                        double* w,
                        double* z,
                        const int* ldz,
                        double* work,
                        int* iwork,
                        int* ifail,
                        int* info);
// NOLINTEND(readability-identifier-naming)

namespace chainmark::sector {

TridiagonalPairs lowest_of_tridiagonal(std::vector<double> alpha,
                                       std::vector<double> beta,
                                       int count) {
    const int n = static_cast<int>(alpha.size());
    const int wanted = std::min(count, n);
    const auto size = static_cast<std::size_t>(n);
    beta.resize(size);  // LAPACK wants room for n
    std::vector<double> values(size);
    std::vector<double> vectors(size * static_cast<std::size_t>(wanted));
    std::vector<double> work(5 * size);
    std::vector<int> iwork(5 * size);
    std::vector<int> failed(size);
    const double unused = 0.0;
    const double tolerance = 0.0;  // LAPACK's own choice
    const int first = 1;
    int found = 0;
    int info = 0;
    dstevx_("V",
            "I",
            &n,
            alpha.data(),
            beta.data(),
            &unused,
            &unused,
            &first,
            &wanted,
            &tolerance,
            &found,
            values.data(),
            vectors.data(),
            &n,
            work.data(),
            iwork.data(),
            failed.data(),
            &info);
    if (info != 0 || found != wanted) {
        throw std::runtime_error(fmt::format("LAPACK dstevx failed with info = {}", info));
    }
    TridiagonalPairs result;
    for (std::size_t i = 0; i < static_cast<std::size_t>(wanted); ++i) {
        result.values.push_back(values[i]);
        const auto begin = vectors.begin() + static_cast<std::ptrdiff_t>(i * size);
        result.vectors.emplace_back(begin, begin + n);
    }
    return result;
}

}  // namespace chainmark::sector
