// wend/fields/shared_avoidance.hpp - machines that give way to each other, each doing half of it.
#pragma once

#include "wend/field.hpp"
#include "wend/fields/velocity_cone.hpp"
#include "wend/half_planes.hpp"

namespace wend::inline v0 {

/// The velocity nearest to the one straight to the goal that is in one half-plane for each disc (van den Berg, Guy, Lin
/// and Manocha 2011, Reciprocal n-body collision avoidance). Behind the half-plane: the relative velocities that lead
/// to a contact within the horizon fill a cone with a rounded tip. The least change of the present relative velocity
/// that leaves it is found, and each of two machines makes its share of that change, or more. When all of them do, none
/// touches another within the horizon. A disc that stands still makes no change, so the machine then makes all of it.
///
/// The course is the velocity's direction, its speed share the velocity's size over `speed`. Where the half-planes have
/// no point in common, the velocity that breaks them least, with a confidence of 1 / (1 + breach / speed). Where it is
/// best to stand, the goal's direction with a speed share of 0. Without a goal the machine stands and gives way: no
/// opinion unless it has to.
///
/// Machines that meet exactly head on would only slow down, and stand face to face; more of them on a circle, all bound
/// across, jam in its middle. So where the straight way is refused, the wish leans to the right by `lean`, for every
/// machine alike: they go round. Up to nine do with 0.3, where 0.1 leaves eight jammed.
///
/// What the method does not promise: where half-planes have no point in common, as in a jam, machines can come nearer
/// than the margin, and touch. It takes a machine that can drive any way at once; one that has to turn first needs more
/// margin. And it takes one that gets the speed it asks for: a pace that stops for whatever comes near stops it in the
/// way of what does not give way.
///
/// Remembers the velocity that it gave last, which is taken for the machine's own (a machine that is held slower than
/// that plans with a velocity it does not have). Starts from rest. The memory is a vector in the frame of the percept.
struct shared_avoidance {
  Parameter speed = 0.6F;  ///< metres a second, the most that is given; the top speed of its pace
  Parameter horizon = 4.0F;  ///< seconds; contacts after it do not count
  Parameter margin = 0.12F;  ///< metres to stay clear of a disc; more than the margin of the pace, which stops at that
  Parameter own_share = 0.5F;  ///< of the change, where the other moves too; in [0, 1]; the other makes the rest
  Parameter still = 0.02F;  ///< metres a second; what is slower counts as standing
  Parameter recovery = 0.5F;  ///< seconds in which to get out of an overlap
  Parameter lean = 0.3F;  ///< tangent of the angle; 0 for the published form

  /// What was given last.
  template <Number S>
  struct Memory {
    Vec2<S> velocity{S(0.0F), S(0.0F)};  ///< metres a second over the ground
  };

  /// The velocity nearest to the wish that shares the avoidance, as direction and speed share.
  template <Number S, int N>
  [[nodiscard]] constexpr Course<S> operator()(Percept<S, N> const& percept, Memory<S>& memory) const noexcept {
    S const most = S(speed);
    HalfPlanes<S, N> const all = half_planes(percept, memory.velocity);
    Vec2<S> const straight = scaled(percept.goal_direction, most);
    mask_t<S> refused{};
    for (int i = 0; i < all.count; ++i) {
      refused = refused || dot(all[i].normal, straight) < all[i].offset;
    }
    Vec2<S> const leaning = straight - scaled(left_of(straight), S(lean));
    InHalfPlanes<S> const nearest = nearest_in_all(all, most, Vec2<S>(select(refused, leaning, straight)));
    LeastBreach<S> const best = choose(
        nearest.found, [&]() noexcept { return LeastBreach<S>{nearest.point, S(0.0F)}; },
        [&]() noexcept { return least_breach(all, most); });
    Polar<S> const way = polar(best.point);
    mask_t<S> const goes = way.length > S(no_length) && finite(way.length);
    memory.velocity = select(goes, best.point, zero2<S>());
    S const sure = clamp(S(most / (most + best.breach)), S(1.0e-3F), S(1.0F));  // 0 / 0 at a speed of 0
    S const share = clamp(S(way.length / most), S(0.0F), S(1.0F));
    return {select(goes, way.direction, percept.goal_direction), select(goes, sure, percept.goal_confidence),
            select(goes, share, S(0.0F))};
  }

  /// The half-planes of velocities, one for each disc, in the order of the discs. `velocity` is the machine's own over
  /// the ground, and counts for no more than `speed`.
  template <Number S, int N>
  [[nodiscard]] constexpr HalfPlanes<S, N> half_planes(Percept<S, N> const& percept,
                                                       Vec2<S> const& velocity) const noexcept {
    Polar<S> const own = polar(velocity);
    Vec2<S> const held = scaled(own.direction, least(own.length, S(speed)));
    HalfPlanes<S, N> all;
    for (int i = 0; i < percept.discs.size(); ++i) {
      all.add(half_plane(Vec2<S>(percept.discs[i].centre - percept.pose.position),
                         S(percept.discs[i].radius + percept.robot_radius + S(margin)), held, percept.velocity(i)));
    }
    return all;
  }

 private:
  template <Number S>
  [[nodiscard]] constexpr HalfPlane<S> half_plane(Vec2<S> const& offset, S const& radius, Vec2<S> const& own,
                                                  Vec2<S> const& other) const noexcept {
    Vec2<S> const relative = own - other;
    mask_t<S> const overlap = length(offset) <= radius;
    S const per_second = S(1.0F) / select(overlap, S(recovery), S(horizon));
    // The rounded tip: relative velocities that just lead to a contact when the horizon ends.
    Vec2<S> const from_tip = relative - scaled(offset, per_second);
    Polar<S> const out_of_tip = polar(from_tip);
    S const back = dot(from_tip, offset);
    mask_t<S> const at_tip = overlap || (back < S(0.0F) && squared(back) > squared(S(radius * out_of_tip.length)));
    mask_t<S> const amid = out_of_tip.length <= S(no_length);  // any way out is as good; straight back is taken
    Vec2<S> const tip_normal = select(amid, Vec2<S>(-polar(offset).direction), out_of_tip.direction);
    S const tip_change = radius * per_second - out_of_tip.length;
    // The edges.
    VelocityCone<S> const cone = velocity_cone(offset, radius);
    Vec2<S> const edge_normal =
        select(cross(offset, from_tip) > S(0.0F), left_of(cone.left), Vec2<S>(-left_of(cone.right)));
    S const edge_change = -dot(relative, edge_normal);

    Vec2<S> const normal = select(at_tip, tip_normal, edge_normal);
    S const change = select(at_tip, tip_change, edge_change);  // negative where there is room
    S const share = select(dot(other, other) > squared(S(still)), S(own_share), S(1.0F));
    S const least_along = dot(normal, own) + share * change;
    mask_t<S> const some = dot(normal, normal) > S(0.5F) && finite(least_along);
    HalfPlane<S> const none;
    return {select(some, normal, none.normal), select(some, least_along, none.offset)};
  }
};

}  // namespace wend::inline v0
