#include "chainmark/reference/value.hpp"

namespace chainmark {

std::string to_string(Special special) {
    switch (special) {
        case Special::none:
            return "";
        case Special::infinite:
            return "infinite";
        case Special::minus_infinite:
            return "-infinite";
        case Special::jump:
            return "jump";
        case Special::undefined:
            return "undefined";
    }
    return "";
}

std::string to_string(Basis basis) {
    switch (basis) {
        case Basis::exact:
            return "exact";
        case Basis::enclosure:
            return "enclosure";
        case Basis::residual:
            return "residual";
        case Basis::rounding:
            return "rounding";
        case Basis::estimate:
            return "estimate";
    }
    return "";
}

std::string to_string(Completeness completeness) {
    switch (completeness) {
        case Completeness::proved:
            return "proved";
        case Completeness::tested:
            return "tested";
        case Completeness::not_shown:
            return "not_shown";
    }
    return "";
}

std::string to_string(RouteId route) {
    switch (route) {
        case RouteId::sector:
            return "sector";
        case RouteId::dense:
            return "dense";
        case RouteId::fermion:
            return "fermion";
        case RouteId::limit:
            return "limit";
    }
    return "";
}

Value Value::number(double x) {
    Value value;
    value.data = {x};
    return value;
}

Value Value::status(Special special) {
    Value value;
    value.data = {0.0};
    value.special = {special};
    return value;
}

Value Value::array(const std::vector<double>& x) {
    Value value;
    value.kind = Kind::array;
    value.shape = {x.size()};
    value.data.assign(x.begin(), x.end());
    return value;
}

Value Value::words(std::string text) {
    Value value;
    value.kind = Kind::text;
    value.text = std::move(text);
    return value;
}

}  // namespace chainmark
