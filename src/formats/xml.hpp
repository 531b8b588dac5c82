#pragma once

#include <string>
#include <string_view>
#include <utility>
#include <vector>

/// XML 1.0 as text.
namespace chainmark {

/// The text with & < > and both quotes escaped, and without what XML 1.0 forbids: control
/// characters but tab and line ends (with the terminal sequences they start), and bytes that are no
/// UTF-8, for which U+FFFD stands.
std::string xml_text(std::string_view text);

/// Writes elements one after the other, two blanks deeper at each level.
class XmlWriter {
public:
    using Attributes = std::vector<std::pair<std::string, std::string>>;

    XmlWriter() : text_("<?xml version=\"1.0\" encoding=\"UTF-8\"?>\n") {}

    /// Starts an element. Names are the program's own and not escaped.
    void open(const std::string& name, const Attributes& attributes = {});
    /// Ends the element that was opened last.
    void close();
    /// A whole element with text, or an empty one.
    void element(const std::string& name, const Attributes& attributes, std::string_view text = "");

    /// The document, once every element is closed.
    const std::string& text() const;

private:
    void start(const std::string& name, const Attributes& attributes);

    std::string text_;
    std::vector<std::string> open_;
};

}  // namespace chainmark
