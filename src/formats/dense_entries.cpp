#include <cmath>
#include <limits>

#include <fmt/format.h>

#include "chainmark/formats/entry_source.hpp"
#include "chainmark/formats/npy.hpp"
#include "chainmark/formats/shown.hpp"

namespace chainmark {
namespace {

constexpr double elements_per_second = 5e7;  // for the progress alone
constexpr std::size_t piece = 1U << 15;

Result<void> check_axes(const std::string& source, const ArrayShape& shape) {
    if (shape.size() == 2) {
        return {};
    }
    return refuse(ErrorCode::wrong_type,
                  {.source = source},
                  fmt::format("the array is {}", shape_text(shape)),
                  "a matrix, with two axes");
}

/// Gives nonzero elements on, refuses what is not finite.
class DenseSink {
public:
    DenseSink(std::string source, const EntrySource::Each& each)
        : source_(std::move(source)), block_(each) {}

    Result<void> add(std::int64_t row, std::int64_t column, std::complex<double> value) {
        if (value == 0.0) {
            return {};
        }
        if (!std::isfinite(value.real()) || !std::isfinite(value.imag())) {
            return refuse(ErrorCode::bad_value,
                          {.source = source_},
                          fmt::format("element [{}, {}] is not finite", row, column),
                          "finite matrix elements");
        }
        block_.add({row, column, value});
        return {};
    }
    void flush() { block_.flush(); }

private:
    std::string source_;
    EntryBlock block_;
};

void report(std::size_t elements, const Context& context) {
    poll(context);
    if (context.progress != nullptr) {
        context.progress->finished(static_cast<double>(elements) / elements_per_second);
    }
}

class ArrayEntries : public EntrySource {
public:
    explicit ArrayEntries(Array array) : array_(std::move(array)) {}

    const std::string& source() const override { return array_.source; }
    std::int64_t rows() const override { return array_.shape[0]; }
    std::int64_t columns() const override { return array_.shape[1]; }
    std::int64_t most_entries() const override { return static_cast<std::int64_t>(array_.size()); }
    double seconds() const override {
        return static_cast<double>(array_.size()) / elements_per_second;
    }

    Result<void> for_each(const Each& each, const Context& context) override {
        return std::visit([&](const auto& values) { return give(values, each, context); },
                          array_.values);
    }

private:
    template <class T>
    Result<void> give(const std::vector<T>& values,
                      const Each& each,
                      const Context& context) const {
        DenseSink sink(source(), each);
        std::size_t at = 0;
        for (std::int64_t row = 0; row < rows(); ++row) {
            for (std::int64_t column = 0; column < columns(); ++column, ++at) {
                if constexpr (std::is_same_v<T, std::int64_t>) {
                    if (static_cast<std::int64_t>(static_cast<double>(values[at])) != values[at]) {
                        return refuse(
                            ErrorCode::bad_value,
                            {.source = source()},
                            fmt::format(
                                "element [{}, {}] = {} is no double", row, column, values[at]),
                            "integers up to 2^53");
                    }
                }
                Result<void> added =
                    sink.add(row, column, std::complex<double>(convert(values[at])));
                if (!added) {
                    return added;
                }
            }
            report(static_cast<std::size_t>(columns()), context);
        }
        sink.flush();
        return {};
    }
    static std::complex<double> convert(std::complex<double> value) { return value; }
    static std::complex<double> convert(double value) { return value; }
    static std::complex<double> convert(std::int64_t value) { return static_cast<double>(value); }

    Array array_;
};

class NpyEntries : public EntrySource {
public:
    NpyEntries(std::string path, NpyHeader header)
        : path_(std::move(path)), header_(std::move(header)) {}

    const std::string& source() const override { return path_; }
    std::int64_t rows() const override { return header_.shape[0]; }
    std::int64_t columns() const override { return header_.shape[1]; }
    std::int64_t most_entries() const override { return header_.count; }
    double seconds() const override {
        return static_cast<double>(header_.count) / elements_per_second;
    }

    Result<void> for_each(const Each& each, const Context& context) override {
        const Result<std::unique_ptr<FileStream>> stream = open_file(path_);
        if (!stream) {
            return tl::unexpected(stream.error());
        }
        const Result<NpyHeader> header = read_npy_header(**stream);
        if (!header) {
            return tl::unexpected(header.error());
        }
        if (header->shape != header_.shape) {
            return refuse(ErrorCode::cannot_read, {.source = path_}, "the file has changed");
        }
        DenseSink sink(path_, each);
        std::vector<std::complex<double>> values(piece);
        const std::int64_t inner = header->shape[header->fortran_order ? 0 : 1];
        std::int64_t outer_at = 0;
        std::int64_t inner_at = 0;
        for (std::int64_t left = header->count; left > 0;) {
            const auto size = std::min<std::size_t>(piece, static_cast<std::size_t>(left));
            Result<void> done = read_elements(**stream, *header, std::span(values).first(size));
            for (std::size_t i = 0; done && i < size; ++i) {
                done = header->fortran_order ? sink.add(inner_at, outer_at, values[i])
                                             : sink.add(outer_at, inner_at, values[i]);
                if (++inner_at == inner) {
                    inner_at = 0;
                    ++outer_at;
                }
            }
            if (!done) {
                return done;
            }
            report(size, context);
            left -= static_cast<std::int64_t>(size);
        }
        sink.flush();
        return {};
    }

private:
    std::string path_;
    NpyHeader header_;
};

}  // namespace

Result<std::unique_ptr<EntrySource>> entries_of(Array array) {
    Result<void> checked = check_axes(array.source, array.shape);
    if (!checked) {
        return tl::unexpected(checked.error());
    }
    return std::make_unique<ArrayEntries>(std::move(array));
}

Result<std::unique_ptr<EntrySource>> open_npy_entries(const std::string& path) {
    const Result<std::unique_ptr<FileStream>> stream = open_file(path);
    if (!stream) {
        return tl::unexpected(stream.error());
    }
    const Result<NpyHeader> header = read_npy_header(**stream);
    if (!header) {
        return tl::unexpected(header.error());
    }
    if (header->kind == 'S') {
        return refuse(
            ErrorCode::wrong_type, {.source = path}, "the elements are strings", "numbers");
    }
    Result<void> checked = check_axes(path, header->shape);
    if (!checked) {
        return tl::unexpected(checked.error());
    }
    return std::make_unique<NpyEntries>(path, *header);
}

}  // namespace chainmark
