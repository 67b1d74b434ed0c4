// wend/fields/along_boundary.hpp - round what stands in the way, by keeping along it, until the way on is free.
#pragma once

#include "wend/field.hpp"

namespace wend::inline v0 {

/// Straight to the goal, and at a set distance along the discs that stand in the way, always on the same hand. One of
/// the bug family (Lumelsky and Stepanov 1987, Algorithmica 2:403-430): it needs to know only what is near, and still
/// arrives, or knows that it cannot, since
///
/// - it follows a boundary from where it hits it, at clearance `distance` with the goal on the other side,
/// - and leaves it only nearer to the goal than it hit it, by a tenth of `distance` at least, where no disc that near
///   lies on the goal's side: so every hit is nearer to the goal than the last;
/// - back where it hit, on the same course, it has gone the whole way round: the goal is out of reach. Then it has no
///   opinion, and `given_up` in its memory is set, until the goal moves.
///
/// The boundary is that of all discs, grown by the machine's radius and `distance`. One disc governs: the course is
/// along its tangent and leans toward the set distance, up to 45 degrees at half of `distance` off. When that leads
/// into another, that one governs, but not where the gap between the two is wide enough to pass. Discs with too narrow
/// a gap between them so make one boundary; a gap of just the width that can be passed, to a hundredth, may be taken
/// for either. Less than two `distance` from the goal, it drives straight to it where the way there keeps half of
/// `distance` from all discs. A goal closer than that to a disc counts as out of reach.
///
/// Unlike in the source's first algorithm it does not go all the way round before it leaves, which is the shorter way
/// round discs, but for which the source's bound, D + 1.5 times the perimeters, is no theorem.
///
/// To be turned round in spite of a cramped corner or a push, the place to come back to is set anew after `longest`
/// metres, and after twice as many each time again (Brent 1980, BIT 20:176-184). Needs a frame that stays put, discs
/// that do so too, and ticks of less than half of `distance` of way. No opinion on the goal, without one, and where it
/// has to follow a disc whose very centre it is at.
struct along_boundary {
  Parameter distance = 0.3F;   ///< metres of clearance
  bool on_right = true;        ///< whether the boundary is kept on the right hand
  Parameter longest = 50.0F;   ///< metres; a boundary up to this long is found to be closed in one round

  /// Since when and from where the boundary is followed, to tell that it is closed.
  template <Number S>
  struct Round {
    Vec2<S> place{S(0.0F), S(0.0F)};   ///< to come back to; metres
    Vec2<S> course{S(0.0F), S(0.0F)};  ///< that was taken there
    S travelled{S(0.0F)};              ///< metres since there
    S until{S(0.0F)};                  ///< metres at which the place is set anew
    mask_t<S> departed{};              ///< whether the machine has been away from there
  };
  /// What the field remembers between ticks.
  template <Number S>
  struct Memory {
    mask_t<S> following{};  ///< whether it is at a boundary; no at first
    mask_t<S> given_up{};  ///< whether the goal was found to be out of reach; no until then
    S hit_distance{S(0.0F)};  ///< of the goal, where the boundary was hit; metres
    Vec2<S> goal{S(0.0F), S(0.0F)};  ///< metres; a goal that moves by over a tenth of `distance` starts it anew
    Vec2<S> position{S(0.0F), S(0.0F)};  ///< a tick ago
    Vec2<S> disc{S(0.0F), S(0.0F)};      ///< centre of the one that governs
    Round<S> round{};  ///< the way since the last place to come back to
  };

  /// To the goal, or along the boundary that is followed.
  template <Number S, int N>
  [[nodiscard]] constexpr Course<S> operator()(Percept<S, N> const& percept, Memory<S>& memory) const noexcept {
    S const set = S(distance);
    mask_t<S> const some = percept.goal_confidence > S(0.0F);
    S const progress = set * S(0.1F);
    mask_t<S> const same_goal = length(Vec2<S>(percept.goal - memory.goal)) <= progress;
    mask_t<S> const was_following = memory.following && same_goal;
    mask_t<S> const had_given_up = memory.given_up && same_goal;

    Ahead<S> const ahead = look_ahead(percept);
    mask_t<S> const hit = some && !was_following && !had_given_up && ahead.struck && !ahead.clear_to_goal;
    Beside<S> const before = governing(percept, hit, memory.disc);
    Beside<S> const beside = turned_to(percept, before);
    mask_t<S> const nearer = percept.goal_distance < memory.hit_distance - progress;
    mask_t<S> const past = dot(percept.goal_direction, beside.away) >= S(0.0F);
    mask_t<S> const lost = beside.clearance > S(3.0F) * set;
    mask_t<S> const leave = ahead.clear_to_goal || lost || (nearer && past && !blocked(percept, beside));
    mask_t<S> const following = hit || (was_following && !leave);

    S const off = S(2.0F) * (beside.clearance - set) / set;
    Vec2<S> const lean = scaled(beside.away, clamp(off, S(-1.0F), S(1.0F)));
    Course<S> const along = course_along(Vec2<S>(tangent(beside.away) - lean), S(1.0F));

    Memory<S> next = memory;
    next.following = following;
    next.hit_distance = select(hit, percept.goal_distance, memory.hit_distance);
    next.goal = select(same_goal, memory.goal, percept.goal);
    next.position = percept.pose.position;
    next.disc = beside.disc.centre;
    S const step = least(length(Vec2<S>(percept.pose.position - memory.position)), S(far_away));
    mask_t<S> const back = go_round(percept.pose.position, along.direction, step, hit, next.round);
    next.given_up = had_given_up || (following && back);
    assign_where(some, memory, next);

    mask_t<S> const stop = !some || memory.given_up;
    Vec2<S> const direction = select(following, along.direction, percept.goal_direction);
    S const confidence = select(following, along.confidence, percept.goal_confidence);
    return {select(stop, zero2<S>(), direction), select(stop, S(0.0F), confidence)};
  }

 private:
  template <Number S>
  struct Ahead {
    mask_t<S> struck{};         // some disc within `distance` would come closer on the way to the goal
    mask_t<S> clear_to_goal{};  // the goal is near, and the whole way to it clear
  };

  template <Number S, int N>
  [[nodiscard]] constexpr Ahead<S> look_ahead(Percept<S, N> const& percept) const noexcept {
    S const set = S(distance);
    Vec2<S> const& way = percept.goal_direction;
    Ahead<S> ahead;
    mask_t<S> barred{};
    for (Disc<S> const& disc : percept.discs) {
      Vec2<S> const to_centre = disc.centre - percept.pose.position;
      S const edge = disc.radius + percept.robot_radius;
      S const forward = dot(way, to_centre);
      ahead.struck = ahead.struck || (length(to_centre) - edge < set && forward > S(0.0F));
      // The point of the way that is nearest to the disc's centre.
      Vec2<S> const nearest = scaled(way, clamp(forward, S(0.0F), percept.goal_distance));
      barred = barred || length(Vec2<S>(to_centre - nearest)) - edge < set * S(0.5F);
    }
    ahead.clear_to_goal = percept.goal_distance < S(2.0F) * set && !barred;
    return ahead;
  }

  // A disc as seen from the machine.
  template <Number S>
  struct Beside {
    Disc<S> disc;
    Vec2<S> away{S(0.0F), S(0.0F)};  // unit
    S clearance{S(far_away)};
  };

  template <Number S, int N>
  [[nodiscard]] static constexpr Beside<S> seen(Percept<S, N> const& percept, Disc<S> const& disc) noexcept {
    Polar<S> const away = polar(Vec2<S>(percept.pose.position - disc.centre));
    return {disc, away.direction, away.length - disc.radius - percept.robot_radius};
  }

  // With the disc on the right hand the machine goes to the right of `away`, which points from the disc to it.
  template <Number S>
  [[nodiscard]] constexpr Vec2<S> tangent(Vec2<S> const& away) const noexcept {
    return on_right ? Vec2<S>{away.y(), -away.x()} : left_of(away);
  }

  // The disc that is hit, or that governed so far: the one about where that was. The nearest where that is gone.
  template <Number S, int N>
  [[nodiscard]] constexpr Beside<S> governing(Percept<S, N> const& percept, mask_t<S> const& hit,
                                              Vec2<S> const& where) const noexcept {
    Beside<S> found = seen(percept, percept.nearest);
    S best = S(distance);
    for (Disc<S> const& disc : percept.discs) {
      Beside<S> const here = seen(percept, disc);
      mask_t<S> const ahead = dot(percept.goal_direction, here.away) < S(0.0F);
      S const struck = select(ahead, here.clearance, S(far_away));
      S const value = select(hit, struck, length(Vec2<S>(disc.centre - where)));
      mask_t<S> const better = value < best;
      assign_where(better, found, here);
      best = select(better, value, best);
    }
    return found;
  }

  // Whether the gap between two discs is too narrow to pass.
  template <Number S>
  [[nodiscard]] constexpr mask_t<S> joined(Disc<S> const& a, Disc<S> const& b, S const& robot_radius) const noexcept {
    S const between = length(Vec2<S>(a.centre - b.centre)) - a.radius - b.radius;
    return between < S(2.0F) * (robot_radius + S(distance));
  }

  // Whether a disc besides the one that governs keeps the machine from leaving. To one that makes one boundary with it
  // the course may come a little later than to the set distance, to others a little nearer.
  template <Number S, int N>
  [[nodiscard]] constexpr mask_t<S> blocked(Percept<S, N> const& percept, Beside<S> const& beside) const noexcept {
    S const set = S(distance);
    mask_t<S> any{};
    for (Disc<S> const& disc : percept.discs) {
      Beside<S> const here = seen(percept, disc);
      mask_t<S> const one = joined(disc, beside.disc, percept.robot_radius);
      S const near = select(one, S(set * S(1.03F)), S(set * S(0.9F)));
      any = any || (here.clearance < near && dot(percept.goal_direction, here.away) < S(0.0F));
    }
    return any;
  }

  // The disc that governs next: where the way along one leads into another, that one.
  template <Number S, int N>
  [[nodiscard]] constexpr Beside<S> turned_to(Percept<S, N> const& percept, Beside<S> const& from) const noexcept {
    Vec2<S> const way = tangent(from.away);
    Beside<S> to = from;
    S best = S(distance);
    for (Disc<S> const& disc : percept.discs) {
      Beside<S> const here = seen(percept, disc);
      mask_t<S> const better = joined(disc, from.disc, percept.robot_radius) && dot(way, here.away) < S(0.0F) &&
                               here.clearance < best;
      assign_where(better, to, here);
      best = select(better, here.clearance, best);
    }
    return to;
  }

  // Keeps account of a round; whether it is closed.
  template <Number S>
  [[nodiscard]] constexpr mask_t<S> go_round(Vec2<S> const& position, Vec2<S> const& course, S const& step,
                                             mask_t<S> const& hit, Round<S>& round) const noexcept {
    round.travelled = round.travelled + step;
    mask_t<S> const too_long = round.travelled > round.until;
    Round<S> const anew{position, course, S(0.0F), select(hit, S(longest), S(round.until + round.until)), mask_t<S>{}};
    assign_where(hit || too_long, round, anew);
    S const away = length(Vec2<S>(position - round.place));
    // In a hole narrower than that, it is enough to have gone as far as round a point, 2 pi `distance`.
    round.departed = round.departed || away > S(distance) || round.travelled > S(6.3F) * S(distance);
    return round.departed && away < S(distance) * S(0.5F) && dot(course, round.course) > S(0.0F);
  }
};

}  // namespace wend::inline v0
