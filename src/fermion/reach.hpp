#pragma once

#include <string>

#include "chainmark/reference/quantity.hpp"

namespace chainmark::fermion {

/// Why neither finite nor infinite free fermions answer such a query; empty where they may.
std::string beyond_free_fermions(const Query& query);

}  // namespace chainmark::fermion
