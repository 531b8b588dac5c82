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

/// The exponent that two sizes alone would give, and where on the 1/L axis it stands.
struct LocalSlope {
    double inverse_size;
    double exponent;
};

LocalSlope local_slope(const LogPoint& a, const LogPoint& b) {
    return {std::exp(-(a.log_size + b.log_size) / 2),
            -(b.log_distance - a.log_distance) / (b.log_size - a.log_size)};
}

std::optional<Trend> power_trend(const std::vector<LogPoint>& points, double expected) {
    if (points.size() < fewest_sizes) {
        return std::nullopt;
    }
    const std::size_t n = points.size();
    const LocalSlope before = local_slope(points[n - 3], points[n - 2]);
    const LocalSlope last = local_slope(points[n - 2], points[n - 1]);
    const double drift =
        (before.exponent - last.exponent) / (before.inverse_size - last.inverse_size);
    Trend trend;
    trend.trend = "exponent";
    trend.value = last.exponent - drift * last.inverse_size;
    trend.error = std::abs(trend.value - last.exponent);
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
