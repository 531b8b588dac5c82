#include "chainmark/sector/ground_averages.hpp"

#include <algorithm>
#include <cmath>
#include <set>
#include <stdexcept>

#include <Eigen/Eigenvalues>
#include <fmt/format.h>

#include "chainmark/base/numerics.hpp"

namespace chainmark::sector {
namespace {

using Complex = std::complex<double>;

/// Rounding of an average of an operator of norm 1.
constexpr double rounding = 64 * epsilon;

/// Operations beyond which no range is computed.
constexpr double most_range_work = 3e11;

/// The Hermitian operators (A + A^dagger)/2 and (A - A^dagger)/2i of a sum of strings.
std::pair<std::vector<Term>, std::vector<Term>> hermitian_parts(const std::vector<Term>& terms) {
    StringSum real;
    StringSum imaginary;
    for (const Term& term : terms) {
        const OperatorString adjoint = conjugate(term.string);
        const Complex c = term.coefficient / 2.0;
        real[term.string] += c;
        real[adjoint] += std::conj(c);
        imaginary[term.string] += c / Complex(0, 1);
        imaginary[adjoint] += std::conj(c / Complex(0, 1));
    }
    return {terms_of(real), terms_of(imaginary)};
}

}  // namespace

bool GroundAverages::inversion_holds(const Problem& problem,
                                     const Solution& solution,
                                     const GroundSpace& ground) {
    if (!solution.field_outside() || problem.field == 0.0) {
        return true;
    }
    return std::all_of(ground.members.begin(), ground.members.end(), [&](const SectorLevel& level) {
        return solution.sz_of_sector(level.sector) == 0.0;
    });
}

GroundAverages::GroundAverages(const Problem& problem,
                               Solution& solution,
                               const GroundSpace& ground,
                               const Context& context,
                               double most)
    : chain_(problem.chain),
      solution_(solution),
      context_(context),
      members_(ground.members),
      inversion_(inversion_holds(problem, solution, ground)),
      most_(most),
      symmetry_(problem.chain, solution.symmetries(), inversion_),
      tilt_(solution.tilt_of(ground.members)) {}

bool GroundAverages::serves(const Problem& problem, const GroundSpace& ground) const {
    return inversion_ == inversion_holds(problem, solution_, ground) &&
           std::equal(members_.begin(),
                      members_.end(),
                      ground.members.begin(),
                      ground.members.end(),
                      [](const SectorLevel& a, const SectorLevel& b) {
                          return a.sector == b.sector && a.level == b.level;
                      });
}

bool GroundAverages::expandable() const {
    double largest = 0.0;
    for (const SectorLevel& member : members_) {
        const SectorLabel& label = solution_.sectors()[member.sector].label;
        largest =
            std::max(largest, HalvesBasis::count(Packing(chain_), label.conserved, label.value));
    }
    if (largest > most_) {
        return false;
    }
    return !context_.memory || context_.memory->take(largest * 48).has_value();
}

/// All members at once, for elements between them. False where they do not fit.
bool GroundAverages::write_out() {
    if (!sets_.empty()) {
        return true;
    }
    if (members_.size() > largest_range_space || !expandable()) {
        return false;
    }
    double bytes = 0.0;
    for (std::size_t i = 0; i < members_.size(); ++i) {
        const SectorLabel& label = solution_.sectors()[members_[i].sector].label;
        bytes += 16 * HalvesBasis::count(Packing(chain_), label.conserved, label.value);
        set_members_[label.value].push_back(static_cast<Eigen::Index>(i));
    }
    if (context_.memory && !lease_) {
        if (auto lease = context_.memory->take(bytes)) {
            lease_.emplace(std::move(*lease));
        } else {
            set_members_.clear();
            return false;
        }
    }
    const Conserved conserved = solution_.symmetries().conserved;
    for (const auto& [value, of] : set_members_) {
        auto set = std::make_unique<StateSet>(
            StateSet{HalvesBasis(Packing(chain_), conserved, value), {}});
        set->states.resize(set->configurations.dim(), static_cast<Eigen::Index>(of.size()));
        for (std::size_t k = 0; k < of.size(); ++k) {
            set->states.col(static_cast<Eigen::Index>(k)) =
                solution_.state(members_[static_cast<std::size_t>(of[k])], set->configurations);
        }
        sets_.emplace(value, std::move(set));
    }
    return true;
}

void GroundAverages::add_expanded(const std::vector<PackedOperator>& ops,
                                  std::vector<Complex>& sums) {
    const auto add = [&](const HalvesBasis& configurations, const Eigen::VectorXcd& psi) {
        const std::vector<Complex> values = string_averages(configurations, psi, ops, context_);
        std::transform(sums.begin(), sums.end(), values.begin(), sums.begin(), std::plus<>());
    };
    if (write_out()) {
        for (const auto& [value, set] : sets_) {
            for (Eigen::Index k = 0; k < set->states.cols(); ++k) {
                add(set->configurations, set->states.col(k));
            }
        }
        return;
    }
    std::unique_ptr<HalvesBasis> configurations;
    for (const SectorLevel& member : members_) {
        const SectorLabel& label = solution_.sectors()[member.sector].label;
        if (!configurations || configurations->value() != label.value) {
            configurations =
                std::make_unique<HalvesBasis>(Packing(chain_), label.conserved, label.value);
        }
        add(*configurations, solution_.state(member, *configurations));
    }
}

void GroundAverages::add_symmetric(const Strings& strings, std::vector<Complex>& sums) {
    for (std::size_t s = 0; s < strings.size(); ++s) {
        const auto [real, imaginary] = hermitian_parts(symmetry_.averaged(strings[s]));
        for (const SectorLevel& member : members_) {
            poll(context_);
            sums[s] += solution_.expectation(member, real);
            if (!solution_.symmetries().real) {
                sums[s] += Complex(0, solution_.expectation(member, imaginary));
            }
        }
    }
}

/// Makes the averages of the representatives known.
void GroundAverages::measure(const Strings& representatives) {
    Strings missing;
    std::vector<PackedOperator> ops;
    for (const OperatorString& string : representatives) {
        if (!known_.contains(string)) {
            missing.push_back(string);
            ops.emplace_back(Packing(chain_), std::vector<Term>{{string, 1.0}});
        }
    }
    if (missing.empty()) {
        return;
    }
    std::vector<Complex> sums(missing.size(), 0.0);
    if (expandable()) {
        add_expanded(ops, sums);
    } else {
        add_symmetric(missing, sums);
    }
    for (std::size_t s = 0; s < missing.size(); ++s) {
        known_[missing[s]] = sums[s] / static_cast<double>(members_.size());
    }
}

Average GroundAverages::average_of(const Observable& observable) const {
    // Coefficients of <R> and of <R>* are added up first: what cancels there has no error.
    std::map<OperatorString, std::pair<Complex, Complex>> sums;
    Average average;
    for (const auto& [string, coefficient] : observable.strings) {
        if (string.empty()) {
            average.value += coefficient;
            continue;
        }
        const StringSymmetry::Class of = symmetry_.classify(string);
        if (!of.vanishes) {
            auto& [plain, conjugated] = sums[of.representative];
            (of.conjugated ? conjugated : plain) += coefficient * of.factor;
        }
    }
    average.bound = 2 * epsilon * std::abs(average.value);
    double norm = 0.0;
    for (const auto& [string, factors] : sums) {
        const Complex value = known_.at(string);
        average.value += factors.first * value + factors.second * std::conj(value);
        norm +=
            (std::abs(factors.first) + std::abs(factors.second)) * norm_of(string, chain_.two_s);
    }
    average.bound += 2 * tilt_ * std::min(norm, observable.norm) + rounding * norm;
    return average;
}

std::vector<Average> GroundAverages::of(const std::vector<Observable>& observables,
                                        bool with_range) {
    std::set<OperatorString> needed;
    for (const Observable& observable : observables) {
        for (const auto& [string, coefficient] : observable.strings) {
            const StringSymmetry::Class of = symmetry_.classify(string);
            if (!string.empty() && !of.vanishes) {
                needed.insert(of.representative);
            }
        }
    }
    measure({needed.begin(), needed.end()});
    std::vector<Average> averages;
    for (const Observable& observable : observables) {
        averages.push_back(average_of(observable));
    }
    if (with_range) {
        add_ranges(observables, averages);
    }
    return averages;
}

/// Of every string of the observables, or of its adjoint where that comes first.
std::map<OperatorString, Eigen::MatrixXcd> GroundAverages::string_matrices(
    const std::vector<Observable>& of) {
    Strings strings;
    {
        std::set<OperatorString> all;
        for (const Observable& observable : of) {
            for (const auto& [string, coefficient] : observable.strings) {
                all.insert(std::min(string, conjugate(string)));
            }
        }
        strings.assign(all.begin(), all.end());
    }
    const auto dim = static_cast<Eigen::Index>(members_.size());
    std::vector<PackedOperator> ops;
    std::map<OperatorString, Eigen::MatrixXcd> result;
    for (const OperatorString& string : strings) {
        ops.emplace_back(Packing(chain_), std::vector<Term>{{string, 1.0}});
        result[string] = Eigen::MatrixXcd::Zero(dim, dim);
    }
    const Conserved conserved = solution_.symmetries().conserved;
    for (const auto& [bra_value, bras] : sets_) {
        for (const auto& [ket_value, kets] : sets_) {
            std::vector<const PackedOperator*> acting;
            Strings acting_strings;
            for (std::size_t s = 0; s < strings.size(); ++s) {
                const int missed = raises_by(strings[s]) - (bra_value - ket_value);
                if (conserved == Conserved::nothing || missed == 0 ||
                    (conserved == Conserved::parity && missed % 2 == 0)) {
                    acting.push_back(&ops[s]);
                    acting_strings.push_back(strings[s]);
                }
            }
            const auto elements = elements_between(*bras, *kets, acting, context_);
            for (std::size_t s = 0; s < acting.size(); ++s) {
                result[acting_strings[s]](set_members_[bra_value], set_members_[ket_value]) =
                    elements[s];
            }
        }
    }
    return result;
}

void GroundAverages::add_ranges(const std::vector<Observable>& observables,
                                std::vector<Average>& averages) {
    if (members_.size() == 1) {
        for (Average& average : averages) {
            average.range = {average.value.real(), average.value.real()};
        }
        return;
    }
    std::set<OperatorString> strings;
    for (const Observable& observable : observables) {
        for (const auto& [string, coefficient] : observable.strings) {
            strings.insert(string);
        }
    }
    if (!write_out()) {
        return;
    }
    double work = 0.0;
    for (const auto& [value, set] : sets_) {
        work += static_cast<double>(set->states.size()) * static_cast<double>(members_.size()) *
                static_cast<double>(strings.size());
    }
    if (work > most_range_work) {
        return;
    }
    const std::map<OperatorString, Eigen::MatrixXcd> matrices = string_matrices(observables);
    const auto dim = static_cast<Eigen::Index>(members_.size());
    for (std::size_t o = 0; o < observables.size(); ++o) {
        Eigen::MatrixXcd sum = Eigen::MatrixXcd::Zero(dim, dim);
        for (const auto& [string, coefficient] : observables[o].strings) {
            const auto at = matrices.find(string);
            if (at != matrices.end()) {
                sum += coefficient * at->second;
            } else {
                sum += coefficient * matrices.at(conjugate(string)).adjoint();
            }
        }
        const Eigen::SelfAdjointEigenSolver<Eigen::MatrixXcd> solver((sum + sum.adjoint()) / 2.0,
                                                                     Eigen::EigenvaluesOnly);
        averages[o].range = {solver.eigenvalues().minCoeff(), solver.eigenvalues().maxCoeff()};
    }
}

std::vector<Average> GroundAverages::of_strings(
    const std::vector<std::vector<std::pair<int, int>>>& pairs, Axis axis) {
    if (!write_out()) {
        throw std::runtime_error(
            "string order needs the ground states written out over all configurations, which is "
            "more than the memory allows");
    }
    const auto dim = static_cast<Eigen::Index>(members_.size());
    std::vector<Average> averages;
    for (const auto& mean : pairs) {
        // A single state is invariant under translations, and translates have the same average.
        const auto step = static_cast<std::size_t>(solution_.symmetries().step);
        const bool translates = members_.size() == 1 && step > 0 &&
                                mean.size() == static_cast<std::size_t>(chain_.length());
        const std::size_t count = translates ? step : mean.size();
        std::vector<SpinString> strings;
        for (std::size_t p = 0; p < count; ++p) {
            strings.emplace_back(
                chain_, mean[p].first, mean[p].second, axis, 1.0 / static_cast<double>(count));
        }
        std::vector<const SpinString*> ops;
        double norm = 0.0;
        for (const SpinString& string : strings) {
            ops.push_back(&string);
            norm += string.norm();
        }
        Eigen::MatrixXcd sum = Eigen::MatrixXcd::Zero(dim, dim);
        for (const auto& [bra_value, bras] : sets_) {
            for (const auto& [ket_value, kets] : sets_) {
                for (const Eigen::MatrixXcd& part : elements_between(*bras, *kets, ops, context_)) {
                    sum(set_members_[bra_value], set_members_[ket_value]) += part;
                }
            }
        }
        Average& average = averages.emplace_back();
        average.value = sum.trace().real() / static_cast<double>(dim);
        average.bound = norm * (2 * tilt_ + rounding);
        const Eigen::SelfAdjointEigenSolver<Eigen::MatrixXcd> solver((sum + sum.adjoint()) / 2.0,
                                                                     Eigen::EigenvaluesOnly);
        average.range = {solver.eigenvalues().minCoeff(), solver.eigenvalues().maxCoeff()};
    }
    return averages;
}

}  // namespace chainmark::sector
