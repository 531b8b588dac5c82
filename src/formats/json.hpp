#pragma once

#include <cstdint>

#include <nlohmann/json.hpp>

#include "chainmark/formats/byte_stream.hpp"

namespace chainmark {

/// A JSON document in memory.
struct JsonDocument {
    MemoryShare memory;
    nlohmann::json root;
};

/// What a first pass over a JSON text finds; it needs no memory to speak of.
struct JsonSurvey {
    std::int64_t scalars = 0;
    std::int64_t containers = 0;
    std::int64_t string_bytes = 0;
    bool top_is_array = false;
    bool top_is_object = false;
    bool members_are_arrays = true;  ///< of a top object; "complex" aside
};

/// Checks the syntax (RFC 8259) and counts. Nesting deeper than 256 is refused. Fails with
/// `bad_syntax` and line and column.
Result<JsonSurvey> survey_json(const Text& text, const Context& context);

/// The text of a file with NaN, Infinity and -Infinity, which some writers put where JSON has no
/// number, as the strings "nan", "inf" and "-inf".
Result<Text> read_json_text(const std::string& path, const Context& context);

/// The whole document. Fails as `read_json_text` and `survey_json` do, with `over_memory`, and with
/// `bad_syntax` for a key that an object has twice.
Result<JsonDocument> read_json(const std::string& path, const Context& context);

/// Line and column of a byte of the text.
Place place_in(const Text& text, std::size_t byte);

}  // namespace chainmark
