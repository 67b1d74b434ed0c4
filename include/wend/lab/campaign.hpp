// wend/lab/campaign.hpp - many runs of one loop, each its own start, goal and noise: on lanes and on threads, and the
// same runs on any number of either.
#pragma once

#include <algorithm>
#include <atomic>
#include <cstddef>
#include <cstdint>
#include <exception>
#include <functional>
#include <mutex>
#include <thread>
#include <type_traits>
#include <utility>
#include <vector>

#include "wend/lab/ground.hpp"
#include "wend/lab/lane_runner.hpp"
#include "wend/lab/run_row.hpp"
#include "wend/lab/scenes.hpp"
#include "wend/lab/simulate.hpp"
#include "wend/lab/vehicle.hpp"
#include "wend/loop.hpp"

namespace wend::inline v0::lab {

/// How a campaign is driven. None of it changes a row but `finest`.
struct CampaignOptions {
  std::uint64_t first = 0;  ///< number of the first run
  int threads = 1;  ///< 1 or more, that drive runs side by side
  double finest = 0.01;     ///< seconds: the longest step of a plant on lanes
  std::atomic<bool> const* stop = nullptr;  ///< once true, it ends soon, and gives the rows so far
  /// Called after each run, from one thread at a time: runs done, and runs in all.
  std::function<void(std::uint64_t, std::uint64_t)> progress{};
};

/// What a campaign gives: one row a run, by run number.
struct Campaign {
  std::vector<RunRow> rows;  ///< in rising order of RunRow::run
  bool complete = true;  ///< false when it was stopped: then some runs are missing
};

namespace detail {

// What the threads of a campaign share.
class CampaignQueue {
 public:
  CampaignQueue(std::uint64_t runs, CampaignOptions const& options) : options_(options), runs_(runs) {}

  // The next run to drive; false when there is none, or somebody wants an end.
  bool next(std::uint64_t& run) {
    if (stopped()) {
      return false;
    }
    std::uint64_t const place = next_.fetch_add(1, std::memory_order_relaxed);
    run = options_.first + place;
    return place < runs_;
  }
  [[nodiscard]] bool stopped() const {
    return failed_ || (options_.stop != nullptr && options_.stop->load(std::memory_order_relaxed));
  }

  void finish(RunRow const& row) {
    std::lock_guard const held(guard_);
    rows_.push_back(row);
    if (options_.progress) {
      options_.progress(rows_.size(), runs_);
    }
  }

  void fail() {
    std::lock_guard const held(guard_);
    if (!failed_) {
      error_ = std::current_exception();
    }
    failed_ = true;
  }

  // When all threads are done.
  [[nodiscard]] Campaign result() {
    if (error_) {
      std::rethrow_exception(error_);
    }
    std::sort(rows_.begin(), rows_.end(), [](RunRow const& a, RunRow const& b) { return a.run < b.run; });
    bool const complete = rows_.size() == runs_;
    return {std::move(rows_), complete};
  }

 private:
  CampaignOptions const& options_;
  std::uint64_t runs_;
  std::atomic<std::uint64_t> next_{0};
  std::atomic<bool> failed_{false};
  std::mutex guard_;
  std::vector<RunRow> rows_;  // as they end
  std::exception_ptr error_;
};

// Whether a loop is driven on lanes: it has no ranger of its own.
template <typename Loop>
inline constexpr bool is_told_discs = std::is_same_v<decltype(Loop::sensing), no_sensing>;

// One run in scalar simulation, as `simulate` does it.
template <typename Loop>
RunRow simulate_row(Loop const& loop, Vehicle const& vehicle, SceneOf const& scene, std::uint64_t seed,
                    std::uint64_t run, Run* kept = nullptr) {
  Run driven = simulate(loop, vehicle, scene.ground->world(), scene.trip, seed, run, kept != nullptr);
  RunRow row = row_of(driven, scene.trip, run, scene.number);
  if (kept != nullptr) {
    *kept = std::move(driven);
  }
  return row;
}

template <int Lanes, int Told, typename Loop>
void drive_some(Loop const& loop, Vehicle const& vehicle, GroundList const& grounds, std::uint64_t seed,
                CampaignOptions const& options, CampaignQueue& queue) {
  auto const scalar = [&](std::uint64_t run, SceneOf const& scene) {
    queue.finish(simulate_row(loop, vehicle, scene, seed, run));
  };
  if constexpr (is_told_discs<Loop>) {
    LaneRunner<Lanes, Told, Loop> runner(loop, vehicle, grounds.most_discs(), options.finest, seed);
    // The next run for a lane; what moves is not for lanes, and driven at once.
    auto const next = [&](std::uint64_t& run, SceneOf& scene) {
      while (queue.next(run)) {
        scene = grounds.scene(seed, run);
        if (!scene.ground->moving()) {
          return true;
        }
        scalar(run, scene);
      }
      return false;
    };
    runner.drive(next, [&](RunRow const& row) { queue.finish(row); }, [&] { return queue.stopped(); });
  } else {
    for (std::uint64_t run = 0; queue.next(run);) {
      scalar(run, grounds.scene(seed, run));
    }
  }
}

}  // namespace detail

/// Drives runs `options.first`, `options.first` + 1, ... of a campaign. Everything that chance decides (which world,
/// start, goal, noise, dropouts, jitter, slip, spread) is drawn by counting from the seed and the run's number, so a
/// run is the same whatever else is driven, in whatever order, on however many threads and lanes: the rows have the
/// same bits.
///
/// A loop without a ranger is driven `Lanes` machines at a time, in single precision (see Plant and Surroundings), and
/// told the nearest discs, at most `Told` and within the vehicle's sight. The time of a run grows with Told, not with
/// the world. A contact ends a run at the end of its tick; the least clearance is that of the whole way, between ticks
/// too, and never more than it was. Worlds with discs that move, and loops with a ranger, are driven by `simulate`, one
/// at a time on each thread. Same rows with any compiler only if it rounds each operation by itself (-ffp-contract=off;
/// no -ffast-math); a ranger's noise comes from the C library's logarithm and cosine.
///
/// Throws what the scenes' functions throw, and std::invalid_argument for a vehicle or scenes that cannot be.
template <int Lanes = native_lanes, int Told = discs_told, typename Loop>
[[nodiscard]] Campaign campaign(Loop const& loop, Vehicle const& vehicle, Scenes const& scenes, std::uint64_t runs,
                                std::uint64_t seed, CampaignOptions const& options = {}) {
  detail::GroundList const grounds(scenes, Told);
  detail::CampaignQueue queue(runs, options);
  auto const work = [&] {
    try {
      detail::drive_some<Lanes, Told>(loop, vehicle, grounds, seed, options, queue);
    } catch (...) {
      queue.fail();
    }
  };
  {
    std::vector<std::jthread> others;
    for (int i = 1; i < options.threads; ++i) {
      others.emplace_back(work);
    }
    work();
  }
  return queue.result();
}

/// One run, with its ticks.
struct Replay {
  RunRow row;  ///< as the campaign had it
  Run run;  ///< the same run, with its ticks
  Scene scene;  ///< it was driven in
};

/// Drives one run of a campaign again, alone and with its ticks kept: the row has the same bits. `Told` and `finest`
/// must be those of the campaign.
template <int Told = discs_told, typename Loop>
[[nodiscard]] Replay replay_run(Loop const& loop, Vehicle const& vehicle, Scenes const& scenes, std::uint64_t run,
                                std::uint64_t seed, CampaignOptions const& options = {}) {
  detail::GroundList const grounds(scenes, Told);
  detail::SceneOf const scene = grounds.scene(seed, run);
  Replay replay{{}, {}, {scene.ground->world(), scene.trip}};
  if constexpr (detail::is_told_discs<Loop>) {
    if (!scene.ground->moving()) {
      detail::LaneRunner<1, Told, Loop> runner(loop, vehicle, grounds.most_discs(), options.finest, seed);
      bool given = false;
      runner.keep_ticks(&replay.run.ticks);
      runner.drive(
          [&](std::uint64_t& number, detail::SceneOf& place) {
            number = run;
            place = scene;
            return !std::exchange(given, true);
          },
          [&](RunRow const& row) { replay.row = row; }, [] { return false; });
      RunRow const& row = replay.row;
      Run& kept = replay.run;
      kept.ending = row.ending;
      kept.last_status = row.last_status;
      kept.time = row.time;
      kept.path_length = row.path_length;
      kept.straight_length = row.straight_length;
      kept.least_clearance = row.least_clearance;
      kept.switches = row.switches;
      kept.least_dwell = row.least_dwell;
      return replay;
    }
  }
  replay.row = detail::simulate_row(loop, vehicle, scene, seed, run, &replay.run);
  return replay;
}

}  // namespace wend::inline v0::lab
