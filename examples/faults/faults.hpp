// What can go wrong with a cart, one fault at a time, from a given moment on.
#pragma once

#include <algorithm>
#include <cmath>
#include <cstdint>
#include <functional>
#include <limits>
#include <memory>
#include <span>
#include <string>
#include <utility>
#include <vector>

#include <wend/lab/mishap.hpp>
#include <wend/lab/world.hpp>

namespace faults {

using wend::Situation;
using wend::WheelRates;
using wend::lab::Mishap;
using wend::lab::Moment;

inline constexpr double onset = 4.0;  ///< seconds

/// A fault as up to four functions; those that are empty meddle with nothing.
struct Meddling {
  std::function<void(Moment const&, std::span<float>)> readings;
  std::function<void(Moment const&, Situation<float>&)> situation;
  std::function<double(Moment const&)> delay;
  std::function<void(WheelRates<double>&)> wheels;
};

class FromOnset final : public Mishap<float> {
 public:
  explicit FromOnset(Meddling meddling) : meddling_(std::move(meddling)) {}
  void readings(Moment const& now, std::span<float> ranges) override {
    if (meddling_.readings && now.time >= onset) {
      meddling_.readings(now, ranges);
    }
  }
  void situation(Moment const& now, Situation<float>& told) override {
    if (meddling_.situation && now.time >= onset) {
      meddling_.situation(now, told);
    }
  }
  double delay(Moment const& now) override { return meddling_.delay && now.time >= onset ? meddling_.delay(now) : 0.0; }
  void wheels(double time, WheelRates<double>& rates) override {
    if (meddling_.wheels && time >= onset) {
      meddling_.wheels(rates);
    }
  }

 private:
  Meddling meddling_;
};

struct Fault {
  std::string name;
  std::function<Meddling(wend::Vec2<double> const& obstacle)> make;  ///< anew for each run; `obstacle`: a disc's centre
  std::string why_not;  ///< empty where the loop has to keep clear; else why it cannot
  double watchdog = 1e9;  ///< seconds, of the drive
};

namespace detail {

enum Purpose : std::uint32_t { of_dropouts = 900, of_ghosts, of_ghost_ranges };

inline constexpr float nan = std::numeric_limits<float>::quiet_NaN();
inline constexpr float no_echo = std::numeric_limits<float>::infinity();

// Every beam within `half` beams of straight ahead.
inline void ahead(std::span<float> ranges, std::size_t half, float reads) {
  for (std::size_t k = 0; k < half; ++k) {
    ranges[k] = reads;
    ranges[ranges.size() - 1 - k] = reads;
  }
}

inline Fault of_ranges(std::string name, std::function<void(Moment const&, std::span<float>)> readings,
                       std::string why_not = {}) {
  return {std::move(name), [readings](auto const&) { return Meddling{readings, {}, {}, {}}; }, std::move(why_not)};
}
inline Fault of_each_range(std::string name, std::function<float(float)> change, std::string why_not = {}) {
  return of_ranges(
      std::move(name),
      [change](Moment const&, std::span<float> ranges) {
        std::transform(ranges.begin(), ranges.end(), ranges.begin(), change);
      },
      std::move(why_not));
}
// A ranger that measures wrong. What it did not measure stays 0.
inline Fault measures(std::string name, float scale, float offset, std::string why_not = {}) {
  auto const change = [scale, offset](float r) { return r > 0.0F ? scale * r + offset : r; };
  return of_each_range(std::move(name), change, std::move(why_not));
}
inline Fault of_situation(std::string name, std::function<void(Moment const&, Situation<float>&)> situation) {
  return {std::move(name), [situation](auto const&) { return Meddling{{}, situation, {}, {}}; }, {}};
}
inline Fault of_wheels(std::string name, std::function<void(WheelRates<double>&)> wheels, std::string why_not = {}) {
  return {std::move(name), [wheels](auto const&) { return Meddling{{}, {}, {}, wheels}; }, std::move(why_not)};
}
// A tick that comes late every two seconds.
inline Fault late(int periods, double watchdog, std::string why_not = {}) {
  auto const delay = [periods](Moment const& now) { return now.tick % 40 == 0 ? 0.05 * periods : 0.0; };
  std::string name = "tick late by " + std::to_string(periods) + (periods == 1 ? " period" : " periods");
  return {name + (watchdog < 1e3 ? ", drive with watchdog" : ""),
          [delay](auto const&) { return Meddling{{}, {}, delay, {}}; }, std::move(why_not), watchdog};
}

}  // namespace detail

/// All of them. Periods are the cart's 50 ms.
inline std::vector<Fault> all() {
  using namespace detail;
  std::string const lies = "a ranger that lies is not found out without a second one";
  std::vector<Fault> list;
  list.push_back({"none", [](auto const&) { return Meddling{}; }, {}});

  list.push_back(of_ranges("beam ahead stuck at 1 m", [](auto const&, auto ranges) { ranges[0] = 1.0F; }));
  list.push_back(of_ranges("beam ahead stuck at 5 m", [](auto const&, auto ranges) { ranges[0] = 5.0F; }));
  list.push_back(of_ranges("beam ahead dead", [](auto const&, auto ranges) { ranges[0] = 0.0F; }));
  list.push_back(of_ranges(
      "10 beams ahead dead", [](auto const&, auto ranges) { ahead(ranges, 5, 0.0F); },
      "what stands there may be seen by no other beam, and the loop stops only when half of all beams "
      "are dead"));
  list.push_back(of_ranges("10 beams ahead see nothing", [](auto const&, auto r) { ahead(r, 5, no_echo); }, lies));
  list.push_back(of_each_range("all beams dead", [](float) { return 0.0F; }));
  list.push_back(of_each_range("all beams not a number", [](float) { return nan; }));
  list.push_back(of_each_range("all beams see nothing", [](float) { return no_echo; }, lies));
  list.push_back(of_ranges("30 % dropouts", [](Moment const& now, std::span<float> ranges) {
    for (std::uint32_t k = 0; k < ranges.size(); ++k) {
      ranges[k] = now.draws.uniform({of_dropouts, now.tick, k}) < 0.3 ? 0.0F : ranges[k];
    }
  }));
  list.push_back(of_ranges("bursts: all dead 0.3 s in 2 s", [](Moment const& now, std::span<float> ranges) {
    if (now.time - 2.0 * std::floor(0.5 * now.time) < 0.3) {
      std::fill(ranges.begin(), ranges.end(), 0.0F);
    }
  }));
  list.push_back(of_ranges("ghosts: 5 % of beams anywhere", [](Moment const& now, std::span<float> ranges) {
    for (std::uint32_t k = 0; k < ranges.size(); ++k) {
      if (now.draws.uniform({of_ghosts, now.tick, k}) < 0.05) {
        ranges[k] = static_cast<float>(now.draws.between(0.3, 6.0, {of_ghost_ranges, now.tick, k}));
      }
    }
  }));
  list.push_back(of_ranges("more discs than fit", [](auto const&, std::span<float> ranges) {
    for (std::size_t k = 0; k < ranges.size(); k += 4) {  // a picket fence at 2.5 m
      ranges[k] = std::min(ranges[k], 2.5F);
    }
  }));
  list.push_back(measures("ranges 4 cm too long", 1.0F, 0.04F));
  list.push_back(
      measures("ranges 15 cm too long", 1.0F, 0.15F, "an error beyond the margin kept is driven into; " + lies));
  list.push_back(measures("ranges 15 cm too short", 1.0F, -0.15F));
  list.push_back(measures("ranges 10 % too long", 1.1F, 0.0F));
  list.push_back(measures("ranges 10 % too short", 0.9F, 0.0F));
  list.push_back({"ranges frozen, age unknown",
                  [](auto const&) {
                    auto row = std::make_shared<std::vector<float>>();
                    return Meddling{[row](auto const&, std::span<float> ranges) {
                                      if (row->empty()) {
                                        row->assign(ranges.begin(), ranges.end());
                                      }
                                      std::copy(row->begin(), row->end(), ranges.begin());
                                    },
                                    {},
                                    {},
                                    {}};
                  },
                  "only its age tells an old row from a new one: give Situation::age"});
  list.push_back({"ranges frozen, age told",
                  [](auto const&) {
                    auto row = std::make_shared<std::vector<float>>();
                    return Meddling{[row](auto const&, std::span<float> ranges) {
                                      if (row->empty()) {
                                        row->assign(ranges.begin(), ranges.end());
                                      }
                                      std::copy(row->begin(), row->end(), ranges.begin());
                                    },
                                    [](Moment const& now, Situation<float>& told) {
                                      told.age = static_cast<float>(now.time - onset);
                                    },
                                    {},
                                    {}};
                  },
                  {}});

  list.push_back(of_situation("pose jumps by 1 m", [](auto const&, auto& told) { told.pose.position.y() += 1.0F; }));
  list.push_back({"pose frozen",
                  [](auto const&) {
                    auto first = std::make_shared<std::vector<wend::Pose<float>>>();
                    return Meddling{{},
                                    [first](auto const&, Situation<float>& told) {
                                      if (first->empty()) {
                                        first->push_back(told.pose);
                                      }
                                      told.pose = first->front();
                                    },
                                    {},
                                    {}};
                  },
                  {}});
  list.push_back(of_situation("pose not a number", [](auto const&, auto& told) { told.pose.position.x() = nan; }));
  list.push_back(of_situation("heading not a number", [](auto const&, auto& told) { told.pose.heading.y() = nan; }));
  list.push_back(of_situation("goal not a number", [](auto const&, auto& told) { told.goal.x() = nan; }));
  list.push_back({"goal moved into an obstacle",
                  [](wend::Vec2<double> const& obstacle) {
                    return Meddling{
                        {}, [obstacle](auto const&, auto& told) { told.goal = obstacle.cast<float>(); }, {}, {}};
                  },
                  {}});

  list.push_back(of_situation("clock frozen", [](auto const&, auto& told) { told.dt = 0.0F; }));
  list.push_back(of_situation("clock runs backwards", [](auto const&, auto& told) { told.dt = -told.dt; }));
  list.push_back(of_situation("time step not a number", [](auto const&, auto& told) { told.dt = nan; }));
  list.push_back(of_situation("age from a clock ahead", [](auto const&, auto& told) { told.age = -0.1F; }));
  std::string const blind_drive =
      "between two ticks the wheels do what they were told last: a drive near people has to stop by itself";
  list.push_back(late(1, 1e9));
  list.push_back(late(3, 1e9));
  list.push_back(late(10, 1e9, blind_drive));
  list.push_back(late(20, 1e9, blind_drive));
  list.push_back(late(10, 0.15));
  list.push_back(late(20, 0.15));

  list.push_back(of_wheels("wheels do half of what they are told", [](auto& w) { w.left *= 0.5, w.right *= 0.5; }));
  list.push_back(of_wheels("wheels saturate at 6 rad/s", [](auto& w) {
    w.left = std::clamp(w.left, -6.0, 6.0), w.right = std::clamp(w.right, -6.0, 6.0);
  }));
  list.push_back(of_wheels("one wheel dead", [](auto& w) { w.left = 0.0; }));
  list.push_back(of_wheels(
      "one wheel stuck at 8 rad/s", [](auto& w) { w.right = 8.0; },
      "nothing that the loop says reaches that wheel: it takes a stop that cuts its power"));
  return list;
}

}  // namespace faults
