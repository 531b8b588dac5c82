#pragma once

#include "chainmark/formats/hdf5.hpp"

/// Files of arrays: NPY, NPZ and HDF5, told apart by their first bytes.
namespace chainmark {

/// What an array file is, by its first bytes; `other` for anything else, also files that cannot be
/// opened.
enum class ArrayFileKind { npy, npz, hdf5, other };
ArrayFileKind array_file_kind(const std::string& path);

/// The names, types and shapes of all arrays; the one of an NPY file is called "". Members of an
/// NPZ archive that are no arrays are left out.
Result<std::vector<ArrayInfo>> list_arrays(const std::string& path, const Context& context);

/// One array by its name; in an NPY file "". Fails with `missing_key` and the nearest name.
Result<Array> read_array(const std::string& path, const std::string& name, const Context& context);

/// Every array of numbers by its name; those of other types are an error, too: they are refused by
/// name, not skipped.
Result<Arrays> read_arrays(const std::string& path, const Context& context);

}  // namespace chainmark
