#include <algorithm>
#include <cctype>

#include <fmt/format.h>

#include "chainmark/formats/array.hpp"
#include "chainmark/formats/shown.hpp"

namespace chainmark {
namespace {

using Complexes = std::vector<std::complex<double>>;

/// Element i of a real or integer array.
double real_at(const Array& array, std::size_t i) {
    if (const auto* doubles = std::get_if<std::vector<double>>(&array.values)) {
        return (*doubles)[i];
    }
    return static_cast<double>(std::get<std::vector<std::int64_t>>(array.values)[i]);
}

/// An array like `model` with room for `count` complex numbers.
Result<Array> complex_like(const Array& model, std::size_t count, const Context& context) {
    Array result;
    result.source = model.source;
    result.stored_as = model.stored_as;
    result.single_precision = model.single_precision;
    result.shape = model.shape;
    result.memory = MemoryShare(context);
    Result<void> taken = result.memory.take(
        16.0 * static_cast<double>(count), model.source, "an array of complex numbers");
    if (!taken) {
        return tl::unexpected(taken.error());
    }
    result.values = Complexes(count);
    return result;
}

std::string lower(std::string text) {
    std::transform(text.begin(), text.end(), text.begin(), [](unsigned char c) {
        return static_cast<char>(std::tolower(c));
    });
    return text;
}

}  // namespace

Result<Array> as_complex(Array array, const Context& context) {
    if (array.is_complex()) {
        return array;
    }
    Result<Array> result = complex_like(array, array.size(), context);
    if (result) {
        auto& values = std::get<Complexes>(result->values);
        for (std::size_t i = 0; i < values.size(); ++i) {
            values[i] = real_at(array, i);
        }
    }
    return result;
}

Result<Array> complex_from_last_axis(const Array& array, const Context& context) {
    if (array.is_complex() || array.shape.empty() || array.shape.back() != 2) {
        return refuse(ErrorCode::wrong_type,
                      {.source = array.source},
                      fmt::format("the array of {}{} has no pairs along its last axis",
                                  array.is_complex() ? "complex numbers, " : "",
                                  shape_text(array.shape)),
                      "real numbers, with a last axis of length 2 for re and im");
    }
    Result<Array> result = complex_like(array, array.size() / 2, context);
    if (result) {
        result->shape.pop_back();
        auto& values = std::get<Complexes>(result->values);
        for (std::size_t i = 0; i < values.size(); ++i) {
            values[i] = {real_at(array, 2 * i), real_at(array, 2 * i + 1)};
        }
    }
    return result;
}

Result<Array> complex_from_parts(const Array& real,
                                 const Array& imaginary,
                                 const Context& context) {
    if (real.is_complex() || imaginary.is_complex() || real.shape != imaginary.shape) {
        return refuse(ErrorCode::wrong_type,
                      {.source = imaginary.source},
                      fmt::format("the parts are {} and {}{}",
                                  shape_text(real.shape),
                                  shape_text(imaginary.shape),
                                  real.is_complex() || imaginary.is_complex() ? ", complex" : ""),
                      "two real arrays of the same shape");
    }
    Result<Array> result = complex_like(real, real.size(), context);
    if (result) {
        auto& values = std::get<Complexes>(result->values);
        for (std::size_t i = 0; i < values.size(); ++i) {
            values[i] = {real_at(real, i), real_at(imaginary, i)};
        }
        result->single_precision = real.single_precision || imaginary.single_precision;
    }
    return result;
}

std::pair<std::string, std::string> complex_parts(const std::vector<std::string>& names,
                                                  const std::string& name) {
    const auto find = [&](const std::string& wanted) -> std::string {
        const auto found = std::find_if(names.begin(), names.end(), [&](const std::string& one) {
            return lower(one) == wanted;
        });
        return found == names.end() ? "" : *found;
    };
    using Ends = std::pair<const char*, const char*>;
    for (const Ends& ends : {Ends{"re", "im"}, Ends{"real", "imag"}, Ends{"real", "imaginary"}}) {
        for (const char* joint : {"_", ".", "/", ""}) {
            const std::string real = find(lower(name) + joint + ends.first);
            const std::string imaginary = find(lower(name) + joint + ends.second);
            if (!real.empty() && !imaginary.empty()) {
                return {real, imaginary};
            }
        }
    }
    return {};
}

}  // namespace chainmark
