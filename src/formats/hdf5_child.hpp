#pragma once

#include <string>

#include "chainmark/formats/child_stream.hpp"

/// The part of reading HDF5 that calls the library: in a child process alone.
namespace chainmark {

/// Writes the list of data sets as JSON: [{"name", "type", "shape", "readable"}, ...]; or an error
/// as JSON: {"code", "found", "allowed"}.
void write_hdf5_list(const std::string& path, const ByteSink& sink);

/// Writes 'A' and the data set as an NPY file; or 'E' and an error as JSON. Buffers stay within
/// `memory` bytes.
void write_hdf5_array(const std::string& path,
                      const std::string& name,
                      double memory,
                      const ByteSink& sink);

}  // namespace chainmark
