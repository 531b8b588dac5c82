#include "chainmark/fermion/answers.hpp"

#include <cmath>
#include <utility>

namespace chainmark::fermion {

double rounded_bound(const Bounded& number) {
    constexpr Real upward = 1 + 4 * double_rounding;  // the bound itself is rounded to a double
    return static_cast<double>((number.error + double_rounding * std::abs(number.value)) * upward);
}

Reference number_reference(const Bounded& number, Basis basis) {
    Reference reference;
    reference.value = Value::number(static_cast<double>(number.value));
    reference.bound = {rounded_bound(number)};
    reference.basis = basis;
    return reference;
}

Reference array_reference(const std::vector<Bounded>& numbers, Basis basis) {
    Reference reference;
    std::vector<double> values;
    for (const Bounded& number : numbers) {
        values.push_back(static_cast<double>(number.value));
        reference.bound.push_back(rounded_bound(number));
    }
    reference.value = Value::array(values);
    reference.basis = basis;
    return reference;
}

Reference status_reference(Special special) {
    Reference reference;
    reference.value = Value::status(special);
    reference.bound = {0.0};
    reference.basis = Basis::exact;
    return reference;
}

Reference text_reference(std::string text) {
    Reference reference;
    reference.value = Value::words(std::move(text));
    reference.basis = Basis::exact;
    return reference;
}

}  // namespace chainmark::fermion
