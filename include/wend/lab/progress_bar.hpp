// wend/lab/progress_bar.hpp - how far a long piece of work is, on a terminal, and a clean end when somebody interrupts.
#pragma once

#include <atomic>
#include <chrono>
#include <csignal>
#include <cstddef>
#include <cstdint>
#include <cstdio>
#include <string>
#include <utility>

#include <unistd.h>

namespace wend::inline v0::lab {

/// A bar on the error stream, for work that takes over a second. Nothing when that is not a terminal.
class ProgressBar {
 public:
  /// `what` stands before the bar.
  explicit ProgressBar(std::string what) : what_(std::move(what)), shown_(::isatty(STDERR_FILENO) == 1) {}
  /// Wipes the bar off.
  ~ProgressBar() { clear(); }
  /// One bar at a time has the line.
  ProgressBar(ProgressBar const&) = delete;
  /// Neither is it assigned.
  ProgressBar& operator=(ProgressBar const&) = delete;

  /// From one thread at a time.
  void operator()(std::uint64_t done, std::uint64_t of) {
    auto const now = std::chrono::steady_clock::now();
    if (!shown_ || of == 0 || now - last_ < std::chrono::milliseconds(100) || now - start_ < std::chrono::seconds(1)) {
      return;
    }
    last_ = now;
    constexpr int width = 30;
    int const full = static_cast<int>(static_cast<double>(width) * static_cast<double>(done) / static_cast<double>(of));
    double const past = std::chrono::duration<double>(now - start_).count();
    double const left = done == 0 ? 0.0 : past * static_cast<double>(of - done) / static_cast<double>(done);
    std::string bar(static_cast<std::size_t>(full), '#');
    bar.resize(static_cast<std::size_t>(width), '.');
    std::fprintf(stderr, "\r%s [%s] %3.0f %%, %.0f s left \033[K", what_.c_str(), bar.c_str(),
                 100.0 * static_cast<double>(done) / static_cast<double>(of), left);
    drawn_ = true;
  }

  /// Takes the bar away, so that what is printed next has the line for itself.
  void clear() {
    if (drawn_) {
      std::fputs("\r\033[K", stderr);
      drawn_ = false;
    }
  }

 private:
  std::string what_;
  bool shown_;
  bool drawn_ = false;
  std::chrono::steady_clock::time_point start_ = std::chrono::steady_clock::now();
  std::chrono::steady_clock::time_point last_{};
};

namespace detail {

inline std::atomic<bool> interrupted{false};
static_assert(std::atomic<bool>::is_always_lock_free, "a signal handler may not wait for a lock");

extern "C" inline void wend_note_interrupt(int signal) {
  interrupted.store(true, std::memory_order_relaxed);
  std::signal(signal, SIG_DFL);  // whoever asks a second time is in a hurry
}

}  // namespace detail

/// From now on Ctrl-C, and a request to terminate, only set a flag, the first time: hand it to what should end early.
[[nodiscard]] inline std::atomic<bool> const& stop_on_interrupt() {
  std::signal(SIGINT, detail::wend_note_interrupt);
  std::signal(SIGTERM, detail::wend_note_interrupt);
  return detail::interrupted;
}

}  // namespace wend::inline v0::lab
