#pragma once

#include <set>
#include <string>
#include <vector>

#include "chainmark/casefile/case.hpp"
#include "chainmark/casefile/grid.hpp"
#include "chainmark/casefile/reader.hpp"

/// The tables of a case file, one function each. Each reports what is wrong in its table and fills
/// in what is right; `check_case` then looks at what the tables say together.
namespace chainmark {

/// An axis with its rank in the file.
struct WrittenAxis {
    std::string name;
    Position key;
    Position at;
    std::vector<GridValue> values;
};

/// A case under construction, with the places its finished form no longer has.
struct Draft {
    Case result;
    std::vector<WrittenAxis> axes;
    bool has_temperature = false;           ///< the key is there, readable or not
    std::vector<std::string> parameters;    ///< names from [parameters]
    std::set<std::string> used_parameters;  ///< those of them that a term names
    bool terms_complete = true;             ///< false: a term could not be read
    std::vector<Position> term_at;          ///< parallel to result.terms
    std::vector<Position> coupling_at;      ///< parallel to result.terms
    std::vector<Position> quantity_at;      ///< parallel to result.quantities
    std::vector<Position> extent_at;        ///< ... of what must fit the chain in a quantity
    std::vector<Position> sector_at;        ///< ... of a quantity's sector
};

/// Nothing is read where this fails: the meaning of every key depends on it.
bool read_format(Reader& reader, const Table& root);

void read_title(Reader& reader, const Table& root, Draft& draft);
void read_system(Reader& reader, const Table& root, Draft& draft);
void read_grid_section(Reader& reader, const Table& root, Draft& draft);
void read_tolerance_section(Reader& reader, const Table& root, Draft& draft);
void read_routes(Reader& reader, const Table& root, Draft& draft);

/// [hamiltonian] and [parameters], which depend on each other.
void read_hamiltonian(Reader& reader, const Table& root, Draft& draft);

/// A [[hamiltonian.term]].
void read_term(Reader& reader, const Node& node, Draft& draft);

/// Every [[quantity]]; after [tolerance].
void read_quantities(Reader& reader, const Table& root, Draft& draft);

/// What an option of a [[quantity]] says, alone; whether it fits the chain is for check_case.
void read_option(Reader& reader, OptionId option, const Node& node, Options& options);

/// { absolute, relative }; what is absent keeps the value of `tolerance`.
void read_tolerance(Reader& reader,
                    const Table& table,
                    const std::string& owner,
                    Tolerance& tolerance);

/// The table [name], nullptr where it is absent or no table.
const Table* find_section(Reader& reader, const Table& root, const std::string& name);

/// Reads a grid parameter and adds its axis.
void read_axis(
    Reader& reader, const Entry& entry, const std::string& owner, GridKind kind, Draft& draft);

/// nullptr where the case has no such axis.
const WrittenAxis* find_axis(const Draft& draft, const std::string& name);

/// Quantities against the chain and the temperature: those without a meaning there, sites and
/// counts out of range, sectors that the chain does not have.
void check_quantities(Reader& reader, const Draft& draft);

/// What no table can see alone: rings too short, values that occur twice, names that clash, and
/// check_quantities.
void check_case(Reader& reader, const Draft& draft);

}  // namespace chainmark
