#pragma once

#include <cstdint>
#include <optional>
#include <string>
#include <utility>
#include <vector>

#include "chainmark/base/error.hpp"
#include "chainmark/casefile/document.hpp"

namespace chainmark {

/// Reads typed values from nodes and collects every error on the way. `what` names a value in
/// messages: "'J' in [hamiltonian]". A reading that returns nothing has reported why.
class Reader {
public:
    Reader(std::string source, const std::vector<Setting>& settings);

    Place place(const Position& at) const;

    void report(ErrorCode code, const Position& at, std::string found, std::string allowed);
    void wrong_type(const Node& node, const std::string& what, const std::string& expected);
    void bad_value(const Node& node, const std::string& what, const std::string& expected);

    std::size_t error_count() const { return count_; }

    /// All errors in written order, settings last. Of more than a thousand the first that were
    /// found.
    Errors errors() const;

    /// A finite number; whole numbers are taken for reals, and -0 for 0.
    std::optional<double> number(const Node& node, const std::string& what);

    std::optional<std::int64_t> whole(const Node& node,
                                      const std::string& what,
                                      std::int64_t lowest,
                                      std::int64_t highest);
    std::optional<bool> flag(const Node& node, const std::string& what);

    /// One of `words`; returns its index. `other_form` is what the caller takes besides texts.
    std::optional<std::size_t> choice(const Node& node,
                                      const std::string& what,
                                      const std::vector<std::string>& words,
                                      const std::string& other_form = "");

    const std::string* text(const Node& node, const std::string& what, const std::string& expected);
    const List* list(const Node& node, const std::string& what, const std::string& expected);
    const Table* table(const Node& node, const std::string& what, const std::string& expected);

    /// The entry of `table`; reports `missing_key` at the table's place where it is absent.
    /// `owner` names the table ("[system]"), `expected` says what the key is for.
    const Entry* need(const Table& table,
                      const Position& at,
                      const std::string& owner,
                      const std::string& key,
                      const std::string& expected);

    /// Reports a key that `owner` does not have; `allowed` are those it has. What belongs to the
    /// top level was written below a [table] by mistake.
    void unknown_key(const Entry& entry,
                     const std::string& owner,
                     const std::vector<std::string>& allowed);

    /// Reports every key that is not in `allowed`.
    void only_keys(const Table& table,
                   const std::string& owner,
                   const std::vector<std::string>& allowed);

private:
    std::string source_;
    std::vector<std::string> settings_;
    std::vector<std::pair<Position, Error>> errors_;
    std::size_t count_ = 0;
};

/// The keys of a case: "format", "title" and the names of the tables.
const std::vector<std::string>& top_level_keys();

/// "'J' in [hamiltonian]"
std::string name_in(const std::string& key, const std::string& owner);

}  // namespace chainmark
