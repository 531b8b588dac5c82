#include <algorithm>
#include <map>
#include <tuple>

#include "chainmark/plan/work.hpp"

namespace chainmark {
namespace {

bool is_plain_number(const Reference& reference) {
    return reference.value.kind == Kind::number && reference.value.special_at(0) == Special::none;
}

/// What is held fixed along an axis: all parameters but those that the axis changes.
Parameters without(const Parameters& point, std::initializer_list<std::string_view> names) {
    Parameters rest = point;
    std::erase_if(rest, [&](const auto& entry) {
        return std::find(names.begin(), names.end(), entry.first) != names.end();
    });
    return rest;
}

int sites_of(const Parameters& point) {
    for (const auto& [name, value] : point) {
        if (name == "sites") {
            return static_cast<int>(value);
        }
    }
    return 0;
}

/// Sizes of one parity with everything else held fixed, beside the infinite chain.
class SizeSeries {
public:
    void add(const Parameters& point, const QuantityResult& result) {
        if (!result.infinite || !result.infinite->approach || result.references.empty() ||
            !is_plain_number(*result.infinite) || !is_plain_number(result.references.front())) {
            return;
        }
        const int sites = sites_of(point);
        const Reference& best = result.references.front();
        Series& series = groups_[{without(point, {"sites"}), sites % 2 == 0}];
        series.sizes.push_back({sites, best.value.real_at(0), best.bound[0]});
        series.infinite = &*result.infinite;
    }

    void append_trends(const std::string& label, std::vector<Trend>& trends) const {
        for (const auto& [group, series] : groups_) {
            for (Trend& trend : approach_trends(series.sizes,
                                                series.infinite->value.real_at(0),
                                                series.infinite->bound[0],
                                                *series.infinite->approach)) {
                trend.quantity = label;
                trend.axis = "sites";
                trend.group = group.second ? "even" : "odd";
                trend.parameters = group.first;
                trends.push_back(std::move(trend));
            }
        }
    }

private:
    struct Series {
        std::vector<SizePoint> sizes;
        const Reference* infinite = nullptr;
    };
    std::map<std::pair<Parameters, bool>, Series> groups_;
};

/// Fields of the infinite chain on one side of a critical one.
class FieldSeries {
public:
    void add(const Parameters& point, const QuantityResult& result) {
        if (result.infinite) {
            add(point, *result.infinite);
        }
        for (const Reference& reference : result.references) {
            add(point, reference);
        }
    }

    void append_trends(const std::string& label, std::vector<Trend>& trends) const {
        for (const auto& [group, series] : groups_) {
            if (std::optional<Trend> trend = critical_trend(series.points, series.law)) {
                trend->quantity = label;
                trend->axis = "h";
                trend->parameters = std::get<Parameters>(group);
                trends.push_back(std::move(*trend));
            }
        }
    }

private:
    struct Series {
        std::vector<CriticalPoint> points;
        CriticalLaw law;
    };

    void add(const Parameters& point, const Reference& reference) {
        if (!reference.critical || !is_plain_number(reference)) {
            return;
        }
        const CriticalLaw& law = *reference.critical;
        Series& series = groups_[{
            without(point, {"sites", "h"}), law.field, law.below, law.at_point, law.exponent}];
        series.law = law;
        series.points.push_back({law.distance, reference.value.real_at(0), reference.bound[0]});
    }

    std::map<std::tuple<Parameters, double, bool, double, double>, Series> groups_;
};

}  // namespace

std::vector<Trend> case_trends(const CaseResult& result) {
    std::map<const CaseQuantity*, SizeSeries> sizes;
    std::map<const CaseQuantity*, FieldSeries> fields;
    for (const PointResult& point : result.points) {
        for (const QuantityResult& quantity : point.quantities) {
            sizes[quantity.quantity].add(point.parameters, quantity);
            fields[quantity.quantity].add(point.parameters, quantity);
        }
    }
    std::vector<Trend> trends;
    for (const CaseQuantity& quantity : result.source->quantities) {
        sizes[&quantity].append_trends(quantity.query.label, trends);
        fields[&quantity].append_trends(quantity.query.label, trends);
    }
    return trends;
}

}  // namespace chainmark
