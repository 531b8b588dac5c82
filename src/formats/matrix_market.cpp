#include "chainmark/formats/matrix_market.hpp"

#include <array>
#include <optional>

#include <fmt/format.h>

#include "chainmark/base/words.hpp"
#include "chainmark/formats/duplicates.hpp"
#include "chainmark/formats/matrix_market_header.hpp"
#include "chainmark/formats/shown.hpp"
#include "chainmark/formats/stored_entries.hpp"

namespace chainmark {
namespace {

using Symmetry = MatrixMarketHeader::Symmetry;

constexpr double bytes_per_second = 2e8;  // of unpacked text; measured, for the progress alone

/// Which triangles of a symmetric kind are stored.
struct Triangles {
    bool lower = false;
    bool upper = false;
    bool both() const { return lower && upper; }
};

class MatrixMarketSource : public EntrySource {
public:
    MatrixMarketSource(std::string path, const MatrixMarketHeader& header, double bytes)
        : path_(std::move(path)), header_(header), bytes_(bytes) {}

    const std::string& source() const override { return path_; }
    std::int64_t rows() const override { return header_.rows; }
    std::int64_t columns() const override { return header_.columns; }
    std::int64_t most_entries() const override {
        return header_.stored * (header_.symmetry == Symmetry::general ? 1 : 2);
    }
    double seconds() const override {
        return bytes_ / bytes_per_second * (header_.symmetry == Symmetry::general ? 1 : 2);
    }

    Result<void> for_each(const Each& each, const Context& context) override {
        Result<void> done = survey(context);
        OrderWatch order;
        EntryBlock block(each);
        if (done) {
            done = run(context, [&](const MatrixEntry& entry, int /*line*/) {
                order.see(entry.row, entry.column);
                give(entry, block);
            });
        }
        if (done) {
            block.flush();
            done = count_duplicates(order, context);
        }
        return done;
    }

private:
    /// Calls with(entry, line) for every stored entry.
    template <class With>
    Result<void> run(const Context& context, With&& with) const {
        Result<std::unique_ptr<FileStream>> stream = open_file(path_);
        if (!stream) {
            return tl::unexpected(stream.error());
        }
        LineReader lines(std::move(*stream));
        const Result<MatrixMarketHeader> header = read_matrix_market_header(lines);
        if (!header) {
            return tl::unexpected(header.error());
        }
        if (*header != header_) {
            return refuse(ErrorCode::cannot_read, {.source = path_}, "the file has changed");
        }
        StoredEntries stored(lines, *header);
        MatrixEntry entry;
        constexpr std::int64_t often = 1 << 18;
        double reported = 0;
        for (std::int64_t count = 1;; ++count) {
            Result<bool> more = stored.next(entry);
            if (!more) {
                return tl::unexpected(more.error());
            }
            if (!*more) {
                break;
            }
            with(entry, stored.line());
            if (count % often == 0) {
                poll(context);
                report(lines.stream().bytes_done(), reported, context);
            }
        }
        report(bytes_, reported, context);
        return {};
    }

    static void report(double done, double& reported, const Context& context) {
        if (context.progress != nullptr && done > reported) {
            context.progress->finished((done - reported) / bytes_per_second);
            reported = done;
        }
    }

    /// Which triangles a symmetric kind stores: mirroring one that stands there would double it.
    Result<void> survey(const Context& context) {
        if (header_.symmetry == Symmetry::general || !header_.coordinate || surveyed_) {
            return {};
        }
        Result<void> done = run(context, [this](const MatrixEntry& entry, int line) {
            triangles_.lower = triangles_.lower || entry.row > entry.column;
            if (entry.row < entry.column && !triangles_.upper) {
                triangles_.upper = true;
                first_upper_ = line;
            }
        });
        surveyed_ = done.has_value();
        if (done && triangles_.both()) {
            warn(
                fmt::format("line {}: both triangles are stored though the file says that one is; "
                            "the entries are taken as they stand and not mirrored",
                            first_upper_));
        } else if (done && triangles_.upper) {
            warn(
                fmt::format("line {}: the upper triangle is stored, where the lower is usual; it "
                            "is mirrored",
                            first_upper_));
        }
        return done;
    }

    void give(const MatrixEntry& entry, EntryBlock& block) const {
        block.add(entry);
        if (header_.symmetry == Symmetry::general || triangles_.both() ||
            entry.row == entry.column) {
            return;
        }
        MatrixEntry mirrored{entry.column, entry.row, entry.value};
        if (header_.symmetry == Symmetry::skew) {
            mirrored.value = -mirrored.value;
        } else if (header_.symmetry == Symmetry::hermitian) {
            mirrored.value = std::conj(mirrored.value);
        }
        block.add(mirrored);
    }

    Result<void> count_duplicates(const OrderWatch& order, const Context& context) {
        if (order.ascending() || counted_) {
            return {};
        }
        counted_ = true;
        std::optional<PlaceList> places =
            PlaceList::make(header_.rows, header_.columns, header_.stored, context);
        if (!places) {
            warn("whether places occur twice was not looked for: the memory budget is too small");
            return {};
        }
        Context silent = context;
        silent.progress = nullptr;  // a pass that was not announced
        Result<void> done = run(silent, [&](const MatrixEntry& entry, int /*line*/) {
            places->add(entry.row, entry.column);
        });
        const std::int64_t repeated = done ? places->repeated() : 0;
        if (repeated > 0) {
            warn(fmt::format("{} at a place that occurs before; they are added up",
                             counted(static_cast<std::size_t>(repeated), "value")));
        }
        return done;
    }

    std::string path_;
    MatrixMarketHeader header_;
    double bytes_;
    Triangles triangles_;
    int first_upper_ = 0;
    bool surveyed_ = false;
    bool counted_ = false;
};

}  // namespace

Result<std::unique_ptr<EntrySource>> open_matrix_market(const std::string& path) {
    Result<std::unique_ptr<FileStream>> stream = open_file(path);
    if (!stream) {
        return tl::unexpected(stream.error());
    }
    const double bytes = (*stream)->bytes_on_disk();
    LineReader lines(std::move(*stream));
    const Result<MatrixMarketHeader> header = read_matrix_market_header(lines);
    if (!header) {
        return tl::unexpected(header.error());
    }
    return std::make_unique<MatrixMarketSource>(path, *header, bytes);
}

bool is_matrix_market(const std::string& path) {
    const Result<std::unique_ptr<FileStream>> stream = open_file(path);
    std::array<char, 14> start{};
    if (!stream || (*stream)->read(start).value_or(0) < start.size()) {
        return false;
    }
    constexpr std::string_view banner = "%%matrixmarket";
    for (std::size_t i = 0; i < banner.size(); ++i) {
        const char c = start[i];
        if ((c >= 'A' && c <= 'Z' ? static_cast<char>(c - 'A' + 'a') : c) != banner[i]) {
            return false;
        }
    }
    return true;
}

}  // namespace chainmark
