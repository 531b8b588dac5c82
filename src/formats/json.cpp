#include "chainmark/formats/json.hpp"

#include <algorithm>
#include <cstring>
#include <unordered_set>

#include "chainmark/formats/json_events.hpp"

namespace chainmark {
namespace {

constexpr std::size_t deepest = 256;

/// Counts. The names are the library's. NOLINTBEGIN(readability-identifier-naming)
class Surveyor : public JsonEvents {
public:
    using JsonEvents::JsonEvents;
    JsonSurvey survey;

    bool null() { return scalar(0); }
    bool boolean(bool /*value*/) { return scalar(0); }
    bool number_integer(std::int64_t /*value*/) { return scalar(0); }
    bool number_unsigned(std::uint64_t /*value*/) { return scalar(0); }
    bool number_float(double /*value*/, const std::string& /*text*/) { return scalar(0); }
    bool string(const std::string& value) { return scalar(value.size()); }
    bool binary(const std::vector<std::uint8_t>& /*value*/) { return scalar(0); }
    bool start_object(std::size_t /*size*/) { return start(false); }
    bool start_array(std::size_t /*size*/) { return start(true); }
    bool end_object() { return end(); }
    bool end_array() { return end(); }

    bool key(const std::string& name) {
        survey.string_bytes += static_cast<std::int64_t>(name.size());
        if (arrays_.size() == 1) {
            flag_ = name == "complex";
        }
        return true;
    }

private:
    bool scalar(std::size_t bytes) {
        ++survey.scalars;
        survey.string_bytes += static_cast<std::int64_t>(bytes);
        note_member(false);
        poll_sometimes();
        return true;
    }
    void note_member(bool array) {
        if (arrays_.size() == 1) {
            survey.members_are_arrays = survey.members_are_arrays && (array || flag_);
        }
    }
    bool start(bool array) {
        ++survey.containers;
        if (arrays_.empty()) {
            survey.top_is_array = array;
            survey.top_is_object = !array;
        }
        note_member(array);
        if (arrays_.size() >= deepest) {
            return fail("arrays and objects nested more than 256 deep", "a flatter document");
        }
        arrays_.push_back(array);
        poll_sometimes();
        return true;
    }
    bool end() {
        arrays_.pop_back();
        return true;
    }

    std::vector<bool> arrays_;
    bool flag_ = false;
};

/// Refuses a key that an object has twice.
class KeyChecker : public JsonEvents {
public:
    using JsonEvents::JsonEvents;

    bool null() { return true; }
    bool boolean(bool /*value*/) { return true; }
    bool number_integer(std::int64_t /*value*/) { return true; }
    bool number_unsigned(std::uint64_t /*value*/) { return true; }
    bool number_float(double /*value*/, const std::string& /*text*/) { return true; }
    bool string(const std::string& /*value*/) { return true; }
    bool binary(const std::vector<std::uint8_t>& /*value*/) { return true; }
    bool start_array(std::size_t /*size*/) { return true; }
    bool end_array() { return true; }
    bool start_object(std::size_t /*size*/) {
        keys_.emplace_back();
        return true;
    }
    bool end_object() {
        keys_.pop_back();
        return true;
    }
    bool key(const std::string& name) {
        poll_sometimes();
        return keys_.back().insert(name).second ||
               fail("the key " + shown(name) + " occurs twice in an object", "each key once");
    }

private:
    std::vector<std::unordered_set<std::string>> keys_;
};
// NOLINTEND(readability-identifier-naming)

struct Word {
    std::string_view written;
    std::string_view replacement;
};
constexpr Word words[] = {{"NaN", "\"nan\""}, {"-Infinity", "\"-inf\""}, {"Infinity", "\"inf\""}};

const Word* word_at(std::string_view rest) {
    for (const Word& word : words) {
        if (rest.substr(0, word.written.size()) == word.written) {
            return &word;
        }
    }
    return nullptr;
}

/// Calls each(position, word) for every such word outside of strings.
template <class Each>
void for_each_word(std::string_view text, Each&& each) {
    bool quoted = false;
    for (std::size_t i = 0; i < text.size(); ++i) {
        const char c = text[i];
        if (quoted) {
            i += c == '\\' ? 1 : 0;
            quoted = c != '"';
        } else if (c == '"') {
            quoted = true;
        } else if (c == 'N' || c == 'I' || c == '-') {
            const Word* word = word_at(text.substr(i));
            if (word != nullptr) {
                each(i, *word);
                i += word->written.size() - 1;
            }
        }
    }
}

/// The text with the words replaced; they are rare, so mostly nothing is copied.
Result<Text> with_words_replaced(Text text, const Context& context) {
    std::int64_t growth = 0;
    bool any = false;
    for_each_word(text.view(), [&](std::size_t /*at*/, const Word& word) {
        growth += static_cast<std::int64_t>(word.replacement.size()) -
                  static_cast<std::int64_t>(word.written.size());
        any = true;
    });
    if (!any) {
        return text;
    }
    Text changed{.source = text.source,
                 .bytes = nullptr,
                 .size = static_cast<std::size_t>(static_cast<std::int64_t>(text.size) + growth),
                 .memory = MemoryShare(context)};
    Result<void> taken =
        changed.memory.take(static_cast<double>(changed.size + 1), text.source, "the text");
    if (!taken) {
        return tl::unexpected(taken.error());
    }
    changed.bytes = std::make_unique_for_overwrite<char[]>(changed.size + 1);
    char* to = changed.bytes.get();
    std::size_t from = 0;
    for_each_word(text.view(), [&](std::size_t at, const Word& word) {
        to = std::copy(text.bytes.get() + from, text.bytes.get() + at, to);
        to = std::copy(word.replacement.begin(), word.replacement.end(), to);
        from = at + word.written.size();
    });
    to = std::copy(text.bytes.get() + from, text.bytes.get() + text.size, to);
    *to = '\0';
    return changed;
}

}  // namespace

Place place_in(const Text& text, std::size_t byte) {
    const std::string_view before = text.view().substr(0, std::min(byte, text.size));
    const auto line = std::count(before.begin(), before.end(), '\n') + 1;
    const std::size_t start = before.rfind('\n') + 1;  // npos + 1 is 0
    return {text.source, static_cast<int>(line), static_cast<int>(before.size() - start) + 1};
}

Result<JsonSurvey> survey_json(const Text& text, const Context& context) {
    Surveyor surveyor(text, context);
    if (const std::optional<Error> error = run_events(surveyor)) {
        return tl::unexpected(*error);
    }
    return surveyor.survey;
}

Result<Text> read_json_text(const std::string& path, const Context& context) {
    Result<Text> text = read_text(path, context);
    if (!text) {
        return text;
    }
    return with_words_replaced(std::move(*text), context);
}

Result<JsonDocument> read_json(const std::string& path, const Context& context) {
    const Result<Text> text = read_json_text(path, context);
    if (!text) {
        return tl::unexpected(text.error());
    }
    const Result<JsonSurvey> survey = survey_json(*text, context);
    if (!survey) {
        return tl::unexpected(survey.error());
    }
    // A member of an object is a node of 80 bytes and its allocation; the elements of an array
    // take 16 bytes, three times over while it grows. Keys once more while they are checked.
    const double values = static_cast<double>(survey->scalars + survey->containers);
    const double bytes = 256.0 * values + 4.0 * static_cast<double>(survey->string_bytes);
    JsonDocument document{.memory = MemoryShare(context), .root = {}};
    Result<void> taken = document.memory.take(bytes, path, "the document");
    if (!taken) {
        return tl::unexpected(taken.error());
    }
    KeyChecker checker(*text, context);
    if (const std::optional<Error> error = run_events(checker)) {
        return tl::unexpected(*error);
    }
    document.root = nlohmann::json::parse(text->view(), nullptr, false);
    return document;
}

}  // namespace chainmark
