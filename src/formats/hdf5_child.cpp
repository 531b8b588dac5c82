#include "chainmark/formats/hdf5_child.hpp"

#include <algorithm>
#include <array>
#include <cctype>
#include <complex>
#include <limits>
#include <optional>
#include <utility>
#include <vector>

#include <fmt/format.h>
#include <fmt/ranges.h>
#include <hdf5.h>
#include <nlohmann/json.hpp>

namespace chainmark {
namespace {

using Dims = std::vector<hsize_t>;

/// An identifier of the library that is closed with the function of its kind.
class Handle {
public:
    Handle(hid_t id, herr_t (*close)(hid_t)) : id_(id), close_(close) {}
    Handle(Handle&& other) noexcept : id_(std::exchange(other.id_, -1)), close_(other.close_) {}
    Handle(const Handle&) = delete;
    Handle& operator=(const Handle&) = delete;
    Handle& operator=(Handle&&) = delete;
    ~Handle() {
        if (id_ >= 0) {
            close_(id_);
        }
    }
    hid_t get() const { return id_; }
    bool valid() const { return id_ >= 0; }

private:
    hid_t id_;
    herr_t (*close_)(hid_t);
};

struct Failure {
    ErrorCode code = ErrorCode::bad_syntax;
    std::string found;
    std::string allowed = "a complete HDF5 file";
};

std::string as_json(const Failure& failure) {
    const nlohmann::json message = {{"code", static_cast<int>(failure.code)},
                                    {"found", failure.found},
                                    {"allowed", failure.allowed}};
    return message.dump(-1, ' ', true, nlohmann::json::error_handler_t::replace);
}

/// What the library says deepest down.
std::string library_text() {
    std::string text = "unknown reason";
    const auto keep = [](unsigned depth, const H5E_error2_t* error, void* to) -> herr_t {
        if (depth == 0 && error->desc != nullptr) {
            *static_cast<std::string*>(to) = error->desc;
        }
        return 0;
    };
    H5Ewalk2(H5E_DEFAULT, H5E_WALK_UPWARD, keep, &text);
    return text;
}

Failure library_failure(const std::string& what) {
    return {ErrorCode::bad_syntax, what + ": " + library_text()};
}

Handle open_hdf5(const std::string& path) {
    H5Eset_auto2(H5E_DEFAULT, nullptr, nullptr);
    H5PLset_loading_state(0);  // no filters from elsewhere
    return {H5Fopen(path.c_str(), H5F_ACC_RDONLY, H5P_DEFAULT), H5Fclose};
}

std::string lower(std::string text) {
    std::transform(text.begin(), text.end(), text.begin(), [](unsigned char c) {
        return static_cast<char>(std::tolower(c));
    });
    return text;
}

std::string member_name(hid_t type, unsigned member) {
    char* raw = H5Tget_member_name(type, member);
    std::string name = raw == nullptr ? "" : raw;
    H5free_memory(raw);
    return name;
}

bool is_complex(hid_t type) {
    if (H5Tget_class(type) != H5T_COMPOUND || H5Tget_nmembers(type) != 2 ||
        H5Tget_member_class(type, 0) != H5T_FLOAT || H5Tget_member_class(type, 1) != H5T_FLOAT) {
        return false;
    }
    const std::string real = lower(member_name(type, 0));
    const std::string imaginary = lower(member_name(type, 1));
    using Names = std::pair<const char*, const char*>;
    constexpr std::array<Names, 4> known{
        Names{"r", "i"}, Names{"re", "im"}, Names{"real", "imag"}, Names{"real", "imaginary"}};
    return std::any_of(known.begin(), known.end(), [&](const Names& names) {
        return real == names.first && imaginary == names.second;
    });
}

std::string type_text(hid_t type) {
    const std::size_t size = H5Tget_size(type);
    switch (H5Tget_class(type)) {
        case H5T_INTEGER:
            return fmt::format("HDF5 integer of {} bytes", size);
        case H5T_FLOAT:
            return fmt::format("HDF5 float of {} bytes", size);
        case H5T_ENUM:
            return "HDF5 enumeration";
        case H5T_COMPOUND:
            return is_complex(type) ? fmt::format("HDF5 complex number of {} bytes", size)
                                    : "HDF5 compound";
        case H5T_STRING:
            return "HDF5 string";
        case H5T_REFERENCE:
            return "HDF5 reference";
        case H5T_VLEN:
            return "HDF5 list of variable length";
        case H5T_ARRAY:
            return "HDF5 array type";
        default:
            return "HDF5 opaque type";
    }
}

/// How the elements go out: NPY's word for the type, and the library's for this machine's memory.
struct Transfer {
    std::string descr;
    hid_t type = H5T_NATIVE_DOUBLE;
    std::size_t bytes = 8;
    std::optional<Handle> owned;
};

std::optional<Transfer> transfer_of(hid_t type) {
    const H5T_class_t kind = H5Tget_class(type);
    const bool is_unsigned = kind == H5T_INTEGER && H5Tget_sign(type) == H5T_SGN_NONE;
    const std::size_t size = H5Tget_size(type);
    if (kind == H5T_FLOAT) {
        return Transfer{.descr = "<f8", .owned = std::nullopt};
    }
    if ((kind == H5T_INTEGER && size <= 8) || kind == H5T_ENUM) {
        return is_unsigned && size == 8
                   ? Transfer{.descr = "<u8", .type = H5T_NATIVE_UINT64, .owned = std::nullopt}
                   : Transfer{.descr = "<i8", .type = H5T_NATIVE_INT64, .owned = std::nullopt};
    }
    if (is_complex(type)) {
        Handle pair(H5Tcreate(H5T_COMPOUND, 16), H5Tclose);
        H5Tinsert(pair.get(), member_name(type, 0).c_str(), 0, H5T_NATIVE_DOUBLE);
        H5Tinsert(pair.get(), member_name(type, 1).c_str(), 8, H5T_NATIVE_DOUBLE);
        const hid_t id = pair.get();
        return Transfer{.descr = "<c16", .type = id, .bytes = 16, .owned = std::move(pair)};
    }
    return std::nullopt;
}

std::optional<Dims> dims_of(hid_t dataset) {
    const Handle space(H5Dget_space(dataset), H5Sclose);
    const int rank = H5Sget_simple_extent_ndims(space.get());
    if (rank < 0 || H5Sget_simple_extent_type(space.get()) == H5S_NULL) {
        return std::nullopt;
    }
    Dims dims(static_cast<std::size_t>(rank));
    if (rank > 0 && H5Sget_simple_extent_dims(space.get(), dims.data(), nullptr) < 0) {
        return std::nullopt;
    }
    return dims;
}

/// Refuses data that lie in other files, and chunks larger than the memory.
std::optional<Failure> check_storage(hid_t dataset, std::size_t bytes, double memory) {
    const Handle plan(H5Dget_create_plist(dataset), H5Pclose);
    const H5D_layout_t layout = H5Pget_layout(plan.get());
    if (H5Pget_external_count(plan.get()) > 0 || layout == H5D_VIRTUAL) {
        return Failure{ErrorCode::wrong_type,
                       "the data set lies in other files",
                       "a data set that holds its own numbers"};
    }
    if (layout == H5D_CHUNKED) {
        Dims chunk(H5S_MAX_RANK);
        const int rank = H5Pget_chunk(plan.get(), H5S_MAX_RANK, chunk.data());
        double size = static_cast<double>(bytes);
        for (int axis = 0; axis < rank; ++axis) {
            size *= static_cast<double>(chunk[static_cast<std::size_t>(axis)]);
        }
        if (3 * size > memory) {
            return Failure{ErrorCode::over_memory,
                           fmt::format("a chunk of {:.3g} bytes, which is read as a whole", size),
                           "smaller chunks or a larger memory budget"};
        }
    }
    return std::nullopt;
}

std::string npy_header(const std::string& descr, const Dims& dims) {
    std::string dict = fmt::format("{{'descr': '{}', 'fortran_order': False, 'shape': ({}{})}}\n",
                                   descr,
                                   fmt::join(dims, ", "),
                                   dims.size() == 1 ? "," : "");
    std::string header = "\x93NUMPY";
    header += {'\x02', '\x00'};
    for (unsigned shift = 0; shift < 32; shift += 8) {
        header += static_cast<char>((dict.size() >> shift) & 0xffU);
    }
    return header + dict;
}

/// A data set cut into blocks that lie one after the other in row-major order: single places of
/// the first axes, a run of the next one, all of the others.
class Blocks {
public:
    Blocks(Dims dims, std::size_t most) : dims_(std::move(dims)), start_(dims_.size(), 0) {
        count_.assign(dims_.size(), 1);
        std::size_t size = 1;
        axis_ = dims_.size();
        while (axis_ > 0 && dims_[axis_ - 1] <= most / size) {
            --axis_;
            count_[axis_] = dims_[axis_];
            size *= dims_[axis_];
        }
        if (axis_ > 0) {
            --axis_;
            run_ = std::max<std::size_t>(1, most / size);
            count_[axis_] = run_;
        }
        inner_ = size;
    }

    /// Elements of the block at hand.
    std::size_t size() const { return dims_.empty() || run_ == 0 ? inner_ : inner_ * count_now(); }
    hid_t select(hid_t space) const {
        Dims count = count_;
        if (run_ > 0) {
            count[axis_] = count_now();
        }
        return dims_.empty()
                   ? H5Sselect_all(space)
                   : H5Sselect_hyperslab(
                         space, H5S_SELECT_SET, start_.data(), nullptr, count.data(), nullptr);
    }
    bool next() {
        if (run_ == 0) {
            return false;
        }
        start_[axis_] += run_;
        for (std::size_t axis = axis_; start_[axis] >= dims_[axis]; --axis) {
            start_[axis] = 0;
            if (axis == 0) {
                return false;
            }
            ++start_[axis - 1];
        }
        return true;
    }

private:
    hsize_t count_now() const { return std::min<hsize_t>(run_, dims_[axis_] - start_[axis_]); }

    Dims dims_;
    Dims start_;
    Dims count_;
    std::size_t axis_ = 0;  ///< the one that is cut into runs, where run_ > 0
    std::size_t run_ = 0;
    std::size_t inner_ = 1;  ///< elements behind one place of that axis
};

/// Writes all elements; false where the library fails.
bool write_elements(hid_t dataset,
                    const Transfer& transfer,
                    const Dims& dims,
                    const ByteSink& sink) {
    constexpr std::size_t buffer_bytes = 1U << 24;
    if (std::find(dims.begin(), dims.end(), hsize_t{0}) != dims.end()) {
        return true;
    }
    Blocks blocks(dims, buffer_bytes / transfer.bytes);
    std::vector<char> buffer(buffer_bytes);
    const Handle space(H5Dget_space(dataset), H5Sclose);
    do {
        const hsize_t size = blocks.size();
        const Handle memory(H5Screate_simple(1, &size, nullptr), H5Sclose);
        if (blocks.select(space.get()) < 0 ||
            H5Dread(dataset, transfer.type, memory.get(), space.get(), H5P_DEFAULT, buffer.data()) <
                0) {
            return false;
        }
        if (!sink({buffer.data(), size * transfer.bytes})) {
            return true;  // nobody listens
        }
    } while (blocks.next());
    return true;
}

/// The access properties: a cache that holds the chunks of one block, so that none is unpacked
/// twice.
Handle access_plan(double memory) {
    constexpr double usual = 64.0 * 1024 * 1024;
    constexpr std::size_t slots = 12421;  // a prime, as the library asks for
    Handle plan(H5Pcreate(H5P_DATASET_ACCESS), H5Pclose);
    H5Pset_chunk_cache(
        plan.get(), slots, static_cast<std::size_t>(std::min(usual, memory / 4)), 1.0);
    return plan;
}

std::optional<Failure> write_array(const std::string& path,
                                   const std::string& name,
                                   double memory,
                                   const ByteSink& sink) {
    const Handle file = open_hdf5(path);
    if (!file.valid()) {
        return library_failure("the file cannot be opened");
    }
    const Handle plan = access_plan(memory);
    const Handle dataset(H5Dopen2(file.get(), name.c_str(), plan.get()), H5Dclose);
    if (!dataset.valid()) {
        return Failure{ErrorCode::missing_key,
                       "there is no data set of this name that can be opened",
                       "a name from the file's list of data sets"};
    }
    const Handle type(H5Dget_type(dataset.get()), H5Tclose);
    const std::optional<Transfer> transfer = transfer_of(type.get());
    if (!transfer) {
        return Failure{ErrorCode::wrong_type,
                       "the elements are of type " + type_text(type.get()),
                       "numbers, or compounds (r, i) for complex ones"};
    }
    const std::optional<Dims> dims = dims_of(dataset.get());
    if (!dims) {
        return Failure{ErrorCode::wrong_type, "the data set has no elements", "numbers"};
    }
    if (std::optional<Failure> refused = check_storage(
            dataset.get(), std::max(H5Tget_size(type.get()), transfer->bytes), memory)) {
        return refused;
    }
    const std::string start = "A" + npy_header(transfer->descr, *dims);
    if (!sink(start) || write_elements(dataset.get(), *transfer, *dims, sink)) {
        return std::nullopt;
    }
    // The elements have begun: only breaking off can tell.
    throw std::runtime_error(library_text());
}

struct Listing {
    nlohmann::json entries = nlohmann::json::array();
    std::size_t names_bytes = 0;
};

herr_t list_object(hid_t root, const char* name, const H5O_info_t* info, void* to) {
    constexpr std::size_t most_bytes = 1U << 24;
    auto& listing = *static_cast<Listing*>(to);
    if (info->type != H5O_TYPE_DATASET) {
        return 0;
    }
    listing.names_bytes += std::char_traits<char>::length(name) + 100;
    if (listing.names_bytes > most_bytes) {
        return -1;
    }
    const Handle dataset(H5Dopen2(root, name, H5P_DEFAULT), H5Dclose);
    const std::optional<Dims> dims = dataset.valid() ? dims_of(dataset.get()) : std::nullopt;
    if (!dims) {
        listing.entries.push_back(
            {{"name", name}, {"type", "no elements"}, {"shape", {0}}, {"readable", false}});
        return 0;
    }
    const Handle type(H5Dget_type(dataset.get()), H5Tclose);
    constexpr hsize_t largest = std::numeric_limits<std::int64_t>::max();
    std::vector<std::int64_t> shape;
    for (const hsize_t length : *dims) {
        shape.push_back(static_cast<std::int64_t>(std::min(length, largest)));
    }
    listing.entries.push_back({{"name", name},
                               {"type", type_text(type.get())},
                               {"shape", shape},
                               {"readable", transfer_of(type.get()).has_value()}});
    return 0;
}

}  // namespace

void write_hdf5_list(const std::string& path, const ByteSink& sink) {
    const Handle file = open_hdf5(path);
    Listing listing;
    if (!file.valid()) {
        sink(as_json(library_failure("the file cannot be opened")));
    } else if (H5Ovisit2(file.get(),
                         H5_INDEX_NAME,
                         H5_ITER_NATIVE,
                         list_object,
                         &listing,
                         H5O_INFO_BASIC) < 0) {
        sink(as_json(library_failure("the data sets cannot be listed")));
    } else {
        sink(listing.entries.dump(-1, ' ', true, nlohmann::json::error_handler_t::replace));
    }
}

void write_hdf5_array(const std::string& path,
                      const std::string& name,
                      double memory,
                      const ByteSink& sink) {
    const std::optional<Failure> failure = write_array(path, name, memory, sink);
    if (failure) {
        sink("E" + as_json(*failure));
    }
}

}  // namespace chainmark
