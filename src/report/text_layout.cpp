#include "chainmark/report/text_layout.hpp"

#include <algorithm>
#include <cctype>

#include "chainmark/base/error.hpp"

namespace chainmark {
namespace {

constexpr std::size_t text_width = 100;

bool starts_number(const std::string& text) {
    return !text.empty() &&
           (std::isdigit(static_cast<unsigned char>(text.front())) != 0 || text.front() == '-');
}

/// Width of what stands before the decimal point of a number.
std::size_t whole_width(const std::string& text) {
    return starts_number(text) ? std::min(text.find_first_of(".e"), text.size()) : 0;
}

void align_points(std::vector<std::string>& texts) {
    std::size_t whole = 0;
    for (const std::string& text : texts) {
        whole = std::max(whole, whole_width(text));
    }
    for (std::string& text : texts) {
        if (starts_number(text)) {
            text.insert(0, whole - whole_width(text), ' ');
        }
    }
}

std::size_t widest(const std::vector<std::string>& texts) {
    std::size_t width = 0;
    for (const std::string& text : texts) {
        width = std::max(width, display_width(text));
    }
    return width;
}

std::string trimmed_end(std::string text) {
    text.erase(text.find_last_not_of(' ') + 1);
    return text;
}

}  // namespace

std::size_t display_width(std::string_view text) {
    return static_cast<std::size_t>(std::count_if(text.begin(), text.end(), [](char c) {
        return (static_cast<unsigned char>(c) & 0xC0U) != 0x80U;  // not inside a UTF-8 sequence
    }));
}

std::string padded(std::string text, std::size_t width) {
    const std::size_t have = display_width(text);
    return have < width ? text.append(width - have, ' ') : text;
}

std::string printable(std::string text) {
    std::replace_if(
        text.begin(),
        text.end(),
        [](char c) { return static_cast<unsigned char>(c) < 0x20U || c == 0x7F; },
        ' ');
    return text;
}

std::string wrapped(const std::vector<std::string>& words,
                    std::string_view separator,
                    std::size_t indent,
                    std::size_t width) {
    std::string lines;
    std::string line(indent, ' ');
    for (std::size_t i = 0; i < words.size(); ++i) {
        const std::string word =
            words[i] + (i + 1 < words.size() ? std::string(separator) : std::string());
        const std::size_t used = display_width(line);
        if (used > indent && used + display_width(trimmed_end(word)) > width) {
            lines += trimmed_end(line) + '\n';
            line.assign(indent, ' ');
        }
        line += word;
    }
    return lines + trimmed_end(line) + '\n';
}

std::string wrapped(std::string_view sentence, std::size_t indent, std::size_t width) {
    std::vector<std::string> words;
    while (!sentence.empty()) {
        const std::size_t end = std::min(sentence.find(' '), sentence.size());
        if (end > 0) {
            words.emplace_back(sentence.substr(0, end));
        }
        sentence.remove_prefix(std::min(end + 1, sentence.size()));
    }
    return wrapped(words, " ", indent, width);
}

std::string definition_list(
    const std::vector<std::pair<std::string, std::vector<std::string>>>& entries) {
    std::size_t width = 0;
    for (const auto& entry : entries) {
        width = std::max(width, display_width(entry.first) + 2);
    }
    std::string text;
    for (const auto& [term, paragraphs] : entries) {
        std::string block;
        for (const std::string& paragraph : paragraphs) {
            block += wrapped(paragraph, width, text_width);
        }
        text += paragraphs.empty() ? term + '\n' : padded(term, width) + block.substr(width);
    }
    return text;
}

void TextTable::add_row(std::vector<Cell> cells, std::string below) {
    CHAINMARK_EXPECTS(cells.size() == columns_.size());
    rows_.push_back({std::move(cells), std::move(below)});
}

void TextTable::add_text(std::string lines) {
    rows_.push_back({{}, std::move(lines)});
}

/// The cells of a column, heading first, padded to one width; empty where no row has anything.
std::vector<std::string> TextTable::column_texts(std::size_t column) const {
    std::vector<std::string> texts;
    for (const Row& row : rows_) {
        texts.push_back(row.cells.empty() ? "" : row.cells[column].text);
    }
    if (widest(texts) == 0) {
        return {};
    }
    const Column& shape = columns_[column];
    if (shape.align == Align::point) {
        align_points(texts);
    }
    texts.insert(texts.begin(), shape.heading);
    const std::size_t width = widest(texts);
    const std::size_t cells = widest({texts.begin() + 1, texts.end()});
    for (std::size_t i = 0; i < texts.size(); ++i) {
        if (shape.align == Align::point && i > 0) {  // numbers end where their heading ends
            texts[i] = std::string(width - cells, ' ') + padded(texts[i], cells);
        }
        const std::string space(width - std::min(width, display_width(texts[i])), ' ');
        texts[i] = shape.align == Align::left ? texts[i] + space : space + texts[i];
    }
    return texts;
}

std::string TextTable::line(const std::vector<std::vector<std::string>>& texts,
                            std::size_t row,
                            std::size_t indent) const {
    std::string line(indent, ' ');
    for (std::size_t column = 0; column < texts.size(); ++column) {
        if (texts[column].empty()) {
            continue;
        }
        std::string text = texts[column][row];
        if (row > 0) {
            const Cell& cell = rows_[row - 1].cells[column];
            text.insert(text.find(cell.text) + cell.text.size(), cell.after);
            text.insert(text.find(cell.text), cell.before);
        }
        line += text;
        line += "  ";
    }
    return trimmed_end(line) + '\n';
}

std::string TextTable::text(std::size_t indent) const {
    std::vector<std::vector<std::string>> texts;
    for (std::size_t column = 0; column < columns_.size(); ++column) {
        texts.push_back(column_texts(column));
    }
    std::string text = line(texts, 0, indent);
    for (std::size_t row = 0; row < rows_.size(); ++row) {
        if (!rows_[row].cells.empty()) {
            text += line(texts, row + 1, indent);
        }
        text += rows_[row].below;
    }
    return text;
}

}  // namespace chainmark
