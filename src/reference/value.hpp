#pragma once

#include <complex>
#include <cstdint>
#include <optional>
#include <string>
#include <utility>
#include <variant>
#include <vector>

namespace chainmark {

enum class Kind { number, array, text };

/// What stands in the place of a number that does not exist.
enum class Special { none, infinite, minus_infinite, jump, undefined };

/// "infinite", "-infinite", "jump", "undefined"; empty for `none`.
std::string to_string(Special special);

/// The answer to a query at a point.
struct Value {
    Kind kind = Kind::number;
    std::vector<std::size_t> shape;          ///< arrays: extent of each axis
    std::vector<std::complex<double>> data;  ///< one element for a number, none for a text
    std::vector<Special> special;            ///< empty, or one entry per element of `data`
    std::string text;
    bool complex = false;  ///< false: imaginary parts are zero by definition
    /// jump_fields: total Sz below the first field, between neighbours, above the last.
    std::vector<double> total_sz;

    static Value number(double x);
    static Value status(Special special);
    static Value array(const std::vector<double>& x);
    static Value words(std::string text);

    /// Special::none where element i is an ordinary number.
    Special special_at(std::size_t i) const { return special.empty() ? Special::none : special[i]; }
    double real_at(std::size_t i) const { return data[i].real(); }
};

/// How the error bound of a reference is known, best first.
enum class Basis { exact, enclosure, residual, rounding, estimate };
std::string to_string(Basis basis);

/// How it is known that no level below the last one is missing from a level list.
enum class Completeness { proved, tested, not_shown };
std::string to_string(Completeness completeness);

/// Quantum numbers of one level, absent where not resolved; or of a sector that a query asks for,
/// absent where every value will do.
struct Labels {
    std::optional<double> sz = {};       ///< total Sz, a multiple of 1/2; N_up = sz + L S
    std::optional<int> momentum = {};    ///< n of k = (2 pi n + twist N_up)/L, -L/2 < n <= L/2
    std::optional<int> parity = {};      ///< (-1)^N_up, +1 or -1; of a level where sz is not known
    std::optional<int> reflection = {};  ///< +1 or -1 under j -> L-1-j, states of sites exchanged
    std::optional<int> inversion = {};   ///< +1 or -1 under m -> -m on every site, no further sign

    bool operator==(const Labels&) const = default;
};

/// Sectors that were not solved, since a proof says that they cannot hold the answer.
struct Skipped {
    std::string sectors;  ///< which: "Sz < 0"
    std::string proof;    ///< a sentence with its reason: "Sz -> -Sz maps them onto Sz > 0"
};

/// Smallest and largest expectation value in a degenerate ground space, one pair an element.
using Range = std::vector<std::pair<double, double>>;

enum class RouteId { sector, dense, fermion, limit };
std::string to_string(RouteId route);

/// How a finite chain's value comes near the infinite one's.
struct Approach {
    enum class Law {
        power,        ///< |difference| ~ L^-exponent, sizes of one parity
        envelope,     ///< |difference| <= c L^-exponent, oscillating below: c is reported, nothing
                      ///< fitted
        exponential,  ///< |difference| ~ exp(-L/decay_length), times some power of L
    };

    /// A number of the infinite chain that the leading difference holds:
    ///   number = factor * lim L^power (value - limit), with `surface` once a term ~ L^(power - 1)
    ///   of unknown size is taken off.
    struct Amplitude {
        std::string name;  ///< "central_charge", "velocity"
        double factor = 0.0;
        int power = 0;
        bool surface = false;
        double expected = 0.0;
    };

    Law law = Law::power;
    double exponent = 0.0;
    double decay_length = 0.0;
    bool even_sizes_only = false;             ///< odd sizes follow another law
    std::optional<Amplitude> amplitude = {};  ///< for even sizes
};

/// |value - at_point| ~ distance^exponent as the field comes near a critical one from one side.
struct CriticalLaw {
    double field = 0.0;     ///< |h| at the critical point
    double distance = 0.0;  ///< ||h| - field|
    bool below = true;      ///< |h| < field
    double at_point = 0.0;  ///< the value at the critical point; 0 where it diverges
    double exponent = 0.0;
};

/// A real number known to lie within `radius` of `mid`: decimal numbers, both exact as written.
struct Enclosure {
    std::string mid;
    std::string radius;
};

/// A value by one route, with an absolute error bound on each element.
struct Reference {
    Value value;
    std::vector<double> bound;  ///< one per element of value.data
    Basis basis = Basis::estimate;
    std::optional<Completeness> complete;    ///< level lists and degeneracies
    std::optional<std::int64_t> degeneracy;  ///< dimension of the ground space
    std::optional<Range> range;
    std::vector<Labels> labels;        ///< level lists: one a level, or empty
    std::vector<Skipped> skipped;      ///< what was left out by proof; empty: everything was solved
    std::optional<Approach> approach;  ///< route `limit` beside a finite chain
    std::optional<CriticalLaw> critical;  ///< route `limit` near a critical field
    std::vector<Enclosure> enclosure;     ///< one per element of value.data, or empty
    RouteId route = RouteId::sector;
    double seconds = 0.0;
};

/// The route does not reach this quantity here.
struct NotCovered {
    std::string reason;
};

/// The route reaches it, but has no answer it can stand for.
struct Undecided {
    std::string reason;
};

using Answer = std::variant<Reference, NotCovered, Undecided>;

}  // namespace chainmark
