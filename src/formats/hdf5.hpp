#pragma once

#include "chainmark/formats/array.hpp"

/// HDF5 files. The library reads them in a child process (`start_child`): a broken file is an
/// error and nothing worse. Where a build lacks the library, every function fails with
/// `cannot_read` and says so.
namespace chainmark {

/// Whether this build reads HDF5.
bool has_hdf5();

/// What a file holds.
struct ArrayInfo {
    std::string name;  ///< "group/E"
    std::string type;  ///< "HDF5 float of 8 bytes", "<f8"
    ArrayShape shape;
    bool readable = true;  ///< its type is one of numbers
};

/// All data sets that hard links lead to, by name.
Result<std::vector<ArrayInfo>> list_hdf5(const std::string& path, const Context& context);

/// One data set. Floats of any size are doubles, compounds of two floats called r and i, re and im,
/// real and imag or real and imaginary (in any case) are complex, enumerations (booleans) integers.
/// The order of axes is the file's, row-major: a program that works column-major has written them
/// reversed. Fails with `missing_key`, `wrong_type`, `over_memory`, `bad_syntax`.
Result<Array> read_hdf5(const std::string& path, const std::string& name, const Context& context);

}  // namespace chainmark
