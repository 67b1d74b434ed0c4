// wend/lab/review.hpp - what is known about a policy in a scene, and what each statement about it rests on.
#pragma once

#include <algorithm>
#include <atomic>
#include <cmath>
#include <cstdint>
#include <functional>
#include <optional>
#include <string>
#include <utility>
#include <vector>

#include "wend/lab/arrival_map.hpp"
#include "wend/lab/campaign.hpp"
#include "wend/lab/claims.hpp"
#include "wend/lab/modes.hpp"
#include "wend/lab/policy_tree.hpp"
#include "wend/lab/prove.hpp"
#include "wend/lab/simulate.hpp"
#include "wend/lab/statistics.hpp"
#include "wend/lab/svg.hpp"
#include "wend/lab/tally.hpp"
#include "wend/lab/vehicle.hpp"
#include "wend/lab/world.hpp"
#include "wend/loop.hpp"

namespace wend::inline v0::lab {

/// What a statement rests on, the surest first.
enum class Basis : std::uint8_t {
  proof,  ///< worked out for every state of a region, by intervals
  count,  ///< counted over many simulated runs, with the bounds that so many runs allow
  run,    ///< measured on one simulated run
};

/// Whether a statement holds.
enum class Holds : std::uint8_t {
  yes,   ///< shown to hold
  no,    ///< shown not to hold
  open,  ///< not decided: neither proved nor refuted, or too few runs to tell
};

/// The word for what it rests on.
[[nodiscard]] constexpr char const* text(Basis basis) noexcept {
  return basis == Basis::proof ? "proved" : basis == Basis::count ? "counted" : "measured";
}
/// The word for whether it holds.
[[nodiscard]] constexpr char const* text(Holds holds) noexcept {
  return holds == Holds::yes ? "holds" : holds == Holds::no ? "does not hold" : "open";
}

/// A statement about a policy, whether it holds, and why one thinks so.
struct Statement {
  std::string claim;           ///< a sentence without its subject, the policy
  Holds holds = Holds::open;   ///< whether it does
  Basis basis = Basis::count;  ///< what that rests on
  std::string evidence;        ///< in words, with the figures
};

namespace detail {

// "99.5 %": as many decimals as it takes, two at most.
inline std::string percent(double share) {
  std::string text = fixed(100.0 * share, 2);
  while (text.back() == '0') {
    text.pop_back();
  }
  if (text.back() == '.') {
    text.pop_back();
  }
  return text + " %";
}

inline std::string of_runs(std::uint64_t count, std::uint64_t runs) {
  return std::to_string(count) + " of " + std::to_string(runs);
}

}  // namespace detail

/// That at least a share of all runs arrives: holds when Clopper and Pearson's one-sided bound at 95 % is over it, does
/// not when theirs on the other side is under it.
[[nodiscard]] inline Statement arrival_statement(double share, std::uint64_t arrived, std::uint64_t runs) {
  Statement s{"arrives from at least " + detail::percent(share) + " of drawn starts", Holds::open, Basis::count,
              "no run"};
  if (runs > 0) {
    double const low = 1.0 - upper_bound_on_probability(runs - arrived, runs);
    double const high = upper_bound_on_probability(arrived, runs);
    s.holds = low >= share ? Holds::yes : high < share ? Holds::no : Holds::open;
    s.evidence = detail::of_runs(arrived, runs) + " arrived: 95 % sure of " + detail::percent(low) + " or more";
  }
  return s;
}

/// That no more than a share of all runs touches a disc, likewise.
[[nodiscard]] inline Statement contact_statement(double share, std::uint64_t contacts, std::uint64_t runs) {
  Statement s{"touches a disc in at most " + detail::percent(share) + " of drawn runs", Holds::open, Basis::count,
              "no run"};
  if (runs > 0) {
    double const high = upper_bound_on_probability(contacts, runs);
    double const low = 1.0 - upper_bound_on_probability(runs - contacts, runs);
    s.holds = high <= share ? Holds::yes : low > share ? Holds::no : Holds::open;
    s.evidence = detail::of_runs(contacts, runs) + " did: 95 % sure of " + detail::percent(high) + " or less";
  }
  return s;
}

/// That it keeps clear, from what a proof says.
[[nodiscard]] inline Statement clearance_statement(double distance, double seen_within, Verdict verdict,
                                                   std::int64_t boxes) {
  Holds const holds = verdict == Verdict::proved ? Holds::yes : verdict == Verdict::refuted ? Holds::no : Holds::open;
  return {"keeps " + detail::fixed(100.0 * distance, 1) + " cm clear from every state that is so clear", holds,
          Basis::proof,
          std::to_string(boxes) + " boxes of states; any memory; discs seen within " +
              detail::fixed(100.0 * seen_within, 1) + " cm"};
}

/// How a review is made.
struct ReviewOptions {
  std::uint64_t seed = 1;  ///< of all draws and noise
  std::uint64_t runs = 5000;  ///< drawn runs of the campaign
  std::size_t worst = 5;  ///< of them kept with their ticks
  int threads = 1;  ///< 1 or more, that work side by side
  bool all_states = true;  ///< proofs and arrival map, in a world of at most `most_discs` that stand still
  double cell = 0.04;  ///< metres: of the arrival map
  std::atomic<bool> const* stop = nullptr;  ///< once true, the review ends with what is known so far
  /// Called now and then from one thread at a time, with the share of this policy's review that is done.
  std::function<void(double)> progress{};
};

/// All that is known about one policy.
struct PolicyReview {
  std::string name;  ///< as the caller gave it
  PolicyNode tree;  ///< its parts
  Run run;  ///< of the scene's own trip, with a ranger
  std::vector<RunRow> rows;  ///< of drawn runs
  Tally tally;  ///< of them
  std::vector<Replay> worst;  ///< the drawn runs to look at first
  std::optional<ArrivalMap> arrivals;  ///< where the world is small enough
  std::vector<Statement> statements;  ///< what is claimed, and whether it holds
  int switches = 0;  ///< bits in the modes of a tick
};

/// A scene, and some policies in it.
struct Review {
  std::string title;  ///< of the page
  World world;  ///< the same for all policies
  Trip trip;  ///< the scene's own
  Region region;  ///< metres: where starts and goals are drawn, and states looked at
  std::uint64_t seed = 1;  ///< of all draws and noise
  std::uint64_t runs = 0;  ///< asked for, of each policy
  bool complete = true;  ///< false when it was stopped early
  std::vector<PolicyReview> policies;  ///< in the order they were added
};

/// A world with more discs than this is not proved about within seconds.
inline constexpr int most_discs_proved = 15;

/// Reviews one policy in a scene, and adds it: one run with the ranger that `sensing` is, drawn runs that are told
/// discs, and for a world that is small and at rest, a proof of the claimed clearance and an arrival map.
template <typename Policy, typename Sensing>
void add_review(Review& review, std::string name, Policy const& policy, Sensing const& sensing, Vehicle const& vehicle,
                Scenes const& drawn, Claims const& claims, ReviewOptions const& options) {
  PolicyReview of;
  of.name = std::move(name);
  of.tree = policy_tree(policy);
  auto const driven = fitted(Loop<Policy, Sensing>{.policy = policy, .sensing = sensing}, vehicle);
  auto const told = fitted(Loop<Policy>{.policy = policy}, vehicle);
  of.switches = mode_count(memory_t<Policy, float>{});
  of.run = simulate(driven, vehicle, review.world, review.trip, options.seed, 0, true);

  CampaignOptions many;
  many.threads = options.threads;
  many.stop = options.stop;
  auto const done = [&options](double share) {
    if (options.progress) {
      options.progress(share);
    }
  };
  many.progress = [&done](std::uint64_t runs, std::uint64_t all) {
    done(0.4 * static_cast<double>(runs) / static_cast<double>(all));
  };
  Campaign campaign = lab::campaign(told, vehicle, drawn, options.runs, options.seed, many);
  review.complete = review.complete && campaign.complete;
  of.rows = std::move(campaign.rows);
  of.tally = tally(of.rows);
  for (std::size_t const place : worst_runs(of.rows, options.worst)) {
    of.worst.push_back(replay_run(told, vehicle, drawn, of.rows[place].run, options.seed));
  }

  bool const still = std::none_of(review.world.discs.begin(), review.world.discs.end(),
                                  [](WorldDisc const& d) { return d.velocity.squaredNorm() > 0.0; });
  bool const stopped = options.stop != nullptr && options.stop->load(std::memory_order_relaxed);
  if (options.all_states && still && review.world.discs.size() <= most_discs_proved && !stopped) {
    if (claims.keeps_clear) {
      ProofOptions how;
      how.threads = options.threads;
      how.error.radius = claims.seen_within.value_or(0.0);
      auto const proof = prove<most_discs_proved>(told, {vehicle.period * (1.0 + vehicle.jitter), vehicle.latency},
                                                  review.world, review.trip.goal, review.region, {*claims.keeps_clear},
                                                  how);
      of.statements.push_back(
          clearance_statement(*claims.keeps_clear, claims.seen_within.value_or(0.0), proof.verdict, proof.boxes));
    }
    done(0.7);
    ArrivalOptions how;
    how.finest = options.cell;
    how.robot_radius = told.robot_radius;
    how.threads = options.threads;
    of.arrivals = arrival_map<most_discs_proved>(policy, review.world, review.trip.goal, review.region, how);
    double const share = std::floor(1000.0 * of.arrivals->share(Arrival::proved)) / 10.0;  // no more than is proved
    of.statements.push_back({"arrives from every start of an area, as a point machine that sees exactly",
                             share > 0.0 ? Holds::yes : Holds::open, Basis::proof,
                             detail::fixed(share) + " % of the free area; the rest is undecided, not false"});
  } else if (claims.keeps_clear) {
    of.statements.push_back(
        {"keeps " + detail::fixed(100.0 * *claims.keeps_clear, 1) + " cm clear", Holds::open, Basis::proof,
         !still                ? "not tried: discs move"
         : stopped             ? "not tried: interrupted"
         : !options.all_states ? "not tried: not asked for"
                               : "not tried: over " + std::to_string(most_discs_proved) + " discs"});
  }
  if (claims.arrives) {
    of.statements.push_back(arrival_statement(*claims.arrives, of.tally.arrived, of.tally.runs));
  }
  if (claims.contacts) {
    of.statements.push_back(contact_statement(*claims.contacts, of.tally.contacts, of.tally.runs));
  }
  of.statements.push_back({"drives the scene's own trip to the goal",
                           of.run.ending == Ending::arrived ? Holds::yes : Holds::no, Basis::run,
                           std::string(text(of.run.ending)) + " after " + detail::fixed(of.run.time) + " s"});
  done(1.0);
  review.policies.push_back(std::move(of));
}

}  // namespace wend::inline v0::lab
