// wend/lab/search.hpp - branch and bound: splits boxes until each is decided, by several threads, within a budget.
#pragma once

#include <algorithm>
#include <atomic>
#include <condition_variable>
#include <cstddef>
#include <cstdint>
#include <functional>
#include <mutex>
#include <thread>
#include <utility>
#include <vector>

namespace wend::inline v0::lab {

/// What is known about one box.
enum class Finding : std::uint8_t {
  holds,    ///< for everything in it
  fails,    ///< for something in it; the search stops
  open,     ///< not known: to be split
  too_small,  ///< not known, and not worth splitting
};

/// How far a search has come.
struct SearchProgress {
  std::int64_t decided = 0;  ///< boxes looked at
  std::int64_t waiting = 0;  ///< boxes still to be looked at
};

/// Limits of a search.
struct SearchOptions {
  std::int64_t box_budget = 2'000'000;  ///< boxes to look at, at the most (threads may overrun it by a few dozen)
  int threads = 1;  ///< 1 or more, that look at boxes side by side
  std::function<void(SearchProgress)> progress;  ///< called now and then, from one thread at a time
};

/// What a search ends with.
template <typename Box>
struct SearchResult {
  bool failed = false;  ///< whether some box fails
  std::int64_t boxes = 0;  ///< looked at
  std::vector<Box> left;   ///< not decided: too small to split, or beyond the budget
};

/// Looks at boxes, depth first, until all hold, one fails, or the budget is spent. `decide(box)` gives a Finding and
/// may be called from several threads at once; `split(box)` gives the two halves.
template <typename Box, typename Decide, typename Split>
[[nodiscard]] SearchResult<Box> search(std::vector<Box> start, Decide const& decide, Split const& split,
                                       SearchOptions const& options) {
  constexpr std::size_t batch = 32;  // boxes between two looks at what is shared
  SearchResult<Box> result;
  std::vector<Box> waiting = std::move(start);
  std::mutex guard;
  std::condition_variable changed;
  int busy = 0;
  bool stop = false;
  std::atomic<bool> failed{false};
  std::int64_t next_call = 0;

  auto const work = [&]() {
    std::vector<Box> own;
    std::vector<Box> left;
    std::unique_lock lock(guard);
    while (true) {
      changed.wait(lock, [&] { return stop || failed || !waiting.empty() || busy == 0; });
      if (stop || failed || waiting.empty()) {
        break;
      }
      // A thread takes a share of the newest boxes, so that others find some too.
      std::size_t const share = std::min(waiting.size(), std::max<std::size_t>(1, std::min(batch, waiting.size() / 2)));
      own.assign(std::make_move_iterator(waiting.end() - static_cast<std::ptrdiff_t>(share)),
                 std::make_move_iterator(waiting.end()));
      waiting.resize(waiting.size() - share);
      ++busy;
      lock.unlock();
      std::int64_t looked = 0;
      for (std::size_t i = 0; i < batch && !own.empty() && !failed; ++i) {
        Box box = std::move(own.back());
        own.pop_back();
        ++looked;
        switch (decide(box)) {
          case Finding::holds: break;
          case Finding::fails: failed = true; break;
          case Finding::too_small: left.push_back(std::move(box)); break;
          case Finding::open: {
            auto halves = split(box);
            own.push_back(std::move(halves.second));
            own.push_back(std::move(halves.first));
            break;
          }
        }
      }
      lock.lock();
      --busy;
      result.boxes += looked;
      waiting.insert(waiting.end(), std::make_move_iterator(own.begin()), std::make_move_iterator(own.end()));
      stop = stop || result.boxes >= options.box_budget;
      if (options.progress && result.boxes >= next_call) {
        next_call = result.boxes + 10'000;
        options.progress({result.boxes, static_cast<std::int64_t>(waiting.size())});
      }
      changed.notify_all();
    }
    result.left.insert(result.left.end(), std::make_move_iterator(left.begin()), std::make_move_iterator(left.end()));
  };

  std::vector<std::thread> others;
  for (int i = 1; i < options.threads; ++i) {
    others.emplace_back(work);
  }
  work();
  for (std::thread& other : others) {
    other.join();
  }
  result.failed = failed;
  result.left.insert(result.left.end(), std::make_move_iterator(waiting.begin()),
                     std::make_move_iterator(waiting.end()));
  return result;
}

}  // namespace wend::inline v0::lab
