#include "chainmark/compare/trend.hpp"

#include <algorithm>
#include <cmath>

namespace chainmark {
namespace {

constexpr std::size_t fewest_sizes = 3;

struct LogPoint {
    double log_size;
    double log_distance;
};

/// Sizes whose distance from the limit is larger than what the bounds leave open.
std::vector<LogPoint> resolved(const std::vector<SizePoint>& sizes, double limit, double bound) {
    constexpr double margin = 10.0;
    std::vector<LogPoint> points;
    for (const SizePoint& size : sizes) {
        const double distance = std::abs(size.value - limit);
        if (distance > margin * (size.bound + bound)) {
            points.push_back({std::log(static_cast<double>(size.sites)), std::log(distance)});
        }
    }
    return points;
}

std::optional<Trend> power_trend(const std::vector<LogPoint>& points, double expected) {
    if (points.size() < fewest_sizes) {
        return std::nullopt;
    }
    const auto n = static_cast<double>(points.size());
    double mean_x = 0.0;
    double mean_y = 0.0;
    for (const LogPoint& p : points) {
        mean_x += p.log_size / n;
        mean_y += p.log_distance / n;
    }
    double covariance = 0.0;
    double variance = 0.0;
    for (const LogPoint& p : points) {
        covariance += (p.log_size - mean_x) * (p.log_distance - mean_y);
        variance += (p.log_size - mean_x) * (p.log_size - mean_x);
    }
    Trend trend;
    trend.trend = "exponent";
    trend.value = -covariance / variance;
    for (std::size_t i = 1; i < points.size(); ++i) {
        const double slope = -(points[i].log_distance - points[i - 1].log_distance) /
                             (points[i].log_size - points[i - 1].log_size);
        trend.error = std::max(trend.error, std::abs(slope - trend.value));
    }
    trend.expected = expected;
    return trend;
}

std::optional<Trend> envelope_trend(const std::vector<SizePoint>& sizes,
                                    double limit,
                                    double bound,
                                    double exponent) {
    if (sizes.size() < fewest_sizes) {
        return std::nullopt;
    }
    Trend trend;
    trend.trend = "envelope";
    for (const SizePoint& size : sizes) {
        const double scale = std::pow(size.sites, exponent);
        const double height = scale * std::abs(size.value - limit);
        if (height >= trend.value) {
            trend.value = height;
            trend.error = scale * (size.bound + bound);
        }
    }
    return trend;
}

}  // namespace

std::optional<Trend> approach_trend(const std::vector<SizePoint>& sizes,
                                    double limit,
                                    double limit_bound,
                                    const Approach& approach) {
    std::vector<SizePoint> ordered = sizes;
    std::sort(ordered.begin(), ordered.end(), [](const SizePoint& a, const SizePoint& b) {
        return a.sites < b.sites;
    });
    if (approach.law == Approach::Law::power) {
        return power_trend(resolved(ordered, limit, limit_bound), approach.exponent);
    }
    return envelope_trend(ordered, limit, limit_bound, approach.exponent);
}

}  // namespace chainmark
