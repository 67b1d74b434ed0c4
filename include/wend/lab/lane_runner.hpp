// wend/lab/lane_runner.hpp - drives runs on lanes: as soon as one ends, the next one takes its lane.
#pragma once

#include <array>
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <limits>
#include <type_traits>
#include <vector>

#include "wend/lab/lanes.hpp"
#include "wend/lab/modes.hpp"
#include "wend/lab/plant.hpp"
#include "wend/lab/run_row.hpp"
#include "wend/lab/scenes.hpp"
#include "wend/lab/simulate.hpp"
#include "wend/lab/surroundings.hpp"
#include "wend/lab/vehicle.hpp"
#include "wend/loop.hpp"
#include "wend/members.hpp"

namespace wend::inline v0::lab::detail {

// Where a guard has changed its mind between two memories: modes_of on lanes.
template <Number S, typename Memory>
void gather_changes(Memory const& before, Memory const& after, mask_t<S>& changed) noexcept {
  if constexpr (std::is_aggregate_v<Memory> && !std::is_empty_v<Memory>) {
    if constexpr (requires { after.is_inside; }) {
      changed = changed || (before.is_inside && !after.is_inside) || (!before.is_inside && after.is_inside);
    }
    v0::for_each_member(before, after,
                        [&changed](auto const& b, auto const& a) noexcept { gather_changes<S>(b, a, changed); });
  }
}

// One lane of findings.
template <Number S>
[[nodiscard]] Findings<float> findings_of(Findings<S> const& f, int k) noexcept {
  return {lane(f.stale, k),   lane(f.blind, k), lane(f.arrived, k),      lane(f.no_course, k),
          lane(f.blocked, k), lane(f.stuck, k), lane(f.discs_dropped, k)};
}

template <int Lanes, int Told, typename Loop>
class LaneRunner {
 public:
  using S = lanes_t<Lanes>;

  LaneRunner(Loop const& loop, Vehicle const& vehicle, int slots, double finest, std::uint64_t seed)
      : loop_(loop), seed_(seed), plant_(vehicle, finest, seed), around_(vehicle, slots) {}

  // Keeps the ticks of the run on the one lane there is.
  void keep_ticks(std::vector<Tick>* ticks) { ticks_ = ticks; }

  // Drives what `next(run, scene)` gives until it gives no more and all have ended, or until `stop()`.
  template <typename Next, typename Finish, typename Stop>
  void drive(Next const& next, Finish const& finish, Stop const& stop) {
    auto const active = [this](int k) { return lanes_[static_cast<std::size_t>(k)].active; };
    while (fill(next, finish) && !stop()) {
      Pose<S> const pose = plant_.pose();
      around_.look_around(pose, plant_.most_driven(), active);
      memory_t<Loop, S> const before = memory_;
      auto const command = decide(pose);
      note_switches(before);
      if constexpr (Lanes == 1) {
        keep_tick(pose, command);
      }
      end_where(command.findings.arrived, Ending::arrived, command.findings, finish);
      move(pose, command.wheels);
      end_where(around_.least_clearance() <= S(0.0F), Ending::contact, command.findings, finish);
      end_where(plant_.time() >= time_limit_, Ending::time_out, command.findings, finish);
    }
  }

 private:
  struct Lane {
    bool active = false;
    RunRow row{};
    SceneOf scene{};
  };

  // Where all the work is. Flattened: as calls, every number of many lanes would go through memory.
  [[gnu::flatten]] auto decide(Pose<S> const& pose) noexcept {
    Situation<S> const now{plant_.believed(), goal_, plant_.last_dt()};
    return loop_.tick(now, around_.told(plant_.draws(), pose.position), memory_);
  }
  [[gnu::flatten]] void move(Pose<S> const& from, WheelRates<S> const& rates) noexcept {
    plant_.order(rates);
    Moved<S> const moved = plant_.move();
    around_.pass(from.position, plant_.pose().position, moved);
  }

  // Gives each idle lane a run; false when all lanes stay idle.
  template <typename Next, typename Finish>
  bool fill(Next const& next, Finish const& finish) {
    if (busy_ == Lanes || (drained_ && busy_ > 0)) {
      return true;
    }
    for (int k = 0; k < Lanes && !drained_; ++k) {
      Lane& here = lanes_[static_cast<std::size_t>(k)];
      while (!here.active && !drained_) {
        std::uint64_t run = 0;
        if (next(run, here.scene)) {
          start(k, run, finish);
        } else {
          drained_ = true;
        }
      }
    }
    return busy_ > 0;
  }

  template <typename Finish>
  void start(int k, std::uint64_t run, Finish const& finish) {
    Lane& here = lanes_[static_cast<std::size_t>(k)];
    Trip const& trip = here.scene.trip;
    plant_.start(k, run, seed_, trip.start);
    double const clear = around_.start(k, *here.scene.ground, trip.start.position);
    here.row = {};
    here.row.run = run;
    here.row.world = here.scene.number;
    here.row.straight_length = (trip.goal - trip.start.position).norm();
    here.row.start = trip.start;
    here.row.goal = trip.goal;
    if (clear <= 0.0 || !(trip.time_limit > 0.0)) {
      here.row.ending = clear <= 0.0 ? Ending::contact : Ending::time_out;
      here.row.least_clearance = clear;
      finish(here.row);
      return;
    }
    set_lane(goal_.x(), k, static_cast<float>(trip.goal.x()));
    set_lane(goal_.y(), k, static_cast<float>(trip.goal.y()));
    set_lane(time_limit_, k, static_cast<float>(trip.time_limit));
    set_lane(switches_, k, 0.0F);
    set_lane(last_switch_, k, -std::numeric_limits<float>::infinity());
    set_lane(least_dwell_, k, std::numeric_limits<float>::infinity());
    assign_where(lane_mask<S>([k](int i) noexcept { return i == k; }), memory_, memory_t<Loop, S>{});
    here.active = true;
    ++busy_;
  }

  // As simulate counts them: from the second tick on.
  void note_switches(memory_t<Loop, S> const& before) noexcept {
    mask_t<S> changed = !mask_t<S>(true);
    gather_changes<S>(before, memory_, changed);
    changed = changed && plant_.time() > S(0.0F);
    switches_ = switches_ + select(changed, S(1.0F), S(0.0F));
    least_dwell_ = least(select(changed, S(plant_.time() - last_switch_), least_dwell_), least_dwell_);
    last_switch_ = select(changed, plant_.time(), last_switch_);
  }

  template <typename Finish>
  void end_where(mask_t<S> const& ended, Ending ending, Findings<S> const& findings, Finish const& finish) {
    if (!any(ended)) {
      return;
    }
    for (int k = 0; k < Lanes; ++k) {
      Lane& here = lanes_[static_cast<std::size_t>(k)];
      if (!here.active || !lane(ended, k)) {
        continue;
      }
      auto const of = [k](S const& x) { return static_cast<double>(lane(x, k)); };
      double const clear = of(around_.least_clearance());
      here.row.ending = ending;
      here.row.last_status = status_of(findings_of<S>(findings, k));
      here.row.time = of(plant_.time());
      here.row.path_length = of(plant_.way());
      here.row.least_clearance = clear < 0.5 * static_cast<double>(far_away) ? clear
                                                                             : std::numeric_limits<double>::infinity();
      here.row.switches = static_cast<int>(lane(switches_, k));
      here.row.least_dwell = of(least_dwell_);
      here.active = false;
      --busy_;
      finish(here.row);
    }
  }

  template <typename Command>
  void keep_tick(Pose<S> const& pose, Command const& command) {
    if (ticks_ == nullptr) {
      return;
    }
    Vec2<double> const at = pose.position.template cast<double>();
    ticks_->push_back({static_cast<double>(plant_.time()),
                       {at, pose.heading.template cast<double>()},
                       around_.clearance(0, at),
                       {static_cast<double>(command.wheels.left), static_cast<double>(command.wheels.right)},
                       {static_cast<double>(command.body.speed), static_cast<double>(command.body.turn_rate)},
                       modes_of(memory_),
                       status_of(command)});
  }

  Loop loop_;
  std::uint64_t seed_;
  Plant<S> plant_;
  Surroundings<S, Told> around_;
  memory_t<Loop, S> memory_{};
  Vec2<S> goal_{S(0.0F), S(0.0F)};
  S time_limit_{S(0.0F)};
  S switches_{S(0.0F)};
  S last_switch_{S(0.0F)};  // seconds: when that was
  S least_dwell_{S(0.0F)};
  std::array<Lane, static_cast<std::size_t>(Lanes)> lanes_{};
  int busy_ = 0;
  bool drained_ = false;
  std::vector<Tick>* ticks_ = nullptr;
};

}  // namespace wend::inline v0::lab::detail
