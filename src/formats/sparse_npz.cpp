#include "chainmark/formats/sparse_npz.hpp"

#include <algorithm>
#include <cmath>
#include <optional>

#include <fmt/format.h>

#include "chainmark/base/words.hpp"
#include "chainmark/formats/duplicates.hpp"
#include "chainmark/formats/npy.hpp"
#include "chainmark/formats/shown.hpp"
#include "chainmark/formats/zip_archive.hpp"

namespace chainmark {
namespace {

constexpr double entries_per_second = 3e7;  // for the progress alone
constexpr std::size_t piece = 1U << 15;

/// One member of the archive while its elements are read.
struct Member {
    std::unique_ptr<ByteStream> stream;
    NpyHeader header;
};

Result<Member> open_member(const ZipArchive& archive, const std::string& name) {
    const std::size_t index = archive.find(name + ".npy");
    if (index == archive.members().size()) {
        return refuse(ErrorCode::missing_key,
                      {.source = archive.source()},
                      "a sparse matrix without the array " + shown(name),
                      "a file written by scipy.sparse.save_npz");
    }
    Result<std::unique_ptr<ByteStream>> stream = archive.stream(index);
    if (!stream) {
        return tl::unexpected(stream.error());
    }
    Result<NpyHeader> header = read_npy_header(**stream);
    if (!header) {
        return tl::unexpected(header.error());
    }
    return Member{std::move(*stream), std::move(*header)};
}

/// A member of exactly `count` elements, or of any number where count is negative.
Result<Member> open_list(const ZipArchive& archive, const std::string& name, std::int64_t count) {
    Result<Member> member = open_member(archive, name);
    if (member &&
        (member->header.shape.size() != 1 || (count >= 0 && member->header.count != count))) {
        return refuse(
            ErrorCode::bad_syntax,
            {.source = archive.source()},
            fmt::format("the array {} is {}", shown(name), shape_text(member->header.shape)),
            count >= 0 ? "a list of " + counted(static_cast<std::size_t>(count), "element")
                       : "a list");
    }
    return member;
}

/// All of a short list of integers.
Result<std::vector<std::int64_t>> read_integers(Member& member, MemoryShare& memory) {
    Result<void> taken = memory.take(8.0 * static_cast<double>(member.header.count),
                                     member.stream->source(),
                                     "a list of integers");
    if (!taken) {
        return tl::unexpected(taken.error());
    }
    std::vector<std::int64_t> values(static_cast<std::size_t>(member.header.count));
    Result<void> read = read_elements(*member.stream, member.header, std::span(values));
    if (!read) {
        return tl::unexpected(read.error());
    }
    return values;
}

Result<std::string> read_format(const ZipArchive& archive) {
    Result<Member> member = open_member(archive, "format");
    if (!member) {
        return tl::unexpected(member.error());
    }
    if (member->header.kind != 'S' || member->header.count != 1) {
        return refuse(ErrorCode::bad_syntax,
                      {.source = archive.source()},
                      "the array 'format' is no word",
                      "a file written by scipy.sparse.save_npz");
    }
    std::string word(static_cast<std::size_t>(member->header.bytes), '\0');
    Result<std::size_t> got = member->stream->read(word);
    if (!got) {
        return tl::unexpected(got.error());
    }
    return word.substr(0, word.find('\0'));
}

class SparseNpz : public EntrySource {
public:
    SparseNpz(ZipArchive archive, std::string format, std::vector<std::int64_t> shape)
        : archive_(std::move(archive)), format_(std::move(format)), shape_(std::move(shape)) {}

    /// Reads what is kept in memory, and checks it.
    Result<void> prepare(const Context& context) {
        const Result<Member> data = open_list(archive_, "data", -1);
        if (!data) {
            return tl::unexpected(data.error());
        }
        count_ = data->header.count;
        return format_ == "coo" ? Result<void>{} : read_pointers(context);
    }

    const std::string& source() const override { return archive_.source(); }
    std::int64_t rows() const override { return shape_[0]; }
    std::int64_t columns() const override { return shape_[1]; }
    std::int64_t most_entries() const override { return count_; }
    double seconds() const override { return static_cast<double>(count_) / entries_per_second; }

    Result<void> for_each(const Each& each, const Context& context) override {
        OrderWatch order;
        EntryBlock block(each);
        Result<void> done = run(context, [&](const MatrixEntry& entry) {
            order.see(entry.row, entry.column);
            block.add(entry);
        });
        if (done) {
            block.flush();
            done = count_duplicates(order, context);
        }
        return done;
    }

private:
    bool by_rows() const { return format_ == "csr"; }

    Result<void> read_pointers(const Context& context) {
        memory_ = MemoryShare(context);
        const std::int64_t lines = shape_[by_rows() ? 0 : 1];
        Result<Member> member = open_list(archive_, "indptr", lines + 1);
        if (!member) {
            return tl::unexpected(member.error());
        }
        Result<std::vector<std::int64_t>> pointers = read_integers(*member, memory_);
        if (!pointers) {
            return tl::unexpected(pointers.error());
        }
        pointers_ = std::move(*pointers);
        if (pointers_.front() != 0 || pointers_.back() != count_ ||
            !std::is_sorted(pointers_.begin(), pointers_.end())) {
            return refuse(ErrorCode::bad_value,
                          {.source = source()},
                          "the array 'indptr' does not ascend from 0 to the number of entries",
                          "a file written by scipy.sparse.save_npz");
        }
        return {};
    }

    template <class With>
    Result<void> run(const Context& context, With&& with) const {
        const bool coo = format_ == "coo";
        Result<Member> data = open_list(archive_, "data", count_);
        Result<Member> first = open_list(archive_, coo ? "row" : "indices", count_);
        Result<Member> second = coo ? open_list(archive_, "col", count_) : Member{};
        for (const Result<Member>* member : {&data, &first, &second}) {
            if (!*member) {
                return tl::unexpected(member->error());
            }
        }
        std::vector<std::complex<double>> values(piece);
        std::vector<std::int64_t> one(piece);
        std::vector<std::int64_t> other(piece);
        std::size_t line = 0;
        for (std::int64_t at = 0; at < count_;) {
            poll(context);
            const auto size = std::min<std::size_t>(piece, static_cast<std::size_t>(count_ - at));
            Result<void> done = read_part(*data, std::span(values).first(size));
            if (done) {
                done = read_part(*first, std::span(one).first(size));
            }
            if (done && coo) {
                done = read_part(*second, std::span(other).first(size));
            }
            for (std::size_t i = 0; done && i < size; ++i, ++at) {
                while (!coo && pointers_[line + 1] <= at) {
                    ++line;
                }
                const MatrixEntry entry = coo ? MatrixEntry{one[i], other[i], values[i]}
                                              : entry_in(line, one[i], values[i]);
                done = check(entry, at);
                if (done) {
                    with(entry);
                }
            }
            if (!done) {
                return done;
            }
            if (context.progress != nullptr) {
                context.progress->finished(static_cast<double>(size) / entries_per_second);
            }
        }
        return {};
    }

    /// An entry of a compressed row or column.
    MatrixEntry entry_in(std::size_t line, std::int64_t place, std::complex<double> value) const {
        const auto outer = static_cast<std::int64_t>(line);
        return by_rows() ? MatrixEntry{outer, place, value} : MatrixEntry{place, outer, value};
    }

    template <class T>
    static Result<void> read_part(Member& member, std::span<T> to) {
        return read_elements(*member.stream, member.header, to);
    }

    Result<void> check(const MatrixEntry& entry, std::int64_t at) const {
        const bool inside =
            entry.row >= 0 && entry.row < rows() && entry.column >= 0 && entry.column < columns();
        const bool finite = std::isfinite(entry.value.real()) && std::isfinite(entry.value.imag());
        if (inside && finite) {
            return {};
        }
        return refuse(ErrorCode::bad_value,
                      {.source = source()},
                      fmt::format("entry {} at [{}, {}] is {}",
                                  at,
                                  entry.row,
                                  entry.column,
                                  inside ? "not finite" : "outside of the matrix"),
                      fmt::format("finite entries of a {} x {} matrix", rows(), columns()));
    }

    Result<void> count_duplicates(const OrderWatch& order, const Context& context) {
        if (order.ascending() || counted_) {
            return {};
        }
        counted_ = true;
        std::optional<PlaceList> places = PlaceList::make(rows(), columns(), count_, context);
        if (!places) {
            warn("whether places occur twice was not looked for: the memory budget is too small");
            return {};
        }
        Context silent = context;
        silent.progress = nullptr;  // a pass that was not announced
        Result<void> done =
            run(silent, [&](const MatrixEntry& entry) { places->add(entry.row, entry.column); });
        const std::int64_t repeated = done ? places->repeated() : 0;
        if (repeated > 0) {
            warn(fmt::format("{} at a place that occurs before; they are added up",
                             counted(static_cast<std::size_t>(repeated), "value")));
        }
        return done;
    }

    ZipArchive archive_;
    std::string format_;
    std::vector<std::int64_t> shape_;
    std::int64_t count_ = 0;
    std::vector<std::int64_t> pointers_;
    MemoryShare memory_;
    bool counted_ = false;
};

}  // namespace

bool is_sparse_npz(const std::string& path) {
    const Result<ZipArchive> archive = ZipArchive::open(path);
    if (!archive) {
        return false;
    }
    const auto has = [&](const char* name) {
        return archive->find(name) < archive->members().size();
    };
    return has("format.npy") && has("shape.npy") && has("data.npy");
}

Result<std::unique_ptr<EntrySource>> open_sparse_npz(const std::string& path,
                                                     const Context& context) {
    Result<ZipArchive> archive = ZipArchive::open(path);
    if (!archive) {
        return tl::unexpected(archive.error());
    }
    const Result<std::string> format = read_format(*archive);
    if (!format) {
        return tl::unexpected(format.error());
    }
    if (*format != "csr" && *format != "csc" && *format != "coo") {
        return refuse(ErrorCode::wrong_type,
                      {.source = path},
                      "the sparse format is " + shown(*format),
                      "csr, csc or coo: save matrix.tocsr()");
    }
    Result<Member> member = open_list(*archive, "shape", 2);
    if (!member) {
        return tl::unexpected(member.error());
    }
    MemoryShare memory(context);
    Result<std::vector<std::int64_t>> shape = read_integers(*member, memory);
    if (!shape) {
        return tl::unexpected(shape.error());
    }
    constexpr std::int64_t largest = std::int64_t{1} << 62;
    if (std::any_of(
            shape->begin(), shape->end(), [](std::int64_t n) { return n < 0 || n > largest; })) {
        return refuse(ErrorCode::bad_value,
                      {.source = path},
                      "the shape is " + shape_text(*shape),
                      "two positive numbers");
    }
    auto source = std::make_unique<SparseNpz>(std::move(*archive), *format, std::move(*shape));
    Result<void> prepared = source->prepare(context);
    if (!prepared) {
        return tl::unexpected(prepared.error());
    }
    return source;
}

}  // namespace chainmark
