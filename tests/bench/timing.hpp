#pragma once

#include <functional>
#include <string>
#include <vector>

/// Times that can be compared on a machine that does other work beside.
namespace chainmark::bench {

using Task = std::function<void()>;

double seconds_of(const Task& task);

/// Median seconds of one call of each task. They take turns, `rounds` times, so that what else the
/// machine does meets all of them alike. In each turn a task is called until `least` seconds have
/// passed, after one call that is not measured; with least = 0 it is called once.
std::vector<double> in_turn(int rounds, double least, const std::vector<Task>& tasks);

/// A line of the system's account of this process's memory in bytes (Linux): "VmRSS:" what lies in
/// memory now, "VmHWM:" the most so far. Throws std::runtime_error where there is none.
double memory_of_process(const std::string& line);

/// The numbers that a program prints. Throws std::runtime_error where it fails.
std::vector<double> numbers_from(const std::string& command);

}  // namespace chainmark::bench
