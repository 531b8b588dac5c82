#include <map>

#include "chainmark/plan/work.hpp"

namespace chainmark {
namespace {

/// What is held fixed along a trend: all parameters but the size, and the size's parity.
using Group = std::pair<Parameters, bool>;

struct Series {
    std::vector<SizePoint> sizes;
    const Reference* infinite = nullptr;
};

bool is_plain_number(const Reference& reference) {
    return reference.value.kind == Kind::number && reference.value.special_at(0) == Special::none;
}

void collect(std::map<Group, Series>& groups,
             const Parameters& point,
             const QuantityResult& result) {
    if (!result.infinite || !result.infinite->approach || result.references.empty() ||
        !is_plain_number(*result.infinite) || !is_plain_number(result.references.front())) {
        return;
    }
    Group group;
    int sites = 0;
    for (const auto& [name, value] : point) {
        if (name == "sites") {
            sites = static_cast<int>(value);
        } else {
            group.first.emplace_back(name, value);
        }
    }
    group.second = sites % 2 == 0;
    const Reference& best = result.references.front();
    Series& series = groups[group];
    series.sizes.push_back({sites, best.value.real_at(0), best.bound[0]});
    series.infinite = &*result.infinite;
}

}  // namespace

std::vector<Trend> size_trends(const CaseResult& result) {
    std::map<const CaseQuantity*, std::map<Group, Series>> by_quantity;
    for (const PointResult& point : result.points) {
        for (const QuantityResult& quantity : point.quantities) {
            collect(by_quantity[quantity.quantity], point.parameters, quantity);
        }
    }
    std::vector<Trend> trends;
    for (const CaseQuantity& quantity : result.source->quantities) {
        for (const auto& [group, series] : by_quantity[&quantity]) {
            std::optional<Trend> trend = approach_trend(series.sizes,
                                                        series.infinite->value.real_at(0),
                                                        series.infinite->bound[0],
                                                        *series.infinite->approach);
            if (trend) {
                trend->quantity = quantity.query.label;
                trend->axis = "sites";
                trend->group = group.second ? "even" : "odd";
                trend->parameters = group.first;
                trends.push_back(std::move(*trend));
            }
        }
    }
    return trends;
}

}  // namespace chainmark
