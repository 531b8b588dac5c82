#pragma once

#include <map>
#include <memory>
#include <optional>
#include <vector>

#include "chainmark/sector/observable.hpp"
#include "chainmark/sector/solution.hpp"
#include "chainmark/sector/spin_string.hpp"
#include "chainmark/sector/string_averages.hpp"
#include "chainmark/sector/string_symmetry.hpp"

namespace chainmark::sector {

/// Averages Tr(P A)/dim over a ground space P.
///
/// Every string is first replaced by the representative of its symmetry class, whose average is
/// the same but for a phase: what the symmetry forbids is exactly zero, and a correlation of all
/// pairs costs one pass for each distance. States are written out over all configurations while
/// that fits into memory; beyond, <psi|A|psi> is computed in the symmetric sector with A averaged
/// over the symmetries, and there is no range of a degenerate space.
///
/// Bound: with `tilt` the sine of the angle between the computed and the exact space, within each
/// sector, |Tr(P A) - Tr(P' A)| / dim <= 2 tilt ||A||.
class GroundAverages {
public:
    /// Amplitudes of a state beyond which it is not written out over all configurations.
    static constexpr double most_amplitudes = 0x1p26;
    static constexpr std::size_t largest_range_space = 64;

    GroundAverages(const Problem& problem,
                   Solution& solution,
                   const GroundSpace& ground,
                   const Context& context,
                   double most = most_amplitudes);

    /// Whether the same averages hold for another problem of the solution.
    bool serves(const Problem& problem, const GroundSpace& ground) const;

    std::vector<Average> of(const std::vector<Observable>& observables, bool with_range);

    /// string_order: one element for each list of pairs. Throws std::runtime_error where the states
    /// are too long to be written out.
    std::vector<Average> of_strings(const std::vector<std::vector<std::pair<int, int>>>& pairs,
                                    Axis axis);

    double tilt() const { return tilt_; }

private:
    using Strings = std::vector<OperatorString>;

    static bool inversion_holds(const Problem& problem,
                                const Solution& solution,
                                const GroundSpace& ground);
    void measure(const Strings& representatives);
    void add_expanded(const std::vector<PackedOperator>& ops,
                      std::vector<std::complex<double>>& sums);
    void add_symmetric(const Strings& strings, std::vector<std::complex<double>>& sums);
    Average average_of(const Observable& observable) const;
    void add_ranges(const std::vector<Observable>& observables, std::vector<Average>& averages);
    std::map<OperatorString, Eigen::MatrixXcd> string_matrices(const std::vector<Observable>& of);
    bool write_out();
    bool expandable() const;

    Chain chain_;
    Solution& solution_;
    Context context_;
    std::vector<SectorLevel> members_;
    bool inversion_;
    double most_;
    StringSymmetry symmetry_;
    double tilt_;
    std::map<OperatorString, std::complex<double>> known_;  ///< of representatives

    std::optional<MemoryBudget::Lease> lease_;
    std::map<int, std::unique_ptr<StateSet>> sets_;  ///< by up count (parity, 0)
    std::map<int, std::vector<Eigen::Index>> set_members_;
};

}  // namespace chainmark::sector
