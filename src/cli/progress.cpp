#include "chainmark/cli/progress.hpp"

#include <algorithm>
#include <cstdio>

#include <fmt/format.h>
#include <unistd.h>

namespace chainmark::cli {
namespace {

constexpr auto silent_start = std::chrono::seconds(1);
constexpr auto redraw_every = std::chrono::milliseconds(250);
constexpr std::size_t line_width = 79;
constexpr const char* clear_line = "\r\033[K";

double seconds(std::chrono::steady_clock::duration time) {
    return std::chrono::duration<double>(time).count();
}

}  // namespace

void ProgressLine::begin(double total_work) {
    end();
    const std::lock_guard lock(mutex_);
    total_ = total_work;
    done_ = 0.0;
    what_.clear();
    started_ = advanced_ = Clock::now();
    active_ = true;
    redraw_ = std::jthread([this](const std::stop_token& stop) {
        while (!stop.stop_requested()) {
            draw();
            std::this_thread::sleep_for(redraw_every);
        }
    });
}

void ProgressLine::started(const std::string& what) {
    const std::lock_guard lock(mutex_);
    what_ = what;
}

void ProgressLine::finished(double work) {
    const std::lock_guard lock(mutex_);
    done_ += work;
    advanced_ = Clock::now();
}

void ProgressLine::end() {
    redraw_ = std::jthread();  // stops and joins
    const std::lock_guard lock(mutex_);
    active_ = false;
    if (drawn_) {
        fmt::print(stderr, "{}", clear_line);
        std::fflush(stderr);
        drawn_ = false;
    }
}

/// Once a tenth is done, the rate so far times the work that is left; before that the plan's own
/// estimate. Work that takes longer than that says for how long it has been going.
void ProgressLine::draw() {
    constexpr double enough = 0.1;
    const std::lock_guard lock(mutex_);
    const Clock::time_point now = Clock::now();
    if (!active_ || now - started_ < silent_start) {
        return;
    }
    const double part = total_ > 0.0 ? std::min(done_ / total_, 1.0) : 0.0;
    const double whole = part > enough ? seconds(advanced_ - started_) / part : total_;
    const double left = whole - seconds(now - started_);
    std::string line = fmt::format("chainmark: {:.0f} %", 100.0 * part);
    line += left > 0.0 ? fmt::format("  about {} left", duration_text(left))
                       : fmt::format("  longer than estimated, {} so far",
                                     duration_text(seconds(now - started_)));
    if (!what_.empty()) {
        line += fmt::format("  ({})", what_);
    }
    line.resize(std::min(line.size(), line_width));
    fmt::print(stderr, "{}{}", clear_line, line);
    std::fflush(stderr);
    drawn_ = true;
}

std::shared_ptr<Progress> terminal_progress() {
    return isatty(STDERR_FILENO) == 1 ? std::make_shared<ProgressLine>() : nullptr;
}

std::string duration_text(double seconds) {
    constexpr double minute = 60.0;
    constexpr double hour = 60.0 * minute;
    if (seconds < 2 * minute) {
        return fmt::format("{:.0f} s", seconds);
    }
    return seconds < 2 * hour ? fmt::format("{:.0f} min", seconds / minute)
                              : fmt::format("{:.0f} h", seconds / hour);
}

}  // namespace chainmark::cli
