#pragma once

#include <complex>
#include <cstdint>
#include <limits>
#include <optional>
#include <string>
#include <variant>
#include <vector>

#include "chainmark/base/error.hpp"
#include "chainmark/operators/chain.hpp"
#include "chainmark/operators/hamiltonian.hpp"
#include "chainmark/reference/quantity.hpp"
#include "chainmark/reference/tolerance.hpp"
#include "chainmark/reference/value.hpp"

/// The meaning of a case file. cases/README.md describes the format for people.
namespace chainmark {

/// One parameter of the grid with its values; a single value is an axis of length one.
struct GridAxis {
    /// "sites", "temperature", a family's parameter, "h", or a name from [parameters]
    std::string name;
    std::vector<double> values;  ///< for "sites" whole numbers, `infinite_sites` for "infinite"
    Place where;
};

/// Stands for sites = "infinite" on the axis "sites".
inline constexpr double infinite_sites = std::numeric_limits<double>::infinity();

/// coupling = { parameter = "Jxy", factor = 0.5 }
struct ParameterCoupling {
    std::string parameter;
    double factor = 1.0;
};

/// coupling = { uniform = [low, high], seed = 7 | "name" }: one draw a placement, ascending.
struct RandomCoupling {
    double low = 0.0;
    double high = 0.0;
    std::variant<std::uint64_t, std::string> seed;
};

/// Numbers (one for all placements, or one per placement), a parameter, or random draws.
using Coupling = std::variant<std::vector<std::complex<double>>, ParameterCoupling, RandomCoupling>;

/// A [[hamiltonian.term]] as written.
struct CaseTerm {
    std::vector<SiteMatrix> factors;
    std::vector<int> offsets;  ///< or the sites themselves where `fixed`
    bool fixed = false;
    Coupling coupling;
    bool add_conjugate = false;
    Place where;
};

struct CaseQuantity {
    Query query;
    std::optional<Tolerance> tolerance;  ///< beats the case's
    Place where;
};

struct Case {
    std::string source;  ///< as the user named it: a path, or the name of an embedded case
    std::string name;    ///< without folder and ending
    std::string title;
    BoundaryKind boundary = BoundaryKind::ring;
    double twist = 0.0;
    int two_s = 1;  ///< 2S
    Coincident coincident = Coincident::refuse;
    const Family* family = nullptr;  ///< nullptr: written terms alone
    std::vector<CaseTerm> terms;
    /// in written order; always holds "sites", with a family also "h"; "temperature" where T > 0
    std::vector<GridAxis> axes;
    bool zip = false;  ///< walk lists together instead of taking their product
    std::vector<CaseQuantity> quantities;
    Tolerance tolerance;
    std::vector<RouteId> routes;  ///< empty: every route that covers a quantity
    Place system_place;
    std::string effective;  ///< the case as TOML with every --set applied

    /// The axis of that name, which the case must have.
    const GridAxis& axis(const std::string& name) const;

    /// Whether thermal averages are asked for, at every point; otherwise the ground state's.
    bool has_temperature() const;
};

/// A KEY=VALUE from the command line: KEY is "sites", a parameter's name or a dotted path such as
/// "system.boundary"; VALUE is written as in the file.
struct Setting {
    std::string key;
    std::string value;
};

/// Reads a case from the text of a file. `source` is used in messages. All errors are reported
/// together, in the order in which they stand in the file; a TOML syntax error is reported alone.
Checked<Case> parse_case(const std::string& text,
                         const std::string& source,
                         const std::vector<Setting>& settings);

/// Reads a file and parses it. Fails with `cannot_read` for what is missing, a folder, unreadable
/// or no text.
Checked<Case> read_case(const std::string& path, const std::vector<Setting>& settings);

}  // namespace chainmark
