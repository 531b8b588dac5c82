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

/// The numbers that a program prints. Throws std::runtime_error where it fails.
std::vector<double> numbers_from(const std::string& command);

}  // namespace chainmark::bench
