#include "chainmark/sector/observable.hpp"

#include <cmath>
#include <map>

#include <Eigen/Eigenvalues>

#include "chainmark/base/numerics.hpp"

namespace chainmark::sector {
namespace {

using Complex = std::complex<double>;

constexpr std::size_t largest_range_space = 64;

/// One ground state: amplitudes over the basis of its sector.
struct State {
    const SectorBasis* basis;
    Eigen::VectorXcd amplitudes;
};

/// <bra|A|ket>, summed in extended precision.
Complex element(const std::vector<BitTerm>& terms, const State& bra, const State& ket) {
    long double real = 0;
    long double imaginary = 0;
    for (std::int64_t i = 0; i < ket.basis->dim(); ++i) {
        const std::uint64_t state = ket.basis->state(i);
        for (const BitTerm& term : terms) {
            if (!term.acts_on(state)) {
                continue;
            }
            const std::uint64_t target = state ^ term.flip;
            if (!bra.basis->contains(target)) {
                continue;
            }
            const std::int64_t row =
                term.flip == 0 && bra.basis == ket.basis ? i : bra.basis->rank(target);
            const Complex x =
                std::conj(bra.amplitudes[row]) * term.amplitude(state) * ket.amplitudes[i];
            real += x.real();
            imaginary += x.imag();
        }
    }
    return {static_cast<double>(real), static_cast<double>(imaginary)};
}

/// Largest residual/gap over the sectors that hold ground states.
double tilt_of(const Solution& solution, const GroundSpace& ground) {
    std::map<std::size_t, std::vector<const BlockLevel*>> by_block;
    for (const BlockLevel& member : ground.members) {
        by_block[member.block].push_back(&member);
    }
    double tilt = 0.0;
    for (const auto& [index, members] : by_block) {
        const Block& block = solution.block(index);
        double squares = 0.0;
        std::size_t highest = 0;  // equal energies leave the order of members open
        for (const BlockLevel* member : members) {
            squares += std::pow(block.residual(member->level), 2);
            highest = std::max(highest, member->level);
        }
        if (highest + 1 < block.known()) {
            const double gap = block.energy(highest + 1) - block.energy(highest);
            tilt = std::max(tilt, std::sqrt(squares) / gap);
        }
    }
    return tilt;
}

double norm_bound(const Observable& observable) {
    double norm = 0.0;
    for (const Term& term : observable) {
        double size = std::abs(term.coefficient);
        for (const SiteFactor& factor : term.string) {
            size *= factor.op == SiteOperator::z ? 0.5 : 1.0;
        }
        norm += size;
    }
    return norm;
}

std::pair<double, double> extremes(const std::vector<BitTerm>& terms,
                                   const std::vector<State>& states) {
    const auto size = static_cast<Eigen::Index>(states.size());
    Eigen::MatrixXcd block(size, size);
    for (Eigen::Index i = 0; i < size; ++i) {
        for (Eigen::Index j = 0; j <= i; ++j) {
            block(i, j) = element(
                terms, states[static_cast<std::size_t>(i)], states[static_cast<std::size_t>(j)]);
        }
    }
    const Eigen::SelfAdjointEigenSolver<Eigen::MatrixXcd> solver(block, Eigen::EigenvaluesOnly);
    return {solver.eigenvalues().minCoeff(), solver.eigenvalues().maxCoeff()};
}

}  // namespace

Observable local_spin(Axis axis, int site, double factor) {
    const OperatorString plus = {{site, SiteOperator::plus}};
    const OperatorString minus = {{site, SiteOperator::minus}};
    switch (axis) {
        case Axis::x:
            return {{plus, factor / 2}, {minus, factor / 2}};
        case Axis::y:  // (S+ - S-) / (2i)
            return {{plus, Complex(0, -factor / 2)}, {minus, Complex(0, factor / 2)}};
        case Axis::z:
            break;
    }
    return {{{{site, SiteOperator::z}}, factor}};
}

Observable mean_sz(int length) {
    Observable sum;
    for (int site = 0; site < length; ++site) {
        sum.push_back({{{site, SiteOperator::z}}, 1.0 / length});
    }
    return sum;
}

Observable mean_zz(const std::vector<std::pair<int, int>>& pairs) {
    const double weight = 1.0 / static_cast<double>(pairs.size());
    Observable sum;
    for (const auto& [i, j] : pairs) {
        if (i == j) {
            sum.push_back({{}, weight / 4});
        } else {
            sum.push_back(
                {{{std::min(i, j), SiteOperator::z}, {std::max(i, j), SiteOperator::z}}, weight});
        }
    }
    return sum;
}

Reference ground_averages(const Solution& solution,
                          const GroundSpace& ground,
                          const std::vector<Observable>& observables) {
    std::vector<State> states;
    for (const BlockLevel& member : ground.members) {
        const Block& block = solution.block(member.block);
        states.push_back({&block.basis(), block.vector(member.level)});
    }
    const double tilt = tilt_of(solution, ground);
    const bool ranged = states.size() <= largest_range_space;
    std::vector<double> averages;
    Reference result;
    Range range;
    for (const Observable& observable : observables) {
        const std::vector<BitTerm> terms = bit_terms(observable);
        double trace = 0.0;
        for (const State& state : states) {
            trace += element(terms, state, state).real();
        }
        averages.push_back(trace / static_cast<double>(states.size()));
        result.bound.push_back(norm_bound(observable) * (2 * tilt + 32 * epsilon));
        if (ranged) {
            range.push_back(states.size() == 1 ? std::pair(averages.back(), averages.back())
                                               : extremes(terms, states));
        }
    }
    result.value = Value::array(averages);
    if (ranged) {
        result.range = std::move(range);
    }
    result.basis = Basis::residual;
    result.complete = ground.complete;
    result.degeneracy = static_cast<std::int64_t>(ground.members.size());
    return result;
}

}  // namespace chainmark::sector
