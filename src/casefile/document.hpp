#pragma once

#include <cstdint>
#include <string>
#include <variant>
#include <vector>

#include "chainmark/base/error.hpp"
#include "chainmark/casefile/case.hpp"

/// A TOML file as a tree in written order, every node with its place. Keeps toml++, whose tables
/// are sorted by key, out of the rest of the module.
namespace chainmark {

/// Where a node was written: in the file, or in the setting of that number (counted from 0).
struct Position {
    int line = 0;
    int column = 0;
    int setting = -1;

    /// Written order: the file from top to bottom, then the settings.
    bool operator<(const Position& other) const;
};

struct Node;
struct Entry;
using List = std::vector<Node>;
using Table = std::vector<Entry>;  ///< in written order

/// A date or a time: TOML has them, a case does not.
struct DateOrTime {};

struct Node {
    Position at;
    std::variant<std::string, std::int64_t, double, bool, DateOrTime, List, Table> value;
};

struct Entry {
    std::string key;
    Position at;  ///< of the key
    Node value;
};

/// nullptr where the table has no such key.
const Entry* find(const Table& table, const std::string& key);

/// "the text \"abc\"", "the number 2.5", "a list", ... for messages.
std::string describe(const Node& node);

/// The text as a TOML string, on one line.
std::string quoted(const std::string& text);

/// A key or text inside a message: escaped, and shortened where it is long.
std::string shown(const std::string& text);

/// The shortest TOML number that reads back as the same double.
std::string real_text(double value);

struct Document {
    Node root;              ///< holds a Table
    Errors setting_errors;  ///< settings that could not be applied
};

/// "--set KEY=VALUE"
std::string to_string(const Setting& setting);

/// Parses `text` and applies the settings. Fails with `cannot_read` for what is no text or too
/// long, and with `bad_syntax` for what is no TOML.
Result<Document> read_document(const std::string& text,
                               const std::string& source,
                               const std::vector<Setting>& settings);

/// The document as TOML, one line per key with its full path, in written order: reading it gives
/// the same case with the same order of the grid's axes.
std::string effective_text(const Node& root);

/// Longest case file in bytes.
inline constexpr std::size_t longest_file = std::size_t{10} * 1024 * 1024;

/// The error for files beyond `longest_file`.
Error too_long(const std::string& source);

}  // namespace chainmark
