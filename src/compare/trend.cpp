#include "chainmark/compare/trend.hpp"

#include <algorithm>
#include <cmath>
#include <functional>

#include <fmt/format.h>

namespace chainmark {
namespace {

constexpr std::size_t fewest_points = 3;

/// |value - limit| where it is larger than what the bounds leave open.
struct Distance {
    double x = 0.0;  ///< a size, or a distance from a critical point
    double log = 0.0;
    double log_error = 0.0;
};

std::optional<Distance> resolved(double x, double difference, double bound) {
    constexpr double margin = 10.0;
    const double size = std::abs(difference);
    return size > margin * bound && x > 0.0
               ? std::optional(Distance{x, std::log(size), bound / size})
               : std::nullopt;
}

/// A number with the place on an axis whose origin is asked for.
struct Step {
    double x = 0.0;
    double value = 0.0;
    double error = 0.0;
};

/// The polynomial through all steps (Lagrange), at x = 0.
Step at_origin(const Step* first, const Step* last) {
    Step sum;
    for (const Step* i = first; i != last; ++i) {
        double weight = 1.0;
        for (const Step* j = first; j != last; ++j) {
            weight *= j == i ? 1.0 : j->x / (j->x - i->x);
        }
        sum.value += weight * i->value;
        sum.error += std::abs(weight) * i->error;
    }
    return sum;
}

/// From the last `most` steps, those nearest to the origin; the error is what the last order
/// changed and what the steps' own errors make of it.
Step continued(const std::vector<Step>& steps, std::size_t most) {
    const std::size_t used = std::min(most, steps.size());
    const Step* end = steps.data() + steps.size();
    const Step full = at_origin(end - used, end);
    const Step lower = at_origin(end - used + 1, end);
    return {0.0, full.value, std::abs(full.value - lower.value) + full.error};
}

/// d(log distance)/d(coordinate) between neighbours, at `place`(x, x').
std::vector<Step> local_slopes(const std::vector<Distance>& points,
                               const std::function<double(double)>& coordinate,
                               const std::function<double(double, double)>& place) {
    std::vector<Step> slopes;
    for (std::size_t i = 0; i + 1 < points.size(); ++i) {
        const Distance& a = points[i];
        const Distance& b = points[i + 1];
        const double run = coordinate(b.x) - coordinate(a.x);
        slopes.push_back(
            {place(a.x, b.x), (b.log - a.log) / run, (a.log_error + b.log_error) / std::abs(run)});
    }
    return slopes;
}

double logarithm(double x) {
    return std::log(x);
}

double itself(double x) {
    return x;
}

double geometric_mean(double a, double b) {
    return std::sqrt(a) * std::sqrt(b);
}

double inverse_geometric_mean(double a, double b) {
    return 1 / geometric_mean(a, b);
}

Trend named(std::string name, const Step& step, std::optional<double> expected) {
    Trend trend;
    trend.trend = std::move(name);
    trend.value = step.value;
    trend.error = step.error;
    trend.expected = expected;
    return trend;
}

std::vector<Distance> resolved_sizes(const std::vector<SizePoint>& sizes,
                                     double limit,
                                     double bound) {
    std::vector<Distance> points;
    for (const SizePoint& size : sizes) {
        if (const auto point = resolved(size.sites, size.value - limit, size.bound + bound)) {
            points.push_back(*point);
        }
    }
    return points;
}

std::optional<Trend> power_trend(const std::vector<Distance>& points, double expected) {
    if (points.size() < fewest_points) {
        return std::nullopt;
    }
    Step exponent = continued(local_slopes(points, logarithm, inverse_geometric_mean), 2);
    exponent.value = -exponent.value;
    return named("exponent", exponent, expected);
}

std::optional<Trend> exponential_trend(const std::vector<Distance>& points, double expected) {
    if (points.size() < fewest_points) {
        return std::nullopt;
    }
    const Step rate = continued(local_slopes(points, itself, inverse_geometric_mean), 3);
    if (rate.value >= 0.0) {
        return std::nullopt;
    }
    const double length = -1 / rate.value;
    return named("decay_length", {0.0, length, length * length * rate.error}, expected);
}

std::optional<Trend> envelope_trend(const std::vector<SizePoint>& sizes,
                                    double limit,
                                    double bound,
                                    double exponent) {
    if (sizes.size() < fewest_points) {
        return std::nullopt;
    }
    Step height;
    for (const SizePoint& size : sizes) {
        const double scale = std::pow(size.sites, exponent);
        const double here = scale * std::abs(size.value - limit);
        if (here >= height.value) {
            height = {0.0, here, scale * (size.bound + bound)};
        }
    }
    return named("envelope", height, std::nullopt);
}

/// With a surface term y = L^power (value - limit) is S L + A + B/L + ...: y/L is a polynomial in
/// 1/L whose slope at the origin is A, and so are the slopes between neighbours continued there.
std::vector<Step> without_surface(const std::vector<Step>& scaled) {
    std::vector<Step> slopes;
    for (std::size_t i = 0; i + 1 < scaled.size(); ++i) {
        const double a = std::sqrt(scaled[i].x);
        const double b = std::sqrt(scaled[i + 1].x);
        slopes.push_back({(a + b) / 2,
                          (scaled[i + 1].value * b - scaled[i].value * a) / (b - a),
                          (scaled[i + 1].error * b + scaled[i].error * a) / std::abs(b - a)});
    }
    return slopes;
}

std::optional<Trend> amplitude_trend(const std::vector<SizePoint>& sizes,
                                     double limit,
                                     double bound,
                                     const Approach::Amplitude& amplitude) {
    if (sizes.size() < fewest_points || sizes.front().sites % 2 != 0) {
        return std::nullopt;
    }
    std::vector<Step> steps;
    for (const SizePoint& size : sizes) {
        const double scale = amplitude.factor * std::pow(size.sites, amplitude.power);
        steps.push_back({std::pow(size.sites, -2.0),
                         scale * (size.value - limit),
                         std::abs(scale) * (size.bound + bound)});
    }
    if (amplitude.surface) {
        steps = without_surface(steps);
    }
    return named(amplitude.name, continued(steps, 3), amplitude.expected);
}

}  // namespace

std::vector<Trend> approach_trends(const std::vector<SizePoint>& sizes,
                                   double limit,
                                   double limit_bound,
                                   const Approach& approach) {
    std::vector<SizePoint> ordered = sizes;
    std::sort(ordered.begin(), ordered.end(), [](const SizePoint& a, const SizePoint& b) {
        return a.sites < b.sites;
    });
    if (ordered.empty() || (approach.even_sizes_only && ordered.front().sites % 2 != 0)) {
        return {};
    }
    const auto law = [&]() -> std::optional<Trend> {
        switch (approach.law) {
            case Approach::Law::power:
                return power_trend(resolved_sizes(ordered, limit, limit_bound), approach.exponent);
            case Approach::Law::exponential:
                return exponential_trend(resolved_sizes(ordered, limit, limit_bound),
                                         approach.decay_length);
            case Approach::Law::envelope:
                break;
        }
        return envelope_trend(ordered, limit, limit_bound, approach.exponent);
    };
    std::vector<Trend> trends;
    if (std::optional<Trend> trend = law()) {
        trends.push_back(std::move(*trend));
    }
    if (approach.amplitude) {
        if (auto trend = amplitude_trend(ordered, limit, limit_bound, *approach.amplitude)) {
            trends.push_back(std::move(*trend));
        }
    }
    return trends;
}

std::optional<Trend> critical_trend(const std::vector<CriticalPoint>& points,
                                    const CriticalLaw& law) {
    constexpr double near = 0.5;
    std::vector<Distance> distances;
    for (const CriticalPoint& point : points) {
        if (point.distance <= near * law.field) {
            const auto found = resolved(point.distance, point.value - law.at_point, point.bound);
            if (found) {
                distances.push_back(*found);
            }
        }
    }
    std::sort(distances.begin(), distances.end(), [](const Distance& a, const Distance& b) {
        return a.x > b.x;
    });
    const auto same = [](const Distance& a, const Distance& b) { return a.x == b.x; };
    distances.erase(std::unique(distances.begin(), distances.end(), same), distances.end());
    if (distances.size() < fewest_points) {
        return std::nullopt;
    }
    Trend trend = named(
        "exponent", continued(local_slopes(distances, logarithm, geometric_mean), 2), law.exponent);
    trend.group = fmt::format("{} {}", law.below ? "below" : "above", law.field);
    return trend;
}

}  // namespace chainmark
