// Explanations of the larger arbiters, against a scene worked out by hand: the expected lines come from a pocket
// calculator, not from wend.
#include <string>
#include <vector>

#include <doctest/doctest.h>

#include "wend/arbiters/blend.hpp"
#include "wend/arbiters/guard.hpp"
#include "wend/arbiters/guarded.hpp"
#include "wend/arbiters/signal.hpp"
#include "wend/fields/away_from_discs.hpp"
#include "wend/fields/toward_goal.hpp"
#include "wend/lab/account.hpp"
#include "wend/lab/explain_arbiters.hpp"

namespace {

using wend::away_from_discs;
using wend::toward_goal;
using wend::lab::Account;
using Lines = std::vector<std::string>;

// At the origin, nose along x; a disc of radius 0.2 m, 0.6 m to the left: clearance 0.6 - 0.2 - 0.2 = 0.2 m, and away
// from it is -90 degrees.
template <typename F>
Account explained(F const& f, wend::Vec2<float> const& goal, wend::memory_t<F, float> const& memory = {}) {
  wend::DiscSet<float, 4> discs;
  discs.add({{0.0F, 0.6F}, 0.2F});
  auto const percept = wend::look(wend::Pose<float>{}, goal, discs, 0.2F, 0.05F);
  Account account;
  wend::lab::explain(f, percept, memory, account);
  return account;
}
wend::Vec2<float> const ahead{4.0F, 0.0F};
wend::Vec2<float> const behind_disc{0.0F, 4.0F};

}  // namespace

TEST_CASE("kept_clear tells whether what was wanted passes through") {
  auto const filter = wend::kept_clear(toward_goal{}, 0.6F, 2.0F, 0.05F);
  CHECK(explained(filter, ahead).lines == Lines{
                                              "kept 0.050 m clear, passes through -> +0.0 deg, confidence 1.000",
                                              "  wanted: toward_goal -> +0.0 deg, confidence 1.000",
                                          });
  // Toward the disc at no more than rate * h = 2 * (0.2 - 0.05) = 0.3 m/s: half of the 0.6 wanted.
  Account const slowed = explained(filter, behind_disc);
  CHECK(slowed.lines ==
        Lines{
            "kept 0.050 m clear, turned aside or slowed -> +90.0 deg, confidence 1.000, share of the speed 0.500",
            "  wanted: toward_goal -> +90.0 deg, confidence 1.000",
        });
  CHECK(slowed.voices == Lines{"toward_goal"});
}

TEST_CASE("sliding tells its threshold, and which of the two has a say") {
  auto const policy = wend::sliding(0.25F, 0.20F, away_from_discs{}, toward_goal{});
  // The goal is abeam of the disc: the upper field does not drive down into the layer, so the lower one decides.
  Account const low = explained(policy, ahead);
  CHECK(low.lines == Lines{
                         "sliding, clearance 0.200 to a threshold of 0.250 and a layer of 0.200 -> -90.0 deg, "
                         "confidence 1.000",
                         "  below: away_from_discs -> -90.0 deg, confidence 1.000",
                         "  above: toward_goal -> +0.0 deg, confidence 1.000",
                     });
  CHECK(low.voices == Lines{"away_from_discs"});
  // Against each other at full speed: a half, less (0.25 - 0.20) / 0.20 of the layer: 0.25 up and 0.75 down.
  Account const both = explained(policy, behind_disc);
  CHECK(both.lines.at(0) ==
        "sliding, clearance 0.200 to a threshold of 0.250 and a layer of 0.200 -> -90.0 deg, confidence 0.500");
  CHECK(both.voices == Lines{"away_from_discs", "toward_goal"});
}

TEST_CASE("null_space tells its two") {
  // (1, 0), and of (0, -1) all lies across: (1, -1).
  CHECK(explained(wend::null_space(toward_goal{}, away_from_discs{}), ahead).lines ==
        Lines{
            "null space -> -45.0 deg, confidence 1.000",
            "  first: toward_goal -> +0.0 deg, confidence 1.000",
            "  what is left across it: away_from_discs -> -90.0 deg, confidence 1.000",
        });
}

TEST_CASE("vote tells who voted, with what weight") {
  // -90 degrees: 3 votes of its own and ((1 + cos 90) / 2)^4 = 1 / 16 of the other, of 4: 3.0625 / 4 = 0.766.
  CHECK(explained(wend::vote<4>(wend::share(1.0F, toward_goal{}), wend::share(3.0F, away_from_discs{})), ahead).lines ==
        Lines{
            "vote on 4 headings -> -90.0 deg, confidence 0.766",
            "  weight 1.000: toward_goal -> +0.0 deg, confidence 1.000",
            "  weight 3.000: away_from_discs -> -90.0 deg, confidence 1.000",
        });
}

TEST_CASE("modes tells the mode, the guards that were asked, and the field that is heard") {
  using wend::mode;
  using wend::to;
  auto const policy =
      wend::modes(mode<"going">(toward_goal{}, to<"stuck">(wend::above(wend::goal_distance, 9.0F, 8.0F)),
                                to<"fleeing">(wend::below(wend::clearance, 0.30F, 0.30F)),
                                to<"stuck">(wend::below(wend::goal_distance, 0.1F, 0.1F))),
                  mode<"fleeing">(away_from_discs{}, to<"going">(wend::above(wend::clearance, 0.50F, 0.50F))),
                  mode<"stuck">(wend::no_opinion{}));
  wend::memory_t<decltype(policy), float> memory;
  Account const leaves = explained(policy, ahead, memory);
  CHECK(leaves.lines == Lines{
                            "modes, going to fleeing -> -90.0 deg, confidence 1.000",
                            "  to stuck: stays off, goal_distance 4.000 is not over 9.000",
                            "  to fleeing: turns on, clearance 0.200 is under 0.300",
                            "  in fleeing: away_from_discs -> -90.0 deg, confidence 1.000",
                        });
  CHECK(leaves.voices == Lines{"away_from_discs"});
  memory.is_in[0] = true;
  CHECK(explained(policy, ahead, memory).lines == Lines{
                                                      "modes, in fleeing -> -90.0 deg, confidence 1.000",
                                                      "  to going: stays off, clearance 0.200 is not over 0.500",
                                                      "  in fleeing: away_from_discs -> -90.0 deg, confidence 1.000",
                                                  });
}
