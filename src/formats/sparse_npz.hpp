#pragma once

#include "chainmark/formats/entry_source.hpp"

namespace chainmark {

/// A sparse matrix in the files of scipy.sparse.save_npz: formats csr, csc and coo, read while they
/// are given; of csr and csc the row or column pointers are kept in memory. Others (bsr, dia) are
/// refused by name. Fails with `bad_syntax`, `bad_value` for indices outside of the matrix and for
/// what is not finite.
Result<std::unique_ptr<EntrySource>> open_sparse_npz(const std::string& path,
                                                     const Context& context);

/// Whether the archive holds the arrays that save_npz writes.
bool is_sparse_npz(const std::string& path);

}  // namespace chainmark
