#include "chainmark/formats/csv.hpp"

namespace chainmark {

std::string csv_field(std::string_view text) {
    const bool outer_space = !text.empty() && (text.front() == ' ' || text.back() == ' ');
    if (!outer_space && text.find_first_of(",\"\r\n") == std::string_view::npos) {
        return std::string(text);
    }
    std::string quoted = "\"";
    for (const char c : text) {
        quoted += c;
        if (c == '"') {
            quoted += c;
        }
    }
    return quoted + '"';
}

std::string csv_line(const std::vector<std::string>& fields) {
    std::string line;
    for (std::size_t i = 0; i < fields.size(); ++i) {
        line += i == 0 ? "" : ",";
        line += csv_field(fields[i]);
    }
    return line + '\n';
}

}  // namespace chainmark
