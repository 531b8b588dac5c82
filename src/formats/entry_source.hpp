#pragma once

#include <complex>
#include <cstdint>
#include <functional>
#include <memory>
#include <span>
#include <string>
#include <vector>

#include "chainmark/formats/array.hpp"

namespace chainmark {

/// One element of a matrix; indices count from 0.
struct MatrixEntry {
    std::int64_t row = 0;
    std::int64_t column = 0;
    std::complex<double> value;
};

/// A matrix as a stream of its entries, whatever file holds it; the file is never in memory as a
/// whole.
class EntrySource {
public:
    using Each = std::function<void(std::span<const MatrixEntry>)>;

    EntrySource() = default;
    EntrySource(const EntrySource&) = delete;
    EntrySource& operator=(const EntrySource&) = delete;
    virtual ~EntrySource() = default;

    virtual const std::string& source() const = 0;
    virtual std::int64_t rows() const = 0;
    virtual std::int64_t columns() const = 0;

    /// Most entries that `for_each` can give, symmetric ones expanded.
    virtual std::int64_t most_entries() const = 0;

    /// Estimated seconds of one `for_each`: the work that it reports to context.progress, whose
    /// `begin` and `end` are the caller's.
    virtual double seconds() const = 0;

    /// Hands over all entries in blocks, in the file's order; can be called again. Both triangles
    /// of a matrix that is stored by one are given. Zeros may be left out, several entries at the
    /// same place add up, all values are finite. Fails with place, and what `each` throws passes.
    virtual Result<void> for_each(const Each& each, const Context& context) = 0;

    /// What is unusual and yet was read, known after `for_each`: duplicates, both triangles stored
    /// where one is declared.
    const std::vector<std::string>& warnings() const { return warnings_; }

protected:
    void warn(std::string text);

private:
    std::vector<std::string> warnings_;
};

/// Collects entries into blocks for EntrySource::for_each.
class EntryBlock {
public:
    explicit EntryBlock(const EntrySource::Each& each) : each_(each) { block_.reserve(capacity); }
    void add(const MatrixEntry& entry) {
        block_.push_back(entry);
        if (block_.size() == capacity) {
            flush();
        }
    }
    void flush() {
        if (!block_.empty()) {
            each_(block_);
            block_.clear();
        }
    }

private:
    static constexpr std::size_t capacity = 4096;
    const EntrySource::Each& each_;
    std::vector<MatrixEntry> block_;
};

/// A matrix from a file: Matrix Market (.mtx, .mtx.gz, told by its first line), a matrix of NPY,
/// a sparse matrix of SciPy's save_npz, or the data set or member `name` of HDF5 or NPZ with two
/// axes. Without a name the file must hold one array only.
Result<std::unique_ptr<EntrySource>> open_entries(const std::string& path,
                                                  const std::string& name,
                                                  const Context& context);

/// The entries of an array with two axes that is in memory already.
Result<std::unique_ptr<EntrySource>> entries_of(Array array);

/// The entries of an NPY file with two axes, read while they are given.
Result<std::unique_ptr<EntrySource>> open_npy_entries(const std::string& path);

}  // namespace chainmark
