#include "chainmark/cli/interrupt.hpp"

#include <array>
#include <cerrno>
#include <chrono>
#include <csignal>
#include <cstdlib>
#include <thread>

#include <semaphore.h>

#include "chainmark/cli/exit_codes.hpp"

namespace chainmark::cli {
namespace {

constexpr std::array signals = {SIGINT, SIGTERM};

sem_t arrived;  // one of the few things a signal handler may touch

void note_signal(int) {
    const int before = errno;
    sem_post(&arrived);
    errno = before;
}

void handle_signals(void (*handler)(int)) {
    struct sigaction action = {};
    action.sa_handler = handler;
    action.sa_flags = SA_RESTART;
    sigemptyset(&action.sa_mask);
    for (const int signal : signals) {
        sigaction(signal, &action, nullptr);
    }
}

void wait_for_signal() {
    while (sem_wait(&arrived) != 0) {
    }
}

/// Forgets signals that came together with the first: timeout(1) and batch systems signal the
/// process and then its whole group, which is one request and not two.
void forget_echoes() {
    std::this_thread::sleep_for(std::chrono::milliseconds(500));
    while (sem_trywait(&arrived) == 0) {
    }
}

}  // namespace

InterruptWatch::InterruptWatch() {
    sem_init(&arrived, 0, 0);
    handle_signals(note_signal);
    waiter_ = std::jthread([this](const std::stop_token& done) {
        wait_for_signal();
        if (!done.stop_requested()) {
            source_.request_stop();
            forget_echoes();
            wait_for_signal();
        }
        if (!done.stop_requested()) {
            std::_Exit(exit_interrupted);
        }
    });
}

InterruptWatch::~InterruptWatch() {
    handle_signals(SIG_DFL);
    waiter_.request_stop();
    sem_post(&arrived);
    waiter_.join();
    sem_destroy(&arrived);
}

}  // namespace chainmark::cli
