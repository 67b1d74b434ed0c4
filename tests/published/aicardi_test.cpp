// Docking: Aicardi, Casalino, Bicchi and Balestrino (1995), Closed loop steering of unicycle-like vehicles via Lyapunov
// techniques, IEEE Robotics and Automation Magazine 2(1):27-35 (from memory). In polar coordinates about the dock, e
// the distance, theta the direction of sight and alpha that less the heading:
//   e' = -u cos(alpha), alpha' = -w + u sin(alpha) / e, theta' = u sin(alpha) / e
//   u = gamma cos(alpha) e, w = k alpha + gamma cos(alpha) sin(alpha) / alpha (alpha + h theta)
//   V = (e^2 + alpha^2 + h theta^2) / 2, V' = -gamma cos(alpha)^2 e^2 - k alpha^2.
// The field's own Lyapunov function is that of its docstring, worked out here from angles.
#include <algorithm>
#include <array>
#include <cmath>
#include <numbers>
#include <random>

#include <doctest/doctest.h>

#include "wend/angle.hpp"
#include "wend/fields/to_dock.hpp"
#include "wend/motion/steering.hpp"

namespace {

constexpr double pi = std::numbers::pi;
using Vec = wend::Vec2<double>;
using State = std::array<double, 3>;

template <typename F>
State runge_kutta(State const& x, double dt, F const& f) {
  auto const moved = [&x](State const& by, double k) {
    return State{x[0] + k * by[0], x[1] + k * by[1], x[2] + k * by[2]};
  };
  State const a = f(x);
  State const b = f(moved(a, dt / 2.0));
  State const c = f(moved(b, dt / 2.0));
  State const d = f(moved(c, dt));
  State next;
  for (std::size_t i = 0; i < 3; ++i) {
    next[i] = x[i] + dt / 6.0 * (a[i] + 2.0 * b[i] + 2.0 * c[i] + d[i]);
  }
  return next;
}

constexpr wend::Bearing dock_heading = wend::bearing(0.7);

// A unicycle (x, y, heading) that the field leads to the origin, steered by the library's own Steering.
struct Unicycle {
  wend::to_dock field{.heading = dock_heading, .close = 0.0F};
  wend::Steering steering{.gain = 3.0F, .max_turn_rate = 1.0e6F};
  double allowed = 0.5;  // metres a second

  [[nodiscard]] wend::Course<double> course(State const& x) const {
    wend::DiscSet<double, 1> const none;
    wend::Pose<double> const pose{{x[0], x[1]}, {std::cos(x[2]), std::sin(x[2])}};
    return wend::evaluate(field, wend::look(pose, Vec(0.0, 0.0), none, 0.2, 0.05));
  }
  [[nodiscard]] State slope(State const& x) const {
    Vec const nose{std::cos(x[2]), std::sin(x[2])};
    auto const velocity = steering(course(x), nose, allowed);
    return {velocity.speed * nose.x(), velocity.speed * nose.y(), velocity.turn_rate};
  }
  // The greatest speed over distance that there can be.
  [[nodiscard]] double most() const { return allowed / static_cast<double>(field.slow_within); }

  // t: from the line of sight to the dock's heading; n: from the course to the nose.
  [[nodiscard]] double t(State const& x) const { return wend::turn(std::atan2(-x[1], -x[0]), 0.7); }
  [[nodiscard]] double n(State const& x) const {
    Vec const way = course(x).direction;
    return wend::turn(std::atan2(way.y(), way.x()), x[2]);
  }
  // ln(1 + (e / slow_within)^2) / 4 - 8 ln cos(t / 2) + (1 - cos n).
  [[nodiscard]] double lyapunov(State const& x) const {
    double const e = std::hypot(x[0], x[1]) / static_cast<double>(field.slow_within);
    return std::log(1.0 + e * e) / 4.0 - 8.0 * std::log(std::cos(t(x) / 2.0)) + 1.0 - std::cos(n(x));
  }
};

class Random {
 public:
  explicit Random(std::uint32_t seed) : random_(seed) {}
  double between(double low, double high) {
    return low + (high - low) * (static_cast<double>(random_()) / 4294967296.0);
  }

 private:
  std::mt19937 random_;
};

// Aicardi's law in his own coordinates (e, alpha, theta), the heading being theta - alpha.
struct Aicardi {
  double gamma, k, h;
  [[nodiscard]] State slope(State const& x) const {
    auto const& [e, alpha, theta] = x;
    double const u = gamma * std::cos(alpha) * e;
    double const sinc = alpha == 0.0 ? 1.0 : std::sin(alpha) / alpha;
    double const w = k * alpha + gamma * std::cos(alpha) * sinc * (alpha + h * theta);
    return {-u * std::cos(alpha), -w + u * std::sin(alpha) / e, u * std::sin(alpha) / e};
  }
};

}  // namespace

TEST_CASE("to_dock: the Lyapunov function of its docstring falls at every step, from wherever a unicycle starts") {
  // 2.8 G is what the docstring asks for.
  for (double const gain_over_most : {2.8, 3.0, 8.0}) {
    Random random(11);
    Unicycle unicycle;
    unicycle.steering.gain = static_cast<float>(gain_over_most * unicycle.most() * 1.001);
    int rises = 0;
    int steps = 0;
    double worst_offset = 0.0;
    double worst_heading = 0.0;
    for (int start = 0; start < 150; ++start) {
      State x{random.between(-3.0, 3.0), random.between(-3.0, 3.0), random.between(-pi, pi)};
      if (std::abs(unicycle.t(x)) > 3.1) {
        continue;  // on the line ahead of the dock it has no bound
      }
      double before = unicycle.lyapunov(x);
      double const dt = 0.004;
      for (int i = 0; i < 15000 && std::hypot(x[0], x[1]) > 0.005; ++i) {
        x = runge_kutta(x, dt, [&unicycle](State const& at) { return unicycle.slope(at); });
        double const now = unicycle.lyapunov(x);
        rises += now < before ? 0 : 1;
        before = now;
        ++steps;
      }
      worst_offset = std::max(worst_offset, std::hypot(x[0], x[1]));
      worst_heading = std::max(worst_heading, std::abs(wend::turn(x[2], 0.7)));
    }
    CAPTURE(gain_over_most);
    CHECK(steps > 100'000);
    CHECK(rises == 0);
    CHECK(worst_offset <= 0.005);
    CHECK(worst_heading < 0.05);
  }
}

TEST_CASE("to_dock: a machine on its course has sin(t / 2) in proportion to e^(bend / 2)") {
  // The docstring's closed form, against the integrated way.
  for (float const bend : {1.0F, 2.0F, 3.0F}) {
    for (double const bearing : {-2.9, -1.5, -0.3, 0.4, 1.2, 2.2, 3.0}) {
      Unicycle point;
      point.field.bend = bend;
      State x{-2.0 * std::cos(bearing), -2.0 * std::sin(bearing), 0.0};
      double const factor = std::sin(point.t(x) / 2.0) / std::pow(2.0, 0.5 * static_cast<double>(bend));
      double worst = 0.0;
      while (std::hypot(x[0], x[1]) > 0.1) {
        x = runge_kutta(x, 0.002, [&point](State const& at) {
          Vec const way = point.course(at).direction;
          return State{way.x(), way.y(), 0.0};
        });
        double const e = std::hypot(x[0], x[1]);
        double const expected = factor * std::pow(e, 0.5 * static_cast<double>(bend));
        worst = std::max(worst, std::abs(std::sin(point.t(x) / 2.0) - expected));
      }
      CHECK(worst < 1.0e-6);
    }
  }
}

TEST_CASE("to_dock: Aicardi's law as it is written here has the Lyapunov function that is his") {
  Aicardi const law{0.8, 1.6, 3.0};
  Random random(3);
  for (int i = 0; i < 1000; ++i) {
    State const x{random.between(0.1, 3.0), random.between(-3.1, 3.1), random.between(-3.1, 3.1)};
    State const slope = law.slope(x);
    double const falls = x[0] * slope[0] + x[1] * slope[1] + law.h * x[2] * slope[2];
    double const cosine = std::cos(x[1]);
    CHECK(falls == doctest::Approx(-law.gamma * cosine * cosine * x[0] * x[0] - law.k * x[1] * x[1]));
  }
}

TEST_CASE("to_dock: to first order in the angles it is Aicardi's law, with k = K - G and h = bend K / (2 G)") {
  // The gap between the headings falls with the cube of the angles, that between the distances with the square.
  for (float const bend : {2.0F, 3.0F}) {
    std::array<double, 3> heading_gap{};
    std::array<double, 3> distance_gap{};
    double largest_heading = 0.0;
    for (std::size_t size = 0; size < 3; ++size) {
      double const angle = 0.2 / static_cast<double>(1U << size);
      Unicycle unicycle;
      unicycle.field.bend = bend;
      unicycle.field.heading = wend::Bearing{1.0F, 0.0F};
      unicycle.field.slow_within = 4.0F;  // all of the way within it, as in Aicardi's law
      unicycle.allowed = 2.0;
      double const most = 0.5;
      double const gain = 3.0;
      Aicardi const law{most, gain - most, static_cast<double>(bend) * gain / (2.0 * most)};
      double const theta = angle;
      double const alpha = -0.7 * angle;
      State x{-2.0 * std::cos(theta), -2.0 * std::sin(theta), theta - alpha};
      State polar{2.0, alpha, theta};
      for (int i = 0; i < 1500; ++i) {
        x = runge_kutta(x, 0.002, [&unicycle](State const& at) { return unicycle.slope(at); });
        polar = runge_kutta(polar, 0.002, [&law](State const& at) { return law.slope(at); });
        heading_gap[size] = std::max(heading_gap[size], std::abs(x[2] - (polar[2] - polar[1])));
        distance_gap[size] = std::max(distance_gap[size], std::abs(std::hypot(x[0], x[1]) - polar[0]));
        largest_heading = std::max(largest_heading, std::abs(x[2]));
      }
      CHECK(heading_gap[size] < 3.0 * angle * angle * angle);
    }
    CHECK(largest_heading > 0.2);
    CHECK(heading_gap[0] / heading_gap[1] == doctest::Approx(8.0).epsilon(0.2));
    CHECK(heading_gap[1] / heading_gap[2] == doctest::Approx(8.0).epsilon(0.1));
    CHECK(distance_gap[1] / distance_gap[2] == doctest::Approx(4.0).epsilon(0.1));
  }
}
