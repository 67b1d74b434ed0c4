// wend/lab/explain_tick.hpp - why a whole tick fell out as it did: what was seen, the policy, the pace, the findings.
#pragma once

#include <cstdint>
#include <span>
#include <string>
#include <type_traits>

#include "wend/lab/dump.hpp"
#include "wend/lab/explain.hpp"
#include "wend/lab/explain_arbiters.hpp"
#include "wend/loop.hpp"
#include "wend/moving_discs.hpp"
#include "wend/watch/log.hpp"

namespace wend::inline v0::lab {

namespace detail {

inline std::string count_text(int count, std::string const& what) {
  return std::to_string(count) + " " + what + (count == 1 ? "" : "s");
}

inline std::string voices_text(Account const& account) {
  std::string text;
  for (std::string const& voice : account.voices) {
    text += (text.empty() ? "" : " and ") + voice;
  }
  return text.empty() ? "nobody" : text;
}

// Calls f(situation, percept, what was seen in words) as the loop has them for its policy: in the frame of the pose and
// goal with discs, in the robot's own with readings. A sensing that remembers starts from what it did before.
template <typename Loop, PlainNumber S, typename Seen, typename Memory, typename F>
void with_percept(Loop const& loop, Situation<S> const& now, Seen const& seen, Memory const& before, F const& f) {
  using Of = v0::detail::SeenOf<Seen>;
  if constexpr (Of::kind == 3) {
    std::span<S const, static_cast<std::size_t>(Of::size)> const ranges(seen.ranges);
    Situation<S> const own{{}, into_frame(now.pose, now.goal), now.dt, now.age};
    auto const with = [&](auto const& count, auto const& discs) {
      f(own, look(own.pose, own.goal, discs, S(loop.robot_radius), own.dt),
        std::to_string(count.echoes) + (count.echoes == 1 ? " echo, " : " echoes, ") + std::to_string(count.alive()) +
            " of " + std::to_string(Of::size) + " beams alive, " + count_text(discs.size(), "disc"));
    };
    if constexpr (std::is_empty_v<decltype(before.sensing)>) {
      DiscSet<S, Of::discs_kept> discs;
      auto const count = loop.sensing.discs(ranges, discs);
      with(count, discs);
    } else {
      MovingDiscSet<S, Of::discs_kept> discs;
      auto sensing = before.sensing;
      auto const count = loop.sensing.discs(ranges, now.pose, now.dt, discs, sensing);
      with(count, discs);
    }
  } else {
    f(now, look(now.pose, now.goal, seen, S(loop.robot_radius), now.dt), count_text(seen.size(), "disc"));
  }
}

template <PlainNumber S>
std::string findings_text(Findings<S> const& findings) {
  std::string text;
  for_each_named_member(findings, findings, [&text](std::string const& name, bool holds, bool) {
    text += holds ? (text.empty() ? "" : ", ") + name : "";
  });
  return text.empty() ? "none" : text;
}

// The speed that is allowed, told with what limits it: along `way`, in which the machine goes.
template <typename Pace, typename Percept, PlainNumber S>
S explain_pace(Pace const& pace, Percept const& percept, Vec2<S> const& way, Account& account) {
  S const allowed = pace(percept, way);
  S const room = pace.room(percept, way);
  S const still = pace.stoppable(least(percept.goal_distance, room));
  std::string text = "pace: " + number_text(allowed) + " m/s allowed";
  if (!(allowed < pace.top_speed)) {
    text += ", the top speed";
  } else if (percept.velocities != nullptr && magnitude(S(allowed - still)) > S(0.001F)) {
    text += ", because of how the discs move";
  } else if (percept.goal_distance < room) {
    text += ", to stop in the " + number_text(percept.goal_distance) + " m to the goal";
  } else if (room > S(0.0F)) {
    text += ", to stop in the " + number_text(room) + " m of room before a disc";
  } else {
    text += ", a disc is " + number_text(-room) + " m too near to stop before";
  }
  account.line(1, text);
  return allowed;
}

// What of a loop has a say in a decision once it knows its discs. Not the loop itself, so that loops with other rangers
// share the code that explains.
template <typename Policy, typename Drive, typename Steering>
struct LoopParts {
  Policy const& policy;
  Drive const& drive;
  Steering const& steering;
  Pace const& pace;
};

template <typename Parts, typename Percept, typename Before, typename Command>
void explain_parts(Parts const& loop, Percept const& percept, Before const& before, Command const& command,
                   Account& account) {
  auto const& findings = command.findings;
  auto const& nose = percept.pose.heading;
  if (findings.stale || findings.blind) {
    account.line(1, "policy: not heeded, and nothing remembered, as what it was told cannot be trusted");
  } else {
    explain(loop.policy, percept, before, account, Place{1, "policy: "});
    account.line(1, "heard: " + voices_text(account));
  }
  auto way = nose;
  if constexpr (requires { loop.steering.way(command.course, nose); }) {
    way = loop.steering.way(command.course, nose);
  }
  auto const allowed = explain_pace(loop.pace, percept, way, account);
  if (must_stop(findings)) {
    account.line(1, "steering: none, the machine is to stand whatever the course");
  } else {
    auto const wanted = v0::detail::steered(loop.steering, loop.drive, command.course, nose, allowed);
    account.line(1, "steering: " + memory_text(wanted) + " wanted");
  }
  account.line(1, "body: " + memory_text(command.body));
}

}  // namespace detail

/// Explains one decision: the status and the command, then what was seen, the policy part by part, the pace, the
/// steering, the progress and the findings. Metres, seconds, radians a second, wheels in their drive's own
/// unit; angles in degrees off the nose, to the left positive. `voices` of the account are the fields that made the
/// course.
template <typename Loop, typename Seen>
[[nodiscard]] Account explain_tick(Loop const& loop, Decision<Loop, Seen> const& decision) {
  Account account;
  auto after = decision.before;
  auto const command = v0::detail::decide(loop, decision.now, decision.seen, after);
  account.line(0, "tick " + std::to_string(decision.number) + ": " + text(status_of(command)) + "; wheels " +
                      detail::memory_text(command.wheels));
  detail::with_percept(
      loop, decision.now, decision.seen, decision.before, [&](auto const& now, auto const& percept, std::string seen) {
        auto const& nose = now.pose.heading;
        account.line(1, "inputs: dt " + number_text(now.dt) + " s, age " + number_text(now.age) + " s");
        account.line(1, "goal: " + number_text(percept.goal_distance) + " m away" +
                            (percept.goal_confidence > 0.0F ? ", " + off_the_nose(percept.goal_direction, nose) : ""));
        if (percept.away_confidence > 0.0F) {
          seen += ", the nearest " + number_text(percept.clearance) + " m from the robot's edge, " +
                  off_the_nose(decltype(percept.away)(-percept.away), nose);
        }
        account.line(1, "seen: " + seen);
        detail::LoopParts<decltype(loop.policy), decltype(loop.drive), decltype(loop.steering)> const parts{
            loop.policy, loop.drive, loop.steering, loop.pace};
        detail::explain_parts(parts, percept, decision.before.policy, command, account);
      });
  account.line(1, "progress: " + detail::memory_text(after.progress));
  account.line(1, "findings: " + detail::findings_text(command.findings));
  return account;
}

}  // namespace wend::inline v0::lab
