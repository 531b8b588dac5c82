#include "bench/timing.hpp"

#include <algorithm>
#include <chrono>
#include <cstdio>
#include <fstream>
#include <sstream>
#include <stdexcept>
#include <thread>

namespace chainmark::bench {
namespace {

/// OpenMP's threads spin for some milliseconds after their work and would slow the next task.
void let_threads_fall_asleep() {
    std::this_thread::sleep_for(std::chrono::milliseconds(20));
}

double seconds_per_call(const Task& task, double least) {
    if (least == 0.0) {
        return seconds_of(task);
    }
    task();
    double total = 0.0;
    int calls = 0;
    for (; total < least; ++calls) {
        total += seconds_of(task);
    }
    return total / calls;
}

}  // namespace

double seconds_of(const Task& task) {
    const auto start = std::chrono::steady_clock::now();
    task();
    return std::chrono::duration<double>(std::chrono::steady_clock::now() - start).count();
}

double memory_of_process(const std::string& line) {
    std::ifstream status("/proc/self/status");
    std::string word;
    double kibibytes = 0.0;
    while (status >> word) {
        if (word == line && status >> kibibytes) {
            return 1024 * kibibytes;
        }
    }
    throw std::runtime_error("no " + line + " in /proc/self/status");
}

std::vector<double> in_turn(int rounds, double least, const std::vector<Task>& tasks) {
    std::vector<std::vector<double>> seconds(tasks.size());
    for (int round = 0; round < rounds; ++round) {
        for (std::size_t i = 0; i < tasks.size(); ++i) {
            let_threads_fall_asleep();
            seconds[i].push_back(seconds_per_call(tasks[i], least));
        }
    }
    std::vector<double> medians;
    for (std::vector<double>& one : seconds) {
        std::sort(one.begin(), one.end());
        medians.push_back(one[one.size() / 2]);
    }
    return medians;
}

std::vector<double> numbers_from(const std::string& command) {
    FILE* const pipe = popen(command.c_str(), "r");  // NOLINT(cert-env33-c): our own programs
    if (pipe == nullptr) {
        throw std::runtime_error("cannot start " + command);
    }
    std::string text;
    char buffer[256];
    while (std::fgets(buffer, sizeof buffer, pipe) != nullptr) {
        text += buffer;
    }
    if (pclose(pipe) != 0) {
        throw std::runtime_error("failed: " + command);
    }
    std::istringstream words(text);
    std::vector<double> numbers;
    for (double number = 0.0; words >> number;) {
        numbers.push_back(number);
    }
    return numbers;
}

}  // namespace chainmark::bench
