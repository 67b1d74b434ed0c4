// The four policies that the examples compare: the same fields, arbitrated in four ways. Thresholds in metres of
// clearance.
#pragma once

#include <wend/wend.hpp>

namespace policies {

using namespace wend;

/// Away from what is near, else to the goal: one threshold.
inline constexpr auto hard_switch = guarded(below(clearance, 0.35F, 0.35F), away_from_discs{}, toward_goal{});

/// Past what is near until it is no longer near, else to the goal: two thresholds.
inline constexpr auto two_thresholds = guarded(below(clearance, 0.30F, 0.50F), past_disc{}, toward_goal{});

/// The nearer something is, the more away from it and the less to the goal.
inline constexpr auto blended = blend(ramp(clearance, 0.10F, 0.60F), away_from_discs{}, toward_goal{});

/// Past what stands between here and the goal, else to the goal; the nearer something is, the more away from it.
inline constexpr auto composed =
    blend(ramp(clearance, 0.10F, 0.35F), away_from_discs{},
          guarded(held(both(below(clearance, 0.40F, 0.70F), above(disc_before_goal, 0.1F, -0.1F)), 0.4F), past_disc{},
                  toward_goal{}));

}  // namespace policies
