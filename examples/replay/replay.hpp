// What the parts of replay share: the options, and the policies and loops that it knows.
#pragma once

#include <cstddef>
#include <numbers>
#include <string>
#include <type_traits>
#include <vector>

#include <wend/wend.hpp>

#include "../policies.hpp"

namespace replay {

struct Options {
  std::string record;  ///< a table of ranges, or empty
  std::string dump;    ///< a dump to be read, or empty
  std::string dump_to;
  std::string policy;  ///< its name, or empty: composed for a table, the one that fits for a dump
  std::vector<double> goal;
  double noise = 0.015;
  double reach = 6.0;
  int every = 1;
  bool as_discs = false;  ///< the loop is given discs, and so is the dump
  bool brief = false;
};

/// Calls f(name, policy) for each policy that replay knows.
template <typename F>
void for_each_policy(F const& f) {
  f("hard-switch", policies::hard_switch);
  f("two-thresholds", policies::two_thresholds);
  f("blend", policies::blended);
  f("composed", policies::composed);
}

/// The ranger: beams at even spacing all round, the first one along the nose.
template <int Beams>
wend::Ring<Beams> ring_of(Options const& options) {
  return {.directions = wend::even_bearings<Beams>(0.0, 2.0 * std::numbers::pi / Beams),
          .min_range = 0.05F,
          .max_range = static_cast<float>(options.reach),
          .noise = static_cast<float>(options.noise)};
}

/// A loop on readings, and one on discs.
template <int Beams, typename Policy>
wend::Loop<Policy, wend::Ring<Beams>> loop_on_readings(Policy const& policy, Options const& options) {
  return {.policy = policy, .sensing = ring_of<Beams>(options)};
}
template <typename Policy>
wend::Loop<Policy> loop_on_discs(Policy const& policy) {
  return {.policy = policy};
}

inline constexpr int discs_kept = 16;

/// Feeds a table of ranges through the ring and a policy. Throws wend::lab::FileError.
void over_record(Options const& options);

/// Decides a dump again. What `main` is to return: 0, or 1 when a decision falls differently. Throws
/// wend::lab::FileError, after the good records when a later one is damaged.
int over_dump(Options const& options);

}  // namespace replay
