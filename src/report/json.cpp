#include "chainmark/report/json.hpp"

#include <cmath>

#include <nlohmann/json.hpp>

#include "chainmark/report/words.hpp"

namespace chainmark {
namespace {

using Json = nlohmann::ordered_json;

Json finite_or_null(double x) {
    return std::isfinite(x) ? Json(x) : Json(nullptr);
}

template <class T>
Json or_null(const std::optional<T>& x) {
    return x ? Json(*x) : Json(nullptr);
}

Json or_null(const std::optional<double>& x) {
    return x ? finite_or_null(*x) : Json(nullptr);
}

/// element(i) for a number; nested arrays of element(i), last axis fastest, for an array.
template <class Element>
Json shaped(const Value& value, const Element& element) {
    if (value.kind != Kind::array) {
        return element(std::size_t{0});
    }
    std::size_t next = 0;
    const auto nested = [&](const auto& self, std::size_t axis) -> Json {
        if (axis == value.shape.size()) {
            return element(next++);
        }
        Json list = Json::array();
        for (std::size_t i = 0; i < value.shape[axis]; ++i) {
            list.push_back(self(self, axis + 1));
        }
        return list;
    };
    return nested(nested, 0);
}

Json element_json(const Value& value, std::size_t i) {
    if (shown_status(value, i) != Special::none) {
        return nullptr;
    }
    const std::complex<double> x = value.data[i];
    return value.complex ? Json::array({x.real(), x.imag()}) : Json(x.real());
}

Json status_json(const Value& value, std::size_t i) {
    const Special status = shown_status(value, i);
    return status == Special::none ? Json(nullptr) : Json(to_string(status));
}

bool any_status(const Value& value) {
    for (std::size_t i = 0; i < value.data.size(); ++i) {
        if (shown_status(value, i) != Special::none) {
            return true;
        }
    }
    return false;
}

/// Adds `value` and what explains it: `status`, `complex`, `total_sz`.
void add_value(Json& json, const Value& value) {
    if (value.kind == Kind::text) {
        json["value"] = value.text;
        return;
    }
    json["value"] = shaped(value, [&](std::size_t i) { return element_json(value, i); });
    if (any_status(value)) {
        json["status"] = shaped(value, [&](std::size_t i) { return status_json(value, i); });
    }
    if (value.complex) {
        json["complex"] = true;
    }
    if (!value.total_sz.empty()) {
        json["total_sz"] = value.total_sz;
    }
}

Json bound_json(const Reference& reference) {
    return shaped(reference.value, [&](std::size_t i) {
        return i < reference.bound.size() ? finite_or_null(reference.bound[i]) : Json(nullptr);
    });
}

Json enclosure_json(const Reference& reference) {
    return shaped(reference.value, [&](std::size_t i) -> Json {
        if (i >= reference.enclosure.size()) {
            return nullptr;
        }
        const auto& [mid, radius] = reference.enclosure[i];
        return {{"mid", mid}, {"radius", radius}};
    });
}

Json range_json(const Reference& reference) {
    if (!reference.range) {
        return nullptr;
    }
    return shaped(reference.value, [&](std::size_t i) -> Json {
        if (i >= reference.range->size()) {
            return nullptr;
        }
        const auto [low, high] = (*reference.range)[i];
        return std::isfinite(low) && std::isfinite(high) ? Json::array({low, high}) : Json(nullptr);
    });
}

Json labels_json(const Labels& labels) {
    Json json = Json::object();
    const auto add = [&](const char* name, const auto& label) {
        if (label) {
            json[name] = *label;
        }
    };
    add("sz", labels.sz);
    add("momentum", labels.momentum);
    add("parity", labels.parity);
    add("reflection", labels.reflection);
    add("inversion", labels.inversion);
    return json;
}

Json sectors_json(const std::vector<Labels>& levels) {
    Json list = Json::array();
    for (const Labels& labels : levels) {
        list.push_back(labels_json(labels));
    }
    return list;
}

Json skipped_json(const std::vector<Skipped>& skipped) {
    Json list = Json::array();
    for (const Skipped& part : skipped) {
        list.push_back({{"sectors", part.sectors}, {"proof", part.proof}});
    }
    return list;
}

Json reference_json(const Reference& reference) {
    Json json;
    json["route"] = to_string(reference.route);
    add_value(json, reference.value);
    json["bound"] = bound_json(reference);
    json["basis"] = to_string(reference.basis);
    if (!reference.enclosure.empty()) {
        json["enclosure"] = enclosure_json(reference);
    }
    json["seconds"] = finite_or_null(reference.seconds);
    if (reference.complete) {
        json["completeness"] = to_string(*reference.complete);
    }
    if (!reference.labels.empty()) {
        json["sectors"] = sectors_json(reference.labels);
    }
    if (!reference.skipped.empty()) {
        json["skipped"] = skipped_json(reference.skipped);
    }
    json["degeneracy"] = or_null(reference.degeneracy);
    json["range"] = range_json(reference);
    return json;
}

Json option_json(OptionId option, const Options& given) {
    switch (option) {
        case OptionId::count:
            return given.count;
        case OptionId::sector:
            return given.sector ? labels_json(*given.sector) : Json(nullptr);
        case OptionId::axis:
            return to_string(given.axis);
        case OptionId::axes:
            return to_string(given.axes);
        case OptionId::distance:
            return given.distance;
        case OptionId::pairs:
            return given.pairs;
        case OptionId::connected:
            return given.connected;
        case OptionId::block:
            return given.block;
        case OptionId::order:
            return given.order;
        case OptionId::log:
            return given.log2 ? Json(2) : Json(nullptr);
        case OptionId::parity:
            return to_string(given.parity);
    }
    return nullptr;
}

Json options_json(const Query& query) {
    Json json = Json::object();
    for (const OptionId option : query.spec->options) {
        Json value = option_json(option, query.options);
        if (!value
                 .empty()) {  // null: not given; an empty list: of `distance` and `pairs` the other
            json[to_string(option)] = std::move(value);
        }
    }
    return json;
}

Json not_run_json(const std::vector<NotRun>& routes) {
    Json list = Json::array();
    for (const NotRun& route : routes) {
        list.push_back({{"route", to_string(route.route)}, {"reason", route.reason}});
    }
    return list;
}

Json quantity_json(const QuantityResult& result) {
    const Query& query = result.quantity->query;
    const Comparison& comparison = result.comparison;
    Json json;
    json["quantity"] = query.spec->name;
    json["label"] = query.label;
    json["options"] = options_json(query);
    json["verdict"] = to_string(comparison.verdict);
    if (comparison.verdict == Verdict::differ || comparison.verdict == Verdict::undecided) {
        json["reason"] = comparison.reason;
    }
    json["references"] = Json::array();
    for (const Reference& reference : result.references) {
        json["references"].push_back(reference_json(reference));
    }
    if (result.infinite) {
        json["infinite_chain"] = reference_json(*result.infinite);
    }
    json["difference"] = or_null(comparison.difference);
    json["allowed"] = or_null(comparison.allowed);
    json["digits"] = or_null(comparison.digits);
    json["candidate"] = nullptr;
    json["slips"] = Json::array();
    json["not_run"] = not_run_json(result.not_run);
    return json;
}

Json parameters_json(const Parameters& parameters) {
    Json json = Json::object();
    for (const auto& [name, value] : parameters) {
        if (name != "sites") {
            json[name] = finite_or_null(value);
        } else if (value == infinite_sites) {
            json[name] = "infinite";
        } else {
            json[name] = static_cast<int>(value);
        }
    }
    return json;
}

Json point_json(const PointResult& point) {
    Json json;
    json["parameters"] = parameters_json(point.parameters);
    json["quantities"] = Json::array();
    for (const QuantityResult& result : point.quantities) {
        json["quantities"].push_back(quantity_json(result));
    }
    return json;
}

Json trend_json(const Trend& trend) {
    Json json;
    json["trend"] = trend.trend;
    json["quantity"] = trend.quantity;
    json["axis"] = trend.axis;
    json["group"] = trend.group;
    json["parameters"] = parameters_json(trend.parameters);
    json["value"] = finite_or_null(trend.value);
    json["error"] = finite_or_null(trend.error);
    json["expected"] = or_null(trend.expected);
    return json;
}

Json case_json(const CaseResult& result, bool interrupted) {
    Json json;
    json["case"] = result.source->source;
    json["title"] = result.source->title;
    json["verdict"] = to_string(result.verdict);
    if (interrupted) {
        json["points_planned"] = result.points_planned;
    }
    json["points"] = Json::array();
    for (const PointResult& point : result.points) {
        json["points"].push_back(point_json(point));
    }
    json["trends"] = Json::array();
    for (const Trend& trend : result.trends) {
        json["trends"].push_back(trend_json(trend));
    }
    json["effective_case"] = result.source->effective;
    return json;
}

Json provenance_json(const Provenance& provenance) {
    return {{"version", provenance.version},
            {"commit", provenance.commit},
            {"compiler", provenance.compiler},
            {"threads", provenance.threads},
            {"memory_gib", finite_or_null(provenance.memory_gib)},
            {"command_line", provenance.command_line},
            {"started", provenance.started},
            {"wall_seconds", finite_or_null(provenance.wall_seconds)}};
}

}  // namespace

std::string run_json(const RunReport& report) {
    Json json;
    json["chainmark"] = report.provenance.version;
    json["format"] = 1;
    json["command"] = "run";
    json["verdict"] = to_string(overall_verdict(report));
    if (report.interrupted) {
        json["interrupted"] = true;
    }
    json["provenance"] = provenance_json(report.provenance);
    json["cases"] = Json::array();
    for (const CaseResult& result : report.cases) {
        json["cases"].push_back(case_json(result, report.interrupted));
    }
    // A path on the command line need not be UTF-8, JSON text must be.
    return json.dump(1, ' ', false, Json::error_handler_t::replace) + '\n';
}

}  // namespace chainmark
