#include "chainmark/sector/entropy.hpp"

#include <algorithm>
#include <cmath>
#include <map>
#include <numbers>

#include "chainmark/base/hermitian_eigen.hpp"
#include "chainmark/base/numerics.hpp"
#include "chainmark/sector/memory.hpp"

namespace chainmark::sector {
namespace {

/// The configurations of one side of a cut, sorted into classes by what is conserved.
class Side {
public:
    Side(const Packing& packing, Conserved conserved, const std::vector<int>& sites)
        : packing_(packing), conserved_(conserved), sites_(sites) {
        for (const int site : sites) {
            bits_ |= packing.site_bits(site);
        }
    }

    int class_of(Word word) const {
        const int sum = packing_.digit_sum(word & bits_);
        return conserved_ == Conserved::up_count ? sum
               : conserved_ == Conserved::parity ? sum % 2
                                                 : 0;
    }

    /// Place among the configurations of its class, in the order of their first appearance.
    Eigen::Index place(Word word) {
        std::int32_t& place = place_[number(word)];
        if (place < 0) {
            place = count_[class_of(word)]++;
        }
        return place;
    }

    /// Makes room for every configuration of the side.
    void reserve() {
        std::size_t size = 1;
        for (std::size_t i = 0; i < sites_.size(); ++i) {
            size *= static_cast<std::size_t>(packing_.two_s) + 1;
        }
        place_.assign(size, -1);
    }

    Eigen::Index count(int of_class) const { return count_.at(of_class); }

private:
    std::size_t number(Word word) const {
        std::size_t number = 0;
        for (const int site : sites_) {
            number = number * (static_cast<std::size_t>(packing_.two_s) + 1) +
                     static_cast<std::size_t>(packing_.digit(word, site));
        }
        return number;
    }

    Packing packing_;
    Conserved conserved_;
    std::vector<int> sites_;
    Word bits_ = 0;
    std::vector<std::int32_t> place_;
    std::map<int, std::int32_t> count_;
};

/// Eigenvalues of the reduced state, at least those that are not zero.
struct Spectrum {
    std::vector<double> p;
    double distance = 0.0;  ///< bounds the sum of their roundings: each of its block's norm
};

Spectrum reduced_spectrum(const HalvesBasis& configurations,
                          const Eigen::VectorXcd& psi,
                          const std::vector<int>& small,
                          const std::vector<int>& large,
                          const Context& context) {
    Side rows(configurations.packing(), configurations.conserved(), small);
    Side columns(configurations.packing(), configurations.conserved(), large);
    rows.reserve();
    columns.reserve();
    // A row's class fixes its column's.
    std::map<int, int> partner;
    configurations.for_each_in(0, configurations.highs().size(), [&](std::int64_t, Word word) {
        rows.place(word);
        columns.place(word);
        partner[rows.class_of(word)] = columns.class_of(word);
    });
    std::map<int, Eigen::MatrixXcd> blocks;
    for (const auto& [of_rows, of_columns] : partner) {
        blocks[of_rows] = Eigen::MatrixXcd::Zero(rows.count(of_rows), columns.count(of_columns));
    }
    configurations.for_each_in(
        0, configurations.highs().size(), [&](std::int64_t index, Word word) {
            blocks[rows.class_of(word)](rows.place(word), columns.place(word)) = psi[index];
        });
    Spectrum spectrum;
    for (auto& [of_rows, block] : blocks) {
        poll(context);
        if (block.rows() > block.cols()) {
            block.adjointInPlace();
        }
        const Eigen::MatrixXcd reduced = block * block.adjoint();
        const Eigen::VectorXd values = hermitian_eigen(reduced).values;
        for (const double p : values) {
            spectrum.p.push_back(std::max(0.0, p));
        }
        spectrum.distance += 4 * epsilon * static_cast<double>(values.size()) * values.maxCoeff();
    }
    return spectrum;
}

/// Largest |dS| of order 1 at trace distance t; it is reached at t = 1 - 1/d.
double largest_change(double t, double dim) {
    if (dim < 2) {
        return 0.0;
    }
    t = std::min(t, 1 - 1 / dim);
    return t == 0.0 ? 0.0 : t * std::log(dim - 1) - t * std::log(t) - (1 - t) * std::log1p(-t);
}

Entropy von_neumann(const std::vector<double>& spectrum, double distance, double dim) {
    long double sum = 0.0L;
    for (const double p : spectrum) {
        sum -= p > 0 ? p * std::log(static_cast<long double>(p)) : 0.0L;
    }
    return {static_cast<double>(std::max(0.0L, sum)), largest_change(distance, dim)};
}

Entropy renyi(const std::vector<double>& spectrum, int order, double distance, double dim) {
    const double largest = *std::max_element(spectrum.begin(), spectrum.end());
    long double sum = 0.0L;  // Tr rho^n / largest^n
    for (const double p : spectrum) {
        sum += std::pow(static_cast<long double>(p / largest), order);
    }
    const double n = order;
    const long double log_trace = n * std::log(static_cast<long double>(largest)) + std::log(sum);
    Entropy result;
    result.value = std::max(0.0, static_cast<double>(log_trace / (1 - n)));
    const double step = 2 * distance / largest;
    const double change = n * std::pow(1 + step, n - 1) * step / static_cast<double>(sum);
    result.bound = change < 0.5 ? -std::log1p(-change) / (n - 1) : std::log(dim);
    return result;
}

}  // namespace

Entropy entanglement_entropy(const HalvesBasis& configurations,
                             const Eigen::VectorXcd& psi,
                             const Options& options,
                             double tilt,
                             const Context& context) {
    const Packing& packing = configurations.packing();
    std::vector<int> small = options.block;
    std::vector<int> large;
    for (int site = 0; site < packing.length; ++site) {
        if (std::find(small.begin(), small.end(), site) == small.end()) {
            large.push_back(site);
        }
    }
    if (small.size() > large.size()) {
        std::swap(small, large);
    }
    const double dim = std::pow(packing.two_s + 1.0, static_cast<double>(small.size()));
    const double other = std::pow(packing.two_s + 1.0, static_cast<double>(large.size()));
    const auto lease =
        take_memory(context,
                    16.0 * static_cast<double>(psi.size()) + 5 * 16 * dim * dim + 4 * other,
                    "the reduced state");
    const BlasThreads threads(context.threads);
    Spectrum spectrum = reduced_spectrum(configurations, psi, small, large, context);
    double norm = 0.0;
    for (const double p : spectrum.p) {
        norm += p;
    }
    for (double& p : spectrum.p) {
        p /= norm;
    }
    const double distance = std::min(1.0, tilt + spectrum.distance + 4 * epsilon);
    Entropy result = options.order == 1 ? von_neumann(spectrum.p, distance, dim)
                                        : renyi(spectrum.p, options.order, distance, dim);
    result.bound += 8 * epsilon * result.value;
    if (options.log2) {
        result.value /= std::numbers::ln2;
        result.bound = result.bound / std::numbers::ln2 + epsilon * result.value;
    }
    return result;
}

}  // namespace chainmark::sector
