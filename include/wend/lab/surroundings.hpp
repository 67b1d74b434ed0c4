// wend/lab/surroundings.hpp - the discs around the machine on each lane: those it is told, and how near it really came.
#pragma once

#include <algorithm>
#include <array>
#include <cstddef>
#include <cstdint>
#include <limits>
#include <vector>

#include "wend/disc.hpp"
#include "wend/lab/ground.hpp"
#include "wend/lab/lane_draws.hpp"
#include "wend/lab/lanes.hpp"
#include "wend/lab/plant.hpp"
#include "wend/lab/vehicle.hpp"
#include "wend/plane.hpp"

namespace wend::inline v0::lab {

/// Up to `Told` discs a lane: the nearest ones. The list of a lane is made anew each time its machine has driven
/// `renewed_after` metres, or less where more discs are near than it holds, always soon enough that the nearest disc of
/// all is on it. So a disc comes into sight late or early by that much at most.
template <Number S, int Told>
class Surroundings {
 public:
  static constexpr double renewed_after = 0.5;  ///< metres

  /// `slots`, at most Told: how many discs are told at the most. It has to be the same for all runs of a campaign, as
  /// empty places are told too, as discs far away.
  Surroundings(Vehicle const& vehicle, int slots) : vehicle_(vehicle), slots_(static_cast<std::size_t>(slots)) {}

  /// Puts a machine at a point of a ground. Returns the metres from its edge to the nearest disc's.
  double start(int k, Ground const& ground, Vec2<double> const& at) {
    Lane& lane = lanes_[static_cast<std::size_t>(k)];
    lane.ground = &ground;
    double const clear = renew(k, at) - vehicle_.radius;
    set_lane(least_, k, static_cast<float>(clear) - rounding(at));
    return clear;
  }

  /// Renews the lists that would no longer be good after another `way` metres. Before each tick.
  template <typename Active>
  void look_around(Pose<S> const& pose, double way, Active const& active) {
    S const after = driven_ + S(static_cast<float>(way));
    mask_t<S> const due = after > good_for_;
    if (!any(due)) {
      return;
    }
    for (int k = 0; k < lane_count<S>(); ++k) {
      if (active(k) && lane(due, k)) {
        renew(k, {static_cast<double>(lane(pose.position.x(), k)), static_cast<double>(lane(pose.position.y(), k))});
      }
    }
  }

  /// What the loop is told this tick: the discs in sight, with the vehicle's errors, and others far away.
  [[nodiscard]] DiscSet<S, Told> told(LaneDraws<S> const& draws, Vec2<S> const& viewpoint) const noexcept {
    DiscSet<S, Told> set;
    bool const errs = vehicle_.disc_noise > 0.0 || vehicle_.radius_noise > 0.0 || vehicle_.disc_dropout > 0.0;
    for (std::size_t i = 0; i < slots_; ++i) {
      Slot const& slot = slot_[i];
      Disc<S> disc{slot.seen, slot.radius};
      if (errs) {
        auto const words = draws.words(detail::of_disc, slot.number);
        NormalPair<S> const off = normals_of<S>(words[0], words[1]);
        S const sigma = S(static_cast<float>(vehicle_.disc_noise));
        disc.centre = {disc.centre.x() + sigma * off.first, disc.centre.y() + sigma * off.second};
        S const radius = slot.radius + S(static_cast<float>(vehicle_.radius_noise)) * even_of<S>(words[2]);
        disc.radius = greatest(radius, S(0.0F));
        mask_t<S> const lost = uniform_of<S>(words[3]) < S(static_cast<float>(vehicle_.disc_dropout));
        disc.centre = select(lost, Disc<S>{}.centre, disc.centre);
      }
      set.add(disc, viewpoint);
    }
    return set;
  }

  /// Takes into account how the machine got from one point to another. Whatever the shape of its path, it stays within
  /// half the root of driven^2 - way^2 of the straight line (the ellipse with both ends as foci), so the least
  /// clearance is never more than the true one of the whole path; it is less by that much, which for an arc is 15 %
  /// more than its sagitta, by a two-thousandth of the way, and by a few units in the last place of the coordinates.
  void pass(Vec2<S> const& from, Vec2<S> const& to, Moved<S> const& moved) noexcept {
    S const driven = moved.driven;
    Vec2<S> const way = to - from;
    S const size = dot(way, way);
    S const per_size = S(1.0F) / greatest(size, S(1.0e-30F));
    S nearest = S(far_away);
    for (std::size_t i = 0; i < slots_; ++i) {
      Slot const& slot = slot_[i];
      Vec2<S> const to_centre = slot.centre - from;
      S const share = clamp(S(dot(way, to_centre) * per_size), S(0.0F), S(1.0F));
      nearest = least(S(length(Vec2<S>(to_centre - scaled(way, share))) - slot.radius), nearest);
    }
    driven_ = driven_ + driven;
    nearest = least(nearest, S(beyond_ - driven_));
    // The chord as it was summed up, not as the difference of two positions: their rounding would drown what is asked.
    S const rest = greatest(S(driven * driven - dot(moved.way, moved.way)), S(0.0F));
    S const bulge = S(0.5F) * root(S(rest + S(1.0e-6F) * driven * driven));
    S const lost = S(4.0e-7F) * (magnitude(to.x()) + magnitude(to.y()));
    S const clear = nearest - S(static_cast<float>(vehicle_.radius)) - bulge - lost;
    // A world that is empty is not left by any machine; anything else is nearer than that.
    least_ = least(select(nearest < S(0.5F * far_away), clear, least_), least_);
  }

  /// The least clearance so far: metres from the body's edge to the nearest disc's.
  [[nodiscard]] S const& least_clearance() const noexcept { return least_; }

  /// The clearance at a point, of one lane.
  [[nodiscard]] double clearance(int k, Vec2<double> const& at) const {
    return lanes_[static_cast<std::size_t>(k)].ground->gap(at) - vehicle_.radius;
  }

 private:
  struct Slot {
    Vec2<S> centre{Disc<S>{}.centre};
    Vec2<S> seen{Disc<S>{}.centre};  // where the loop is told that it is, but for errors: far away when out of sight
    S radius{S(0.0F)};
    words_t<S> number{};
  };
  struct Lane {
    Ground const* ground = nullptr;
    std::vector<NearDisc> near{};
  };

  [[nodiscard]] static float rounding(Vec2<double> const& at) {
    return 4.0e-7F * static_cast<float>(std::abs(at.x()) + std::abs(at.y()));
  }

  // Returns the metres to the nearest edge.
  double renew(int k, Vec2<double> const& at) {
    Lane& lane = lanes_[static_cast<std::size_t>(k)];
    double beyond = lane.ground->nearest(at, vehicle_.sight + renewed_after, lane.near, slots_ + 1);
    double const gap = lane.near.empty() ? std::numeric_limits<double>::infinity() : lane.near.front().gap;
    if (beyond - gap < 2.0 * renewed_after) {  // the only one in reach is at its rim
      beyond = lane.ground->nearest(at, gap + 2.0 * renewed_after, lane.near, slots_ + 1);
    }
    if (lane.near.size() > slots_) {
      beyond = std::min(beyond, lane.near[slots_].gap);
    }
    // On the way, the nearest one may get farther by no more than what is driven, and another one nearer.
    double const good_for = std::min(renewed_after, 0.5 * (beyond - gap));
    set_lane(good_for_, k, static_cast<float>(lane.near.empty() ? renewed_after : good_for));
    set_lane(beyond_, k, static_cast<float>(std::min(beyond, static_cast<double>(far_away))));
    set_lane(driven_, k, 0.0F);
    for (std::size_t i = 0; i < slots_; ++i) {
      Slot& slot = slot_[i];
      bool const some = i < lane.near.size();
      Disc<double> const disc = some ? lane.ground->world().discs[lane.near[i].number].disc : Disc<double>{};
      Vec2<double> const seen = some && lane.near[i].gap <= vehicle_.sight ? disc.centre : Disc<double>{}.centre;
      set_lane(slot.centre.x(), k, static_cast<float>(disc.centre.x()));
      set_lane(slot.centre.y(), k, static_cast<float>(disc.centre.y()));
      set_lane(slot.seen.x(), k, static_cast<float>(seen.x()));
      set_lane(slot.seen.y(), k, static_cast<float>(seen.y()));
      set_lane(slot.radius, k, static_cast<float>(disc.radius));
      LaneDraws<S>::set(slot.number, k, some ? lane.near[i].number : 0U);
    }
    return gap;
  }

  Vehicle vehicle_;
  std::size_t slots_;
  std::array<Slot, static_cast<std::size_t>(Told)> slot_{};
  std::array<Lane, static_cast<std::size_t>(lane_count<S>())> lanes_{};
  S least_{S(far_away)};
  S driven_{S(0.0F)};  // metres since the list was made
  S good_for_{S(0.0F)};  // metres that may be driven on this list
  S beyond_{S(far_away)};  // metres to any disc that is not on the list, when it was made
};

}  // namespace wend::inline v0::lab
