#include "chainmark/formats/xml.hpp"

#include <algorithm>
#include <cstdint>

#include "chainmark/base/error.hpp"

namespace chainmark {
namespace {

constexpr std::string_view replacement = "\xef\xbf\xbd";

unsigned char byte_at(std::string_view text, std::size_t i) {
    return i < text.size() ? static_cast<unsigned char>(text[i]) : 0;
}

/// Bytes of the well-formed UTF-8 sequence at i that XML allows, 0 where there is none.
std::size_t sequence_size(std::string_view text, std::size_t i) {
    const unsigned char first = byte_at(text, i);
    const std::size_t size = first < 0x80 ? 1 : first >= 0xf0 ? 4 : first >= 0xe0 ? 3 : 2;
    if (size == 1) {
        return 1;
    }
    if (first < 0xc0) {
        return 0;  // starts no sequence
    }
    std::uint32_t code = first & (0xffU >> (size + 1));
    for (std::size_t k = 1; k < size; ++k) {
        const unsigned char next = byte_at(text, i + k);
        if ((next & 0xc0U) != 0x80) {
            return 0;
        }
        code = code << 6 | (next & 0x3fU);
    }
    const std::uint32_t least = size == 2 ? 0x80 : size == 3 ? 0x800 : 0x10000;
    const bool surrogate = code >= 0xd800 && code < 0xe000;
    const bool allowed = first < 0xf8 && code >= least && code <= 0x10ffff && !surrogate &&
                         code != 0xfffe && code != 0xffff;
    return allowed ? size : 0;
}

/// Behind a terminal sequence ESC [ ... letter that starts at i, or behind i.
std::size_t behind_escape(std::string_view text, std::size_t i) {
    if (byte_at(text, i) != 0x1b || byte_at(text, i + 1) != '[') {
        return i + 1;
    }
    std::size_t end = i + 2;
    while (end < text.size() && (byte_at(text, end) < 0x40 || byte_at(text, end) > 0x7e)) {
        ++end;
    }
    return std::min(end + 1, text.size());
}

std::string_view escaped(char c) {
    switch (c) {
        case '&':
            return "&amp;";
        case '<':
            return "&lt;";
        case '>':
            return "&gt;";
        case '"':
            return "&quot;";
        case '\'':
            return "&apos;";
        default:
            return {};
    }
}

}  // namespace

std::string xml_text(std::string_view text) {
    std::string result;
    for (std::size_t i = 0; i < text.size();) {
        const unsigned char byte = byte_at(text, i);
        const bool control = byte < 0x20 && byte != '\t' && byte != '\n' && byte != '\r';
        if (control || byte == 0x7f) {
            i = behind_escape(text, i);
            continue;
        }
        const std::size_t size = sequence_size(text, i);
        const std::string_view reference = escaped(text[i]);
        result += size == 0 ? replacement : reference.empty() ? text.substr(i, size) : reference;
        i += std::max<std::size_t>(size, 1);
    }
    return result;
}

void XmlWriter::start(const std::string& name, const Attributes& attributes) {
    text_.append(2 * open_.size(), ' ').append("<").append(name);
    for (const auto& attribute : attributes) {
        text_.append(" ").append(attribute.first).append("=\"");
        for (const char c : xml_text(attribute.second)) {
            // a line end in an attribute would be read as a blank
            text_ += c == '\n'   ? "&#10;"
                     : c == '\r' ? "&#13;"
                     : c == '\t' ? "&#9;"
                                 : std::string(1, c);
        }
        text_ += "\"";
    }
}

void XmlWriter::open(const std::string& name, const Attributes& attributes) {
    start(name, attributes);
    text_ += ">\n";
    open_.push_back(name);
}

void XmlWriter::close() {
    CHAINMARK_EXPECTS(!open_.empty());
    const std::string name = open_.back();
    open_.pop_back();
    text_.append(2 * open_.size(), ' ').append("</").append(name).append(">\n");
}

void XmlWriter::element(const std::string& name,
                        const Attributes& attributes,
                        std::string_view text) {
    start(name, attributes);
    if (text.empty()) {
        text_.append("/>\n");
    } else {
        text_.append(">").append(xml_text(text)).append("</").append(name).append(">\n");
    }
}

const std::string& XmlWriter::text() const {
    CHAINMARK_EXPECTS(open_.empty());
    return text_;
}

}  // namespace chainmark
