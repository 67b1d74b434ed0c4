// Every method of the library that can drive by itself, under the name it is compared by. Arbiters are shown with the
// fields that they are usually given. Those whose parameters are places are set up for a trip from (0, 0) to (8, 0).
#pragma once

#include <cstddef>
#include <tuple>

#include <wend/wend.hpp>

#include "policies.hpp"

namespace catalogue {

using namespace wend;

template <typename Policy>
struct Named {
  char const* name;
  Policy policy;
  bool placed = false;  ///< set up for that trip and for no other
};
template <typename Policy>
[[nodiscard]] constexpr Named<Policy> named(char const* name, Policy policy) {
  return {name, policy};
}
template <typename Policy>
[[nodiscard]] constexpr Named<Policy> placed(char const* name, Policy policy) {
  return {name, policy, true};
}

inline constexpr auto passing = below(clearance, 0.3F, 0.5F);
inline constexpr auto weighted = potential_field{.repulsion = 0.05F, .goal_power = 2, .conic_beyond = 2.0F};

/// A path from (0, 0) to (8, 0), with a bow round what may stand in the middle.
inline constexpr auto route = path_of(straight({0.0F, 0.0F}, {2.2F, 0.0F}), straight({2.2F, 0.0F}, {3.2F, 1.1F}),
                                      arc({3.2F, 1.1F}, {4.8F, 1.1F}, -0.8F), straight({4.8F, 1.1F}, {5.8F, 0.0F}),
                                      straight({5.8F, 0.0F}, {8.0F, 0.0F}));

inline constexpr std::tuple all{
    // Fields.
    named("toward_goal", toward_goal{}),
    named("away_from_discs", away_from_discs{}),
    named("past_disc", past_disc{}),
    named("potential_field", potential_field{}),
    named("potential_field, weighted", weighted),
    named("harmonic_flow", harmonic_flow{}),
    placed("navigation_function", navigation_function{.centre_x = 4.0F, .centre_y = 0.0F, .radius = 8.0F}),
    named("along_boundary", along_boundary{}),
    placed("along_path", along_path{route}),
    placed("onto_path", onto_path{route}),
    named("between_walls", priority(between_walls{}, toward_goal{})),
    named("to_dock", to_dock{}),
    named("through_gap", through_gap{}),
    named("velocity_obstacle", velocity_obstacle{}),
    named("shared_avoidance", shared_avoidance{}),
    named("sector_histogram", sector_histogram<36>{}),
    named("attractor_dynamics", attractor_dynamics{}),
    named("roam", roam{}),
    // Arbiters.
    named("guarded, one threshold", policies::hard_switch),
    named("guarded, two", policies::two_thresholds),
    named("sliding", sliding(0.35F, 0.1F, away_from_discs{}, toward_goal{})),
    named("blend", policies::blended),
    named("composed", policies::composed),
    named("priority", priority(only_when(passing, past_disc{}), toward_goal{})),
    named("modes", modes(mode<"going">(toward_goal{}, to<"passing">(below(clearance, 0.3F, 0.3F))),
                         mode<"passing">(past_disc{}, to<"going">(held(above(clearance, 0.5F, 0.5F), 0.3F))))),
    named("kept_clear", kept_clear(toward_goal{}, 0.6F, 2.0F, 0.12F)),
    named("null_space", null_space(only_when(passing, past_disc{}), toward_goal{})),
    named("vote", vote<36>(share(1.0F, toward_goal{}), share(1.5F, only_when(passing, past_disc{})))),
};

inline constexpr std::size_t size = std::tuple_size_v<decltype(all)>;

}  // namespace catalogue
