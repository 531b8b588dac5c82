#pragma once

#include <complex>
#include <vector>

#include <Eigen/Core>

#include "chainmark/base/context.hpp"
#include "chainmark/sector/halves_basis.hpp"
#include "chainmark/sector/packed_string.hpp"

/// Elements of operators between states written out over all configurations.
namespace chainmark::sector {

/// <psi|op|psi> for operators of one string each that keep what the configurations have in common.
/// One pass over the configurations, the same result on any number of threads.
std::vector<std::complex<double>> string_averages(const HalvesBasis& configurations,
                                                  const Eigen::VectorXcd& psi,
                                                  const std::vector<PackedOperator>& ops,
                                                  const Context& context);

using StateMatrix =
    Eigen::Matrix<std::complex<double>, Eigen::Dynamic, Eigen::Dynamic, Eigen::RowMajor>;

/// Some states of equal up count (or parity): one column each over the same configurations.
struct StateSet {
    HalvesBasis configurations;
    StateMatrix states;
};

/// <bra|op|ket> for all bras and kets and operators whose apply(word, visit) calls
/// visit(target, <target|op|word>).
template <class Operator>
std::vector<Eigen::MatrixXcd> elements_between(const StateSet& bras,
                                               const StateSet& kets,
                                               const std::vector<const Operator*>& ops,
                                               const Context& context);

}  // namespace chainmark::sector

#include "chainmark/sector/string_averages_impl.hpp"
