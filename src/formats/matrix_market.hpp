#pragma once

#include "chainmark/formats/entry_source.hpp"

/// Matrix Market files, as the National Institute of Standards and Technology defines them.
namespace chainmark {

struct MatrixMarketHeader {
    enum class Field { real, integer, complex, pattern };
    enum class Symmetry { general, symmetric, skew, hermitian };

    bool coordinate = true;  ///< else array: every element, column by column
    Field field = Field::real;
    Symmetry symmetry = Symmetry::general;
    std::int64_t rows = 0;
    std::int64_t columns = 0;
    std::int64_t stored = 0;  ///< entries in the file

    friend bool operator==(const MatrixMarketHeader&, const MatrixMarketHeader&) = default;
};

/// Opens a plain or gzip file and reads its header. Words of any case, comments and blank lines
/// anywhere are let through. Refused with line and column: unknown words, the combinations that
/// the definition excludes (real or integer or pattern with hermitian, array with pattern, pattern
/// with skew-symmetric), symmetric kinds of a matrix that is not square, impossible sizes.
///
/// `for_each` refuses with line and column: indices outside of the matrix, what is no finite
/// number, fewer or more entries than announced, an imaginary diagonal under hermitian, a diagonal
/// other than 0 under skew-symmetric. It warns of several entries at one place (they add up, as is
/// usual), of the upper triangle stored in place of the lower, and of both triangles under a
/// symmetric kind, which are then taken as they stand and not mirrored. Symmetric kinds are read
/// once more beforehand to know the latter, and files without order once more to count duplicates.
Result<std::unique_ptr<EntrySource>> open_matrix_market(const std::string& path);

/// Whether the file starts as a Matrix Market file.
bool is_matrix_market(const std::string& path);

}  // namespace chainmark
