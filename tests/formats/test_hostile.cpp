#include <chrono>
#include <random>

#include <zlib.h>

#include "chainmark/formats/array_file.hpp"
#include "chainmark/formats/entry_source.hpp"
#include "chainmark/formats/json.hpp"
#include "chainmark/formats/printed_digits.hpp"
#include "chainmark/formats/table.hpp"
#include "formats/allocation_watch.hpp"
#include "formats/support.hpp"

using namespace chainmark;
using namespace chainmark::test;

namespace {

constexpr double budget = 4.0 * 1024 * 1024;
// Buffers of fixed size, which no file can make larger: pieces of 1 MiB, error texts.
constexpr double beside_budget = 6.0 * 1024 * 1024;

enum class Kind { text, json, arrays, matrix };

/// Reads a file with everything that reads its kind, uses what comes out; whether it was read.
bool read_file(const std::string& path, Kind kind, const Context& context) {
    if (kind == Kind::text || kind == Kind::json) {
        bool read = false;
        {
            const auto table = read_table(path, context);
            read = table.has_value();
            for (std::size_t column = 0; read && column < table->names().size(); ++column) {
                static_cast<void>(printed_digits(*table, column));
                for (std::size_t row = 0; row < table->rows() && row < 20; ++row) {
                    static_cast<void>(table->number(row, column));
                    static_cast<void>(table->place(row, column));
                }
            }
        }
        return (kind == Kind::json && read_json(path, context).has_value()) || read;
    }
    if (kind == Kind::arrays) {
        return read_arrays(path, context).has_value();
    }
    const auto source = open_entries(path, "", context);
    if (!source) {
        return false;
    }
    const std::int64_t rows = (*source)->rows();
    const std::int64_t columns = (*source)->columns();
    bool inside = true;
    const auto done = (*source)->for_each(
        [&](std::span<const MatrixEntry> block) {
            for (const MatrixEntry& entry : block) {
                inside = inside && entry.row >= 0 && entry.row < rows && entry.column >= 0 &&
                         entry.column < columns && std::isfinite(std::abs(entry.value));
            }
        },
        context);
    CHECK(inside);
    return done.has_value();
}

/// As `read_file`, and checks that the budget was kept and all of it given back.
bool read_watched(const std::string& path, Kind kind) {
    const Context context = with_memory(budget);
    const std::size_t before = allocated_now();
    forget_peak();
    const bool read = read_file(path, kind, context);
    const auto peak = static_cast<double>(allocated_at_peak() - before);
    CHECK_MESSAGE(peak < budget + beside_budget, path, " took ", peak, " bytes");
    CHECK(context.memory->take(budget).has_value());
    return read;
}

struct Seed {
    const char* file;
    Kind kind;
};

const Seed seeds[] = {
    {"table.csv", Kind::text},
    {"table.tsv", Kind::text},
    {"table.txt", Kind::text},
    {"table.csv.gz", Kind::text},
    {"records.json", Kind::json},
    {"columns.json", Kind::json},
    {"real.npy", Kind::arrays},
    {"complex_big.npy", Kind::arrays},
    {"version3.npy", Kind::arrays},
    {"plain.npz", Kind::arrays},
    {"packed.npz", Kind::arrays},
    {"general.mtx", Kind::matrix},
    {"hermitian.mtx", Kind::matrix},
    {"symmetric_array.mtx", Kind::matrix},
    {"general.mtx.gz", Kind::matrix},
    {"general_csr.npz", Kind::matrix},
    {"general_coo.npz", Kind::matrix},
    {"complex_general.npy", Kind::matrix},
};

/// The bytes of a seed: NumPy's files, and text made here.
std::string seed_bytes(const std::string& name) {
    const std::string rows = "8,1.0,-3.651093408937176\n10,1.0,\"-4.515446354\"\n12,0.5,(1,2)\n";
    if (name == "table.csv") {
        return "# made here\nsites,h,E\n" + rows;
    }
    if (name == "table.tsv") {
        return "sites\th\tE\n8\t1.0\t-3.65\n10\t\t-4.5e0\n";
    }
    if (name == "table.txt") {
        return "#  sites  h   E\n  8 1.0  -3.65D+00\n 10 0.5 nan # note\n";
    }
    if (name == "table.csv.gz") {
        const Folder folder;
        const std::string path = folder / name;
        gzFile file = gzopen(path.c_str(), "wb");
        gzputs(file, ("sites,h,E\n" + rows + rows + rows).c_str());
        gzclose(file);
        return content(path);
    }
    if (name == "records.json") {
        return R"([{"sites": 8, "z": [0.5, -1e-3], "complex": true, "l": [[1, 2], [3, 4]]},)"
               "\n"
               R"( {"sites": 10, "n\u0061me": "x\"y", "E": NaN, "p": {"h": null}}])";
    }
    if (name == "columns.json") {
        return R"({"sites": [8, 10], "E": [-3.5, -4.5], "c": [[1, 2], [3, 4]], "complex": ["c"]})";
    }
    return content(python_files() / name);
}

/// One change of the kinds that break readers.
void mutate(std::string& bytes, std::mt19937_64& random) {
    const auto below = [&](std::size_t n) {
        return n == 0 ? 0 : static_cast<std::size_t>(random() % n);
    };
    static const std::string pieces[] = {"99999999999999999999",
                                         "-1",
                                         "0",
                                         "\n",
                                         "\"",
                                         "[",
                                         "]",
                                         "{",
                                         "nan",
                                         "1e999",
                                         std::string(4, '\0'),
                                         "\xff\xff\xff\xff",
                                         ",",
                                         "(",
                                         "%",
                                         "#",
                                         "\x7f\xff",
                                         "'shape': (9,9),",
                                         ";"};
    const std::size_t at = below(bytes.size());
    switch (random() % 6) {
        case 0:
            if (!bytes.empty()) {
                bytes[at] =
                    static_cast<char>(static_cast<unsigned char>(bytes[at]) ^ (1U << below(8)));
            }
            break;
        case 1:
            if (!bytes.empty()) {
                bytes[at] = static_cast<char>(random() & 0xff);
            }
            break;
        case 2:
            bytes.erase(at, below(16) + 1);
            break;
        case 3:
            bytes.insert(at, pieces[below(std::size(pieces))]);
            break;
        case 4: {
            const std::string& piece = pieces[below(std::size(pieces))];
            bytes.replace(at, piece.size(), piece);
            break;
        }
        default:
            bytes.insert(below(bytes.size()), bytes.substr(at, below(64)));
    }
}

/// More rounds for a longer search: CHAINMARK_FUZZ_ROUNDS=100000.
int rounds(int usual) {
    const char* asked = std::getenv("CHAINMARK_FUZZ_ROUNDS");
    return asked == nullptr ? usual : std::atoi(asked);
}

std::string gzip_of_zeros(const std::string& path,
                          int mebibytes,
                          const std::string& start,
                          char fill) {
    gzFile file = gzopen(path.c_str(), "wb9");
    gzwrite(file, start.data(), static_cast<unsigned>(start.size()));
    const std::string piece(1U << 20, fill);
    for (int i = 0; i < mebibytes; ++i) {
        gzwrite(file, piece.data(), static_cast<unsigned>(piece.size()));
    }
    gzclose(file);
    return path;
}

/// Changes a field of the central directory's first entry, which starts with PK\1\2.
std::string with_directory_field(std::string zip, std::size_t offset, std::uint32_t value) {
    const std::size_t entry = zip.find("PK\x01\x02");
    for (std::size_t i = 0; i < 4; ++i) {
        zip.at(entry + offset + i) = static_cast<char>(value >> (8 * i) & 0xffU);
    }
    return zip;
}

}  // namespace

TEST_CASE("seeds are read as they are") {
    const Folder folder;
    for (const Seed& seed : seeds) {
        CAPTURE(std::string(seed.file));
        CHECK(read_watched(put(folder / seed.file, seed_bytes(seed.file)), seed.kind));
    }
}

TEST_CASE("files cut off at every byte are errors, or short of nothing that matters") {
    const Folder folder;
    for (const Seed& seed : seeds) {
        const std::string bytes = seed_bytes(seed.file);
        const bool binary =
            seed.kind == Kind::arrays || std::string(seed.file).find(".np") != std::string::npos;
        const std::size_t step = bytes.size() / 700 + 1;
        for (std::size_t size = 0; size < bytes.size(); size += step) {
            const bool read =
                read_watched(put(folder / seed.file, bytes.substr(0, size)), seed.kind);
            CHECK_MESSAGE(
                !(read && binary), seed.file, " was read from its first ", size, " bytes");
        }
    }
}

TEST_CASE("HDF5 files cut off are errors" * doctest::skip(!has_hdf5())) {
    const Folder folder;
    const std::string bytes = content(python_files() / "small.h5");
    for (std::size_t size = 0; size < bytes.size(); size += bytes.size() / 40 + 1) {
        CHECK_FALSE(read_watched(put(folder / "x.h5", bytes.substr(0, size)), Kind::arrays));
    }
}

TEST_CASE("bombs are refused before they unpack") {
    const Folder folder;
    const auto start = std::chrono::steady_clock::now();
    CHECK_FALSE(read_watched(gzip_of_zeros(folder / "b.csv.gz", 64, "a,b\n", ' '), Kind::text));
    CHECK_FALSE(read_watched(
        gzip_of_zeros(
            folder / "b.mtx.gz", 64, "%%MatrixMarket matrix array real general\n9 9\n", '0'),
        Kind::matrix));
    // 8 TB claimed, in a file of unknown size
    std::string header = "{'descr': '<f8', 'fortran_order': True, 'shape': (1000000, 1000000)}";
    header = std::string("\x93NUMPY\x01\x00", 8) + static_cast<char>(header.size()) + '\0' + header;
    check_refused(
        read_arrays(gzip_of_zeros(folder / "b.npy", 8, header, '\0'), with_memory(budget)),
        "of memory");
    // 80 MB of zeros in 80 KB
    const std::string many = folder / "make.py";
    put(many, "import sys, numpy; numpy.savez_compressed(sys.argv[1], a=numpy.zeros(10**7))");
    REQUIRE(std::system(
                (std::string(CHAINMARK_PYTHON) + " " + many + " " + folder / "b.npz").c_str()) ==
            0);
    check_refused(read_arrays(folder / "b.npz", with_memory(budget)), "of memory");
    const std::chrono::duration<double> took = std::chrono::steady_clock::now() - start;
    CHECK(took.count() < 60);
}

TEST_CASE("zip archives that lie about sizes and checksums") {
    constexpr std::size_t checksum = 16;
    constexpr std::size_t packed = 20;
    constexpr std::size_t unpacked = 24;
    const Folder folder;
    const auto refused = [&](const char* file, std::size_t field, std::uint32_t value) {
        const std::string zip = with_directory_field(content(python_files() / file), field, value);
        CHECK_FALSE(read_watched(put(folder / "x.npz", zip), Kind::arrays));
    };
    refused("plain.npz", checksum, 1);
    refused("packed.npz", checksum, 1);
    for (const std::uint32_t value : {0U, 1U, 200U, 300U, 0x7fffffffU, 0xfffffffeU}) {
        refused("plain.npz", unpacked, value);
        refused("packed.npz", unpacked, value);
        refused("plain.npz", packed, value);
    }
    // A deflated stream knows its own end: with more bytes claimed than it has, the numbers and
    // their checksum are still the true ones.
    for (const std::uint32_t value : {0U, 1U, 20U}) {
        refused("packed.npz", packed, value);
    }
    for (const std::uint32_t value : {2000U, 0x7fffffffU}) {
        const std::string zip =
            with_directory_field(content(python_files() / "packed.npz"), packed, value);
        const auto arrays = read_arrays(put(folder / "x.npz", zip), with_memory());
        if (arrays) {
            CHECK(std::get<std::vector<double>>(arrays->at("E").values)[11] == 23.25);
        }
    }
    check_refused(
        read_arrays(put(folder / "x.npz",
                        with_directory_field(
                            content(python_files() / "packed.npz"), unpacked, 4000000000U)),
                    with_memory()),
        "claims to unpack");
}

TEST_CASE("mutated files never crash, hang or exceed the budget") {
    const std::uint64_t seed = 20261201;
    MESSAGE("seed ", seed);
    std::mt19937_64 random(seed);
    const Folder folder;
    for (const Seed& one : seeds) {
        const std::string original = seed_bytes(one.file);
        const std::string path = folder / one.file;
        int read = 0;
        const int all = rounds(400);
        for (int round = 0; round < all; ++round) {
            std::string bytes = original;
            for (std::uint64_t changes = random() % 4 + 1; changes > 0; --changes) {
                mutate(bytes, random);
            }
            CAPTURE(std::string(one.file));
            CAPTURE(round);
            read += read_watched(put(path, bytes), one.kind) ? 1 : 0;
        }
        MESSAGE(std::string(one.file), ": ", read, " of ", all, " were read all the same");
    }
}

TEST_CASE("mutated HDF5 files never crash or hang" * doctest::skip(!has_hdf5())) {
    const std::uint64_t seed = 20261202;
    MESSAGE("seed ", seed);
    std::mt19937_64 random(seed);
    const Folder folder;
    const std::string original = content(python_files() / "small.h5");
    for (int round = rounds(150); round > 0; --round) {
        std::string bytes = original;
        for (std::uint64_t changes = random() % 8 + 1; changes > 0; --changes) {
            mutate(bytes, random);
        }
        CAPTURE(round);
        read_watched(put(folder / "x.h5", bytes), Kind::arrays);
    }
}
