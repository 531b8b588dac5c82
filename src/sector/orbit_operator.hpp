#pragma once

#include <complex>
#include <memory>

#include "chainmark/base/context.hpp"
#include "chainmark/sector/linear_operator.hpp"
#include "chainmark/sector/orbit_rows.hpp"

namespace chainmark::sector {

/// H between the orbits of a sector with every element computed anew in each product: no memory
/// beside the basis. Refers to `rows`.
template <class Scalar>
std::unique_ptr<LinearOperator<Scalar>> make_matrix_free(const OrbitRows<Scalar>& rows,
                                                         const Context& context);

/// The same with the elements stored, 4 bytes each while the column and the code of the value fit
/// in 32 bits, else 8. Refers to the basis of `rows`, not to `rows`.
template <class Scalar>
std::unique_ptr<LinearOperator<Scalar>> make_stored(const OrbitRows<Scalar>& rows,
                                                    const Context& context);

/// Upper bound of the bytes that make_stored takes.
template <class Scalar>
double stored_bytes(const OrbitRows<Scalar>& rows);

}  // namespace chainmark::sector
