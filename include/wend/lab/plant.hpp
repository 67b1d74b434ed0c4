// wend/lab/plant.hpp - the machine and its wheels on any number, so that many runs can be driven on lanes.
#pragma once

#include <algorithm>
#include <array>
#include <cmath>
#include <cstddef>
#include <stdexcept>

#include "wend/lab/lane_draws.hpp"
#include "wend/lab/lanes.hpp"
#include "wend/lab/random.hpp"
#include "wend/lab/simulate.hpp"
#include "wend/lab/vehicle.hpp"
#include "wend/motion/body_velocity.hpp"
#include "wend/motion/differential_drive.hpp"
#include "wend/plane.hpp"

namespace wend::inline v0::lab {

namespace detail {

// Of a body that keeps its velocity for a while: how far it gets, and its turning by half of the whole angle.
template <Number S>
struct HalfTurn {
  Vec2<S> direction;  // unit: the nose, turned by half the angle
  S chord;            // metres
};

// As along_arc does it with sines: the chord lies at half the angle turned. Half the angle is a turn by twice the
// quarter, whose tangent u gives ((1 - u^2) / (1 + u^2), 2 u / (1 + u^2)): a rotation whatever u is. The tangent is its
// series to the fifth power, sin(x) / x to the fourth.
template <Number S>
[[nodiscard]] HalfTurn<S> half_turn(BodyVelocity<S> const& velocity, S const& time) noexcept {
  S const quarter = S(0.25F) * velocity.turn_rate * time;
  S const z = quarter * quarter;
  S const u = quarter * (S(1.0F) + z * (S(0.33333333F) + z * S(0.13333333F)));
  S const share = S(1.0F) / (S(1.0F) + u * u);
  S const half = S(4.0F) * z;  // the square of half the angle
  S const sinc_half = S(1.0F) - half * (S(0.16666667F) - half * S(0.0083333333F));
  return {{(S(1.0F) - u * u) * share, S(2.0F) * u * share}, velocity.speed * time * sinc_half};
}

}  // namespace detail

/// The most that one step of a plant may turn: radians. Up to this, a step differs from the exact arc by under 2e-8
/// radians and 2e-8 of its length, less than the rounding of single precision (6e-8).
inline constexpr double most_turned = 0.4;

/// How a machine moved in one tick: metres.
template <Number S>
struct Moved {
  S driven{S(0.0F)};  ///< along its path
  Vec2<S> way{zero2<S>()};  ///< from where it was, to the rounding of the way itself and not of the positions
};

/// The truth about a machine on each lane: pose, wheels, orders under way, time, distance. No trigonometry: the pose
/// has a unit heading, and the body moves along arcs, which single precision cannot tell from exact ones (most_turned).
/// Each tick is cut into steps no longer than `finest` seconds, over each of which the wheel rates are held at their
/// mean. An order takes effect at the first step that begins no sooner than the vehicle's latency after it was given:
/// never early, and late by less than a step. Positions and times are summed up with care, so that slow motion far from
/// the origin is not lost in rounding.
template <Number S>
class Plant {
 public:
  /// Throws std::invalid_argument for a vehicle that cannot be: a period that is not over 0, a jitter outside [0, 1),
  /// or a latency of more than most_orders ticks.
  Plant(Vehicle const& vehicle, double finest, std::uint64_t seed) : vehicle_(vehicle), draws_(seed) {
    if (!(vehicle.period > 0.0) || !(vehicle.jitter >= 0.0 && vehicle.jitter < 1.0) || !(vehicle.latency >= 0.0)) {
      throw std::invalid_argument("wend: campaign: expected a period over 0, a jitter in [0, 1) and a latency from 0");
    }
    double const under_way = std::ceil(vehicle.latency / (vehicle.period * (1.0 - vehicle.jitter)) - 1e-9);
    if (!(under_way < static_cast<double>(most_orders))) {
      throw std::invalid_argument("wend: campaign: the latency is longer than 16 ticks");
    }
    orders_kept_ = static_cast<std::size_t>(under_way) + 1;
    double const turn = 2.0 * fastest_rim() / static_cast<double>(vehicle.drive.track) / (1.0 - vehicle.track_spread);
    double const step = std::min(finest, most_turned / turn);
    steps_ = static_cast<int>(std::ceil(longest_period() / step - 1e-9));
  }

  /// Puts a machine at rest on one lane: run `run`, from a pose.
  void start(int k, std::uint64_t run, std::uint64_t seed, Pose<double> const& from) {
    detail::Built const built(vehicle_, Draws(seed, run));
    draws_.start(k, run);
    auto const put = [k](CarefulSum<S>& sum, double value) {
      set_lane(sum.value, k, static_cast<float>(value));
      set_lane(sum.carry, k, 0.0F);
    };
    put(x_, from.position.x());
    put(y_, from.position.y());
    put(time_, 0.0);
    put(way_, 0.0);
    set_lane(heading_.x(), k, static_cast<float>(from.heading.x()));
    set_lane(heading_.y(), k, static_cast<float>(from.heading.y()));
    set_lane(now_.left, k, 0.0F);
    set_lane(now_.right, k, 0.0F);
    set_lane(left_size_, k, static_cast<float>(built.wheels.left));
    set_lane(right_size_, k, static_cast<float>(built.wheels.right));
    set_lane(turned_share_, k, static_cast<float>(built.turning));
    set_lane(last_dt_, k, static_cast<float>(vehicle_.period));
    for (Order& order : orders_) {  // to stand still, given long ago
      set_lane(order.age, k, 1.0e3F);
      set_lane(order.rates.left, k, 0.0F);
      set_lane(order.rates.right, k, 0.0F);
    }
  }

  /// Where the machines really are: metres, and unit vectors along their noses.
  [[nodiscard]] Pose<S> pose() const noexcept { return {{x_.value, y_.value}, heading_}; }
  [[nodiscard]] S const& time() const noexcept { return time_.value; }  ///< seconds
  [[nodiscard]] S const& way() const noexcept { return way_.value; }  ///< metres driven
  [[nodiscard]] S const& last_dt() const noexcept { return last_dt_; }  ///< seconds of the last tick
  /// The draws of the runs in the lanes.
  [[nodiscard]] LaneDraws<S> const& draws() const noexcept { return draws_; }

  /// The pose as the machine's own estimate has it, this tick. The estimated heading is off by twice the angle whose
  /// tangent is half the error drawn.
  [[nodiscard]] Pose<S> believed() const noexcept {
    Pose<S> pose = this->pose();
    if (vehicle_.position_noise > 0.0 || vehicle_.heading_noise > 0.0) {
      auto const words = draws_.words(detail::of_pose);
      NormalPair<S> const off = normals_of<S>(words[0], words[1]);
      S const sigma = S(static_cast<float>(vehicle_.position_noise));
      pose.position = {pose.position.x() + sigma * off.first, pose.position.y() + sigma * off.second};
      S const u = S(static_cast<float>(0.5 * vehicle_.heading_noise)) * normals_of<S>(words[2], words[3]).first;
      S const share = S(1.0F) / (S(1.0F) + u * u);
      pose.heading = turned_out_of(pose.heading, Vec2<S>{(S(1.0F) - u * u) * share, S(2.0F) * u * share});
    }
    return pose;
  }

  /// What the loop asks for at the beginning of a tick. Whatever it believes of its drive, no wheel does more than it
  /// can.
  void order(WheelRates<S> const& rates) noexcept {
    for (std::size_t i = orders_kept_; i-- > 1;) {
      orders_[i] = orders_[i - 1];
    }
    S const limit = S(vehicle_.drive.max_rate);
    orders_[0] = {S(0.0F), {clamp(rates.left, S(-limit), limit), clamp(rates.right, S(-limit), limit)}};
  }

  /// Moves by one tick.
  Moved<S> move() noexcept {
    S dt = S(static_cast<float>(vehicle_.period));
    WheelRates<S> grip{left_size_, right_size_};
    if (vehicle_.jitter > 0.0 || vehicle_.slip > 0.0) {
      auto const words = draws_.words(detail::of_motion);
      dt = dt * (S(1.0F) + S(static_cast<float>(vehicle_.jitter)) * even_of<S>(words[0]));
      S const slip = S(static_cast<float>(vehicle_.slip));
      grip.left = grip.left * (S(1.0F) - slip * uniform_of<S>(words[1]));
      grip.right = grip.right * (S(1.0F) - slip * uniform_of<S>(words[2]));
    }
    S const step = dt * S(1.0F / static_cast<float>(steps_));
    S const change = S(static_cast<float>(vehicle_.acceleration / static_cast<double>(vehicle_.drive.wheel_radius))) *
                     step;
    S elapsed = S(0.0F);
    Moved<S> moved;
    for (int i = 0; i < steps_; ++i) {
      WheelRates<S> const mean = turn_wheels(elapsed, change);
      BodyVelocity<S> body = vehicle_.drive.body(WheelRates<S>{mean.left * grip.left, mean.right * grip.right});
      body.turn_rate = body.turn_rate * turned_share_;
      detail::HalfTurn<S> const half = detail::half_turn(body, step);
      Vec2<S> const along = turned_out_of(heading_, half.direction);
      Vec2<S> const part = scaled(along, half.chord);
      x_ += part.x();
      y_ += part.y();
      moved.way = {moved.way.x() + part.x(), moved.way.y() + part.y()};
      heading_ = turned_out_of(along, half.direction);
      moved.driven = moved.driven + magnitude(body.speed) * step;
      elapsed = elapsed + step;
    }
    // One step of Newton's iteration takes away what rounding has added to the heading's length.
    S const longer = S(1.5F) - S(0.5F) * dot(heading_, heading_);
    heading_ = scaled(heading_, longer);
    for (std::size_t i = 0; i < orders_kept_; ++i) {
      orders_[i].age = least(S(orders_[i].age + dt), S(1.0e6F));
    }
    time_ += dt;
    way_ += moved.driven;
    last_dt_ = dt;
    draws_.next_tick();
    return moved;
  }

  /// The most metres that a machine can get in one tick.
  [[nodiscard]] double most_driven() const noexcept { return fastest_rim() * longest_period(); }

 private:
  static constexpr std::size_t most_orders = 17;

  struct Order {
    S age{S(0.0F)};  // seconds since it was given
    WheelRates<S> rates;
  };

  [[nodiscard]] double fastest_rim() const noexcept {
    return static_cast<double>(vehicle_.drive.wheel_radius) * static_cast<double>(vehicle_.drive.max_rate) *
           (1.0 + vehicle_.wheel_spread);
  }
  [[nodiscard]] double longest_period() const noexcept { return vehicle_.period * (1.0 + vehicle_.jitter); }

  // The wheels' mean rates over a step that begins `elapsed` seconds into the tick.
  [[nodiscard]] WheelRates<S> turn_wheels(S const& elapsed, S const& change) noexcept {
    constexpr float rounding = 1e-5F;  // seconds: of the ages
    S const late = S(static_cast<float>(vehicle_.latency)) - S(rounding) - elapsed;
    WheelRates<S> wanted = orders_[orders_kept_ - 1].rates;  // the oldest kept is always in effect
    S age = orders_[orders_kept_ - 1].age;
    for (std::size_t i = orders_kept_ - 1; i-- > 0;) {
      mask_t<S> const in_effect = orders_[i].age >= late;
      wanted.left = select(in_effect, orders_[i].rates.left, wanted.left);
      wanted.right = select(in_effect, orders_[i].rates.right, wanted.right);
      age = select(in_effect, orders_[i].age, age);
    }
    if (vehicle_.watchdog < 1.0e5) {
      mask_t<S> const silent = age - late > S(static_cast<float>(vehicle_.watchdog));
      wanted.left = select(silent, S(0.0F), wanted.left);
      wanted.right = select(silent, S(0.0F), wanted.right);
    }
    WheelRates<S> const before = now_;
    now_.left = now_.left + clamp(S(wanted.left - now_.left), S(-change), change);
    now_.right = now_.right + clamp(S(wanted.right - now_.right), S(-change), change);
    return {S(0.5F) * (before.left + now_.left), S(0.5F) * (before.right + now_.right)};
  }

  Vehicle vehicle_;
  LaneDraws<S> draws_;
  std::size_t orders_kept_ = 1;
  int steps_ = 1;
  CarefulSum<S> x_;
  CarefulSum<S> y_;
  Vec2<S> heading_{S(1.0F), S(0.0F)};
  CarefulSum<S> time_;
  CarefulSum<S> way_;
  S last_dt_{S(0.0F)};
  WheelRates<S> now_;
  S left_size_{S(1.0F)};  // of the wheels, over what they should have
  S right_size_{S(1.0F)};
  S turned_share_{S(1.0F)};  // of the turning that the track should give
  std::array<Order, most_orders> orders_{};  // newest first
};

}  // namespace wend::inline v0::lab
