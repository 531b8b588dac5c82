#pragma once

#include <chrono>
#include <memory>
#include <mutex>
#include <string>
#include <thread>

#include "chainmark/base/context.hpp"

namespace chainmark::cli {

/// A line on a terminal, redrawn in place once the work has lasted a second:
///   chainmark: 42 %  about 12 s left  (xx-ring: sector, 12 sites)
class ProgressLine : public Progress {
public:
    ~ProgressLine() override { end(); }
    void begin(double total_work) override;
    void started(const std::string& what) override;
    void finished(double work) override;
    void end() override;

private:
    using Clock = std::chrono::steady_clock;

    void draw();

    std::mutex mutex_;
    double total_ = 0.0;
    double done_ = 0.0;
    std::string what_;
    Clock::time_point started_;
    Clock::time_point advanced_;
    bool active_ = false;
    bool drawn_ = false;
    std::jthread redraw_;
};

/// A ProgressLine where stderr is a terminal, nothing elsewhere.
std::shared_ptr<Progress> terminal_progress();

/// Whole seconds, minutes or hours that remain: "12 s", "3 min", "2 h".
std::string duration_text(double seconds);

}  // namespace chainmark::cli
