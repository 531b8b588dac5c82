#include "chainmark/report/row_text.hpp"

#include <algorithm>
#include <cmath>
#include <limits>

#include <fmt/format.h>

#include "chainmark/base/words.hpp"
#include "chainmark/formats/numbers.hpp"
#include "chainmark/report/run_report.hpp"
#include "chainmark/report/text_layout.hpp"

namespace chainmark {
namespace {

constexpr std::size_t note_indent = 8;
constexpr std::size_t most_elements = 6;  ///< of an array
constexpr std::size_t few_elements = 3;   ///< arrays up to this are shown to all their digits
constexpr int all_digits = 15;
constexpr int element_digits = 10;  ///< of a longer array's elements, significant

std::string note(const std::string& text) {
    return wrapped(text, note_indent, page_width);
}

double bound_at(const Reference& reference, std::size_t i) {
    return i < reference.bound.size() ? reference.bound[i] : 0.0;
}

std::string element_text(const Reference& reference, std::size_t i, int digits) {
    const Value& value = reference.value;
    const Special status = shown_status(value, i);
    if (status != Special::none) {
        return to_string(status);
    }
    return value.complex ? certain_digits(value.data[i], bound_at(reference, i), digits)
                         : certain_digits(value.real_at(i), bound_at(reference, i), digits);
}

/// "name  a, b, c, ... (256 in all)" below a row.
std::string list_below(const std::string& name, std::vector<std::string> elements) {
    const std::size_t all = elements.size();
    if (all > most_elements) {
        elements.resize(most_elements);
        elements.push_back(fmt::format("... ({} in all)", all));
    }
    const std::size_t indent = note_indent + (name.empty() ? 0 : display_width(name) + 2);
    const std::string lines = wrapped(elements, ", ", indent, page_width);
    return padded(std::string(note_indent, ' ') + name, indent) + lines.substr(indent);
}

std::string array_below(const std::string& name, const Reference& reference) {
    if (reference.value.kind != Kind::array || reference.value.data.size() < 2) {
        return "";
    }
    std::vector<std::string> elements(reference.value.data.size());
    const int digits = elements.size() <= few_elements ? all_digits : element_digits;
    for (std::size_t i = 0; i < std::min(elements.size(), most_elements); ++i) {
        elements[i] = element_text(reference, i, digits);
    }
    return list_below(name, elements);
}

std::string total_sz_below(const Reference& reference) {
    if (reference.value.total_sz.empty()) {
        return "";
    }
    std::vector<std::string> elements;
    for (const double sz : reference.value.total_sz) {
        elements.push_back(number_text(sz));
    }
    return list_below("total Sz", elements);
}

/// One route's own value, of an array the given element.
std::string own_value(const Reference& reference, std::size_t element) {
    const Value& value = reference.value;
    if (value.kind == Kind::text) {
        return value.text;
    }
    const std::string size = value.kind == Kind::array
                                 ? fmt::format("{} values, [{}] = ", value.data.size(), element)
                                 : "";
    if (element >= value.data.size()) {
        return fmt::format("{} values", value.data.size());
    }
    const bool ordinary = shown_status(value, element) == Special::none;
    const std::string number =
        value.complex ? number_text(value.data[element]) : number_text(value.real_at(element));
    return size + (ordinary ? number : element_text(reference, element, all_digits)) +
           (ordinary ? fmt::format(" +- {:.2g}", bound_at(reference, element)) : "") +
           fmt::format(" ({})", to_string(reference.basis));
}

/// The certified digits of the first few elements.
std::string enclosure_below(const QuantityResult& result) {
    std::string lines;
    for (const Reference& reference : result.references) {
        std::size_t shown = 0;
        for (const Enclosure& enclosure : reference.enclosure) {
            if (++shown > most_elements) {
                break;
            }
            lines += note(fmt::format("{} +- {} (enclosure)", enclosure.mid, enclosure.radius));
        }
    }
    return lines;
}

std::string reason_below(const QuantityResult& result) {
    // Where no route answered, the table's last lines say why.
    if (!is_bad(result.comparison.verdict) || result.references.empty()) {
        return "";
    }
    std::string lines =
        note(to_string(result.comparison.verdict) + ": " + result.comparison.reason);
    if (result.references.size() > 1) {
        const std::size_t element = result.comparison.element;
        for (const Reference& reference : result.references) {
            lines += std::string(note_indent, ' ') + padded(to_string(reference.route), 8) +
                     own_value(reference, element) + '\n';
        }
    }
    return lines;
}

}  // namespace

bool is_bad(Verdict verdict) {
    return verdict == Verdict::differ || verdict == Verdict::undecided;
}

std::string value_cell(const Reference& reference) {
    switch (reference.value.kind) {
        case Kind::text:
            return reference.value.text;
        case Kind::number:
            return element_text(reference, 0, all_digits);
        case Kind::array:
            return reference.value.data.size() == 1
                       ? element_text(reference, 0, all_digits)
                       : fmt::format("[{} values]", reference.value.data.size());
    }
    return "";
}

std::string bound_cell(const Reference& reference) {
    double largest = 0.0;
    bool any_ordinary = false;
    for (std::size_t i = 0; i < reference.bound.size(); ++i) {
        const bool ordinary = shown_status(reference.value, i) == Special::none;
        any_ordinary = any_ordinary || ordinary;
        largest = ordinary ? std::max(largest, reference.bound[i]) : largest;
    }
    const bool is_number = reference.value.kind != Kind::text && any_ordinary;
    return is_number ? fmt::format("{:.1g}", largest) : "";
}

std::string lines_below(const QuantityResult& result) {
    std::string lines;
    if (!result.references.empty()) {
        lines += array_below("", result.references.front());
        lines += total_sz_below(result.references.front());
    }
    lines += enclosure_below(result);
    if (result.infinite) {
        lines += array_below("infinite chain", *result.infinite);
    }
    return lines + reason_below(result);
}

std::string route_names(const QuantityResult& result) {
    std::vector<std::string> names;
    for (const Reference& reference : result.references) {
        names.push_back(to_string(reference.route));
    }
    return names.empty() ? "none" : join(names, " ");
}

std::string infinite_cell(const QuantityResult& result) {
    const bool shown = result.infinite && result.infinite->value.kind != Kind::array;
    if (!shown) {
        return "";
    }
    return result.infinite->value.kind == Kind::text
               ? result.infinite->value.text
               : element_text(*result.infinite, 0, element_digits);
}

}  // namespace chainmark
