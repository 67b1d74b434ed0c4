// The guests: every field and composition of field_list.hpp, the motion laws, the watch and the whole loop on intervals
// and on derivatives. A new line in that list is all it takes to have a field tested here.
//
// Intervals are held against the plain numbers inside them, over runs in which memories evolve; derivatives against
// those of Eigen's AutoDiffScalar, and against central differences.
#include <algorithm>
#include <array>
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <random>
#include <string>
#include <tuple>
#include <type_traits>
#include <utility>
#include <vector>

#include <doctest/doctest.h>
#include <Eigen/Core>
#include <unsupported/Eigen/AutoDiff>

#include "field_list.hpp"
#include "wend/lab/any_memory.hpp"
#include "wend/lab/dual.hpp"
#include "wend/lab/interval.hpp"
#include "wend/loop.hpp"

namespace {

using wend::lab::Dual;
using wend::lab::FloatInterval;
using wend::lab::Interval;
using wend::lab::Trilean;

// --- Scenes as rows of numbers ---------------------------------------------------------------------------------------

// All that goes into a percept: position, heading, goal, four discs, the machine's radius, the time step.
constexpr std::size_t inputs = 20;
template <typename S>
using Row = std::array<S, inputs>;

template <typename S>
[[gnu::noinline]] scenes::Scene<S> scene_of(Row<S> const& row) noexcept {
  scenes::Scene<S> scene;
  scene.pose = {{row[0], row[1]}, {row[2], row[3]}};
  scene.goal = {row[4], row[5]};
  for (std::size_t i = 6; i < 18; i += 3) {
    scene.put(row[i], row[i + 1], row[i + 2]);
  }
  scene.robot_radius = row[18];
  scene.dt = row[19];
  return scene;
}

template <typename To, typename From>
Row<To> converted(Row<From> const& row) {
  Row<To> other;
  std::transform(row.begin(), row.end(), other.begin(), [](From const& x) { return To(x); });
  return other;
}

class Random {
 public:
  explicit Random(std::uint64_t seed) : random_(seed) {}
  double between(double low, double high) { return std::uniform_real_distribution<double>(low, high)(random_); }
  bool one_in(std::uint64_t n) { return random_() % n == 0; }

  // A scene in a room of 4 m x 4 m; an odd one may be just where fields switch.
  Row<double> row(bool odd = true) {
    double const angle = between(-3.2, 3.2);
    Row<double> row{between(-2, 2), between(-2, 2), std::cos(angle), std::sin(angle), between(-2, 2), between(-2, 2)};
    for (std::size_t i = 6; i < 18; i += 3) {
      row[i] = between(-2, 2), row[i + 1] = between(-2, 2), row[i + 2] = between(0.1, 0.5);
    }
    row[18] = between(0.1, 0.3);
    row[19] = between(0.03, 0.07);
    if (!odd) {
      return row;
    }
    if (one_in(20)) {
      row[0] = row[4], row[1] = row[5];  // on the goal
    } else if (one_in(20)) {
      row[0] = row[6], row[1] = row[7];  // at a disc's centre
    } else if (one_in(20)) {
      row[9] = row[6], row[10] = row[7], row[11] = row[8];  // two discs that are one
    }
    return row;
  }

 private:
  std::mt19937_64 random_;
};

// --- Members of sets
// ---------------------------------------------------------------------------------------------------

// Whether a memory, course or command on plain numbers is a member of one on intervals.
template <typename Set, typename One>
bool holds(Set const& set, One const& one) {
  if constexpr (std::is_same_v<Set, Trilean>) {
    return one ? set.can_be : set.can_be_not;
  } else if constexpr (requires { set.contains(0.0); }) {
    return set.contains(static_cast<double>(one));
  } else if constexpr (requires { set.x(); }) {
    return holds(set.x(), one.x()) && holds(set.y(), one.y());
  } else {
    bool all = true;
    wend::for_each_member(set, one, [&all](auto const& s, auto const& o) noexcept { all = all && holds(s, o); });
    return all;
  }
}

// A memory of anything, as plain numbers.
template <typename One>
void scramble(One& one, Random& random) {
  if constexpr (std::is_same_v<One, bool>) {
    one = random.one_in(2);
  } else if constexpr (std::is_floating_point_v<One>) {
    one = static_cast<One>(random.one_in(8) ? random.between(-1e6, 1e6) : random.between(-2, 2));
  } else if constexpr (requires { one.x(); }) {
    scramble(one.x(), random), scramble(one.y(), random);
  } else {
    wend::for_each_member(one, one, [&random](auto& o, auto&) { scramble(o, random); });
  }
}

constexpr int points_a_box = 20;
constexpr int ticks_a_run = 8;

// A box of scenes and scenes in it: drawn around one scene and rounded to P, the box being the smallest around them.
template <typename I>
struct Cloud {
  using P = typename I::RoundedAs;
  Row<I> box;
  std::vector<Row<P>> points;

  explicit Cloud(Random& random) {
    Row<double> const middle = random.row();
    Row<double> width;
    double const size = std::exp(random.between(-9.0, -0.7));
    for (double& w : width) {
      w = random.one_in(4) ? 0.0 : size * random.between(0.0, 1.0);
    }
    double const angle = std::atan2(middle[3], middle[2]);
    for (int k = 0; k < points_a_box; ++k) {
      Row<double> point;
      for (std::size_t i = 0; i < inputs; ++i) {
        point[i] = middle[i] + width[i] * random.between(-0.5, 0.5);
      }
      double const turned = angle + size * random.between(-0.5, 0.5);
      point[2] = std::cos(turned), point[3] = std::sin(turned);
      for (std::size_t i = 8; i < 18; i += 3) {
        point[i] = std::max(point[i], 0.0);
      }
      point[19] = std::clamp(point[19], 1e-3, 0.4);
      points.push_back(converted<P>(point));
    }
    for (std::size_t i = 0; i < inputs; ++i) {
      auto const [low, high] = std::minmax_element(points.begin(), points.end(),
                                                   [i](Row<P> const& a, Row<P> const& b) { return a[i] < b[i]; });
      box[i] = I(static_cast<double>((*low)[i]), static_cast<double>((*high)[i]));
    }
  }
};

struct Tally {
  int boxes = 0;
  int courses_out = 0;
  int memories_out = 0;
  int commands_out = 0;
};

// Runs with a set memory on boxes beside plain ones on their points. Half of the runs start fresh, the others with
// every memory there is and, on the points, with any.
template <typename I, typename F, typename OnTick>
void run_beside(int runs, std::uint64_t seed, Tally& tally, OnTick const& on_tick) {
  using P = typename I::RoundedAs;
  Random random(seed);
  for (int run = 0; run < runs; ++run) {
    wend::memory_t<F, I> set{};
    std::vector<wend::memory_t<F, P>> ones(points_a_box);
    if (run % 2 == 0) {
      set = wend::lab::any_memory<F, I>();
      for (auto& one : ones) {
        scramble(one, random);
      }
    }
    for (int tick = 0; tick < ticks_a_run; ++tick) {
      Cloud<I> const cloud(random);
      auto const box = scene_of(cloud.box);
      auto const found = on_tick(box, set);
      ++tally.boxes;
      for (std::size_t k = 0; k < ones.size(); ++k) {
        auto const one = on_tick(scene_of(cloud.points[k]), ones[k]);
        tally.courses_out += holds(found, one) ? 0 : 1;
        tally.memories_out += holds(set, ones[k]) ? 0 : 1;
      }
    }
  }
}

// A loop with nothing but a policy of its own.
template <typename Policy>
constexpr wend::Loop<Policy> loop_of(Policy const& policy) {
  return {policy};
}

}  // namespace

TEST_CASE_TEMPLATE("a field's course and memory on a box enclose those of every point in it", I, Interval,
                   FloatInterval) {
  constexpr int entries = static_cast<int>(std::tuple_size_v<std::remove_cvref_t<decltype(field_list::all)>>);
  constexpr int boxes_wanted = 50'000;  // on each of the two
  constexpr int runs = boxes_wanted / (entries * ticks_a_run) + 1;
  std::uint64_t seed = 1;
  int boxes = 0;
  field_list::for_each([&](auto const& entry) {
    using Field = std::remove_cvref_t<decltype(entry.field)>;
    Tally tally;
    run_beside<I, Field>(runs, seed++, tally, [&entry](auto const& scene, auto& memory) {
      return scenes::answer(entry.field, scene, memory);
    });
    CAPTURE(std::string(entry.name));
    CHECK(tally.courses_out == 0);
    CHECK(tally.memories_out == 0);
    boxes += tally.boxes;
  });
  CHECK(boxes >= boxes_wanted);
}

TEST_CASE_TEMPLATE("a loop's command and memory on a box enclose those of every point in it", I, Interval,
                   FloatInterval) {
  auto const check = [](auto const& loop, std::uint64_t seed) {
    using Loop = std::remove_cvref_t<decltype(loop)>;
    Tally tally;
    run_beside<I, Loop>(250, seed, tally, [&loop](auto const& scene, auto& memory) {
      using S = std::remove_cvref_t<decltype(scene.dt)>;
      return loop.tick(wend::Situation<S>{scene.pose, scene.goal, scene.dt, S(0.1F)}, scene.discs, memory);
    });
    CHECK(tally.courses_out == 0);  // course, body, wheels and every finding
    CHECK(tally.memories_out == 0);
  };
  check(loop_of(field_list::composed), 101);
  check(loop_of(wend::potential_field{}), 102);
  check(loop_of(wend::priority(field_list::shy{}, wend::past_disc{}, wend::toward_goal{})), 103);
}

TEST_CASE_TEMPLATE("each motion law and watch on a box encloses what it gives for every point in it", I, Interval,
                   FloatInterval) {
  using P = typename I::RoundedAs;
  Random random(7);
  Tally tally;
  auto const count = [&tally](auto const& set, auto const& one) { tally.commands_out += holds(set, one) ? 0 : 1; };
  for (int run = 0; run < 3'000; ++run) {
    Cloud<I> const cloud(random);
    wend::DifferentialDrive const drive;
    wend::Steering const steering;
    wend::Freshness const freshness;
    wend::Pace const pace;
    // Numbers of a scene stand in for velocities, rates and times: any will do.
    auto const laws = [&]<typename S>(Row<S> const& row) {
      auto const scene = scene_of(row);
      wend::Course<S> const course{{row[2], row[3]}, S(1.0F)};
      wend::BodyVelocity<S> const body{row[0], row[1]};
      wend::WheelRates<S> const rates{row[4], row[6]};
      struct Results {
        wend::BodyVelocity<S> steered, limited, moved;
        wend::WheelRates<S> wheels;
        S pace, stoppable, room;
        wend::mask_t<S> stale;
      };
      return Results{steering(course, wend::Vec2<S>(row[4], row[7]), row[0]),
                     drive.within_limits(body),
                     drive.body(rates),
                     drive.wheels(body),
                     pace(scene.percept()),
                     pace.stoppable(row[0]),
                     pace.room(scene.percept()),
                     freshness.stale(row[19], row[1])};
    };
    auto const set = laws(cloud.box);
    for (Row<P> const& point : cloud.points) {
      count(set, laws(point));
    }
  }
  CHECK(tally.commands_out == 0);
}

// --- Derivatives
// -------------------------------------------------------------------------------------------------------

namespace {

/// Eigen's AutoDiffScalar as a number a policy can run on: each result is evaluated at once.
class Auto {
  using Scalar = Eigen::AutoDiffScalar<Eigen::Vector2d>;

 public:
  Auto() : x_(0.0) {}
  explicit Auto(float x) : x_(static_cast<double>(x)) {}
  explicit Auto(double x) : x_(x) {}
  static Auto variable(double x, int k) { return Auto(Scalar(x, 2, k)); }

  [[nodiscard]] double value() const { return x_.value(); }
  [[nodiscard]] double slope(int k) const { return x_.derivatives()[k]; }

  friend Auto operator+(Auto const& a, Auto const& b) { return Auto(Scalar(a.x_ + b.x_)); }
  friend Auto operator-(Auto const& a, Auto const& b) { return Auto(Scalar(a.x_ - b.x_)); }
  friend Auto operator*(Auto const& a, Auto const& b) { return Auto(Scalar(a.x_ * b.x_)); }
  friend Auto operator/(Auto const& a, Auto const& b) { return Auto(Scalar(a.x_ / b.x_)); }
  friend Auto operator-(Auto const& a) { return Auto(Scalar(-a.x_)); }
  friend Auto sqrt(Auto const& a) { return Auto(Scalar(Eigen::sqrt(a.x_))); }
  friend bool operator<(Auto const& a, Auto const& b) { return a.value() < b.value(); }
  friend bool operator>(Auto const& a, Auto const& b) { return a.value() > b.value(); }
  friend bool operator<=(Auto const& a, Auto const& b) { return a.value() <= b.value(); }
  friend bool operator>=(Auto const& a, Auto const& b) { return a.value() >= b.value(); }
  friend Auto select(bool mask, Auto const& a, Auto const& b) { return mask ? a : b; }
  friend bool finite(Auto const& a) { return std::isfinite(a.value()); }

 private:
  explicit Auto(Scalar const& x) : x_(x) {}
  Scalar x_;
};

}  // namespace

namespace Eigen {
template <>
struct NumTraits<Auto> : GenericNumTraits<Auto> {
  enum {
    IsInteger = 0,
    IsSigned = 1,
    IsComplex = 0,
    RequireInitialization = 1,
    ReadCost = 3,
    AddCost = 3,
    MulCost = 5
  };
};
}  // namespace Eigen

namespace {

// A memory of doubles as one on another number, without derivatives.
template <typename From, typename To>
void hand_over(From const& from, To& to) {
  if constexpr (std::is_same_v<From, bool>) {
    to = from;
  } else if constexpr (std::is_same_v<From, double>) {
    to = To(from);
  } else if constexpr (requires { from.x(); }) {
    hand_over(from.x(), to.x()), hand_over(from.y(), to.y());
  } else {
    wend::for_each_member(from, to, [](auto const& f, auto& t) { hand_over(f, t); });
  }
}

template <typename S>
std::array<S, 3> numbers_of(wend::Course<S> const& course) {
  return {course.direction.x(), course.direction.y(), course.confidence};
}

// A field at a scene, with two of the scene's numbers variable, from a given memory.
template <typename Field>
class Point {
 public:
  Point(Field const& field, wend::memory_t<Field, double> const& memory, Row<double> const& row, int first, int second)
      : field_(field),
        memory_(memory),
        row_(row),
        places_{static_cast<std::size_t>(first), static_cast<std::size_t>(second)} {}

  template <typename S>
  [[nodiscard]] std::array<S, 3> slopes() const {
    Row<S> row = converted<S>(row_);
    for (int k = 0; k < 2; ++k) {
      std::size_t const i = places_[static_cast<std::size_t>(k)];
      row[i] = S::variable(row_[i], k);
    }
    wend::memory_t<Field, S> memory;
    hand_over(memory_, memory);
    return numbers_of(scenes::answer(field_, scene_of(row), memory));
  }

  // By the five-point formula (Abramowitz and Stegun 1964, 25.3.6): its error is step^4 / 30 times the fifth
  // derivative.
  [[nodiscard]] std::array<double, 3> difference(int k, double step) const {
    auto const at = [&](double by) {
      Row<double> row = row_;
      row[places_[static_cast<std::size_t>(k)]] += by;
      wend::memory_t<Field, double> memory = memory_;
      return numbers_of(scenes::answer(field_, scene_of(row), memory));
    };
    auto const a = at(-2.0 * step);
    auto const b = at(-step);
    auto const c = at(step);
    auto const d = at(2.0 * step);
    std::array<double, 3> slope;
    for (std::size_t i = 0; i < 3; ++i) {
      slope[i] = (a[i] - 8.0 * b[i] + 8.0 * c[i] - d[i]) / (12.0 * step);
    }
    return slope;
  }

 private:
  Field const& field_;
  wend::memory_t<Field, double> const& memory_;
  Row<double> const& row_;
  std::array<std::size_t, 2> places_;
};

bool near(double a, double b, double tolerance) { return std::abs(a - b) <= tolerance * std::max(1.0, std::abs(b)); }

}  // namespace

// Where AutoDiffScalar has no derivative (the root of exactly 0) it gives not-a-number; there is nothing to compare
// then.
TEST_CASE("a field's derivatives are those of Eigen's AutoDiffScalar and of central differences") {
  std::uint64_t seed = 1001;
  field_list::for_each([&seed](auto const& entry) {
    using Field = std::remove_cvref_t<decltype(entry.field)>;
    Random random(seed++);
    int compared = 0, values_off = 0, auto_off = 0, no_auto = 0, smooth = 0, differences_off = 0;
    double worst = 0.0;
    for (int k = 0; k < 60; ++k) {
      wend::memory_t<Field, double> memory;
      for (int tick = 0; tick < 5; ++tick) {  // so that there is something to remember
        static_cast<void>(scenes::answer(entry.field, scene_of(random.row()), memory));
      }
      bool const odd = k % 4 == 0;
      Row<double> const row = random.row(odd);
      for (int first = 0; first < static_cast<int>(inputs); first += 2) {
        Point const point(entry.field, memory, row, first, first + 1);
        auto const dual = point.template slopes<Dual<2>>();
        auto const other = point.template slopes<Auto>();
        for (int place = 0; place < 2; ++place) {
          auto const coarse = point.difference(place, 4e-4);
          auto const fine = point.difference(place, 2e-4);
          for (std::size_t i = 0; i < 3; ++i) {
            ++compared;
            values_off += dual[i].value() == other[i].value() ? 0 : 1;
            if (std::isfinite(other[i].slope(place))) {
              auto_off += near(dual[i].slope(place), other[i].slope(place), 1e-12) ? 0 : 1;
            } else {
              ++no_auto;
            }
            // Two steps that agree tell that nothing switches between here and there, unless it is right here.
            if (!odd && near(coarse[i], fine[i], 1e-9)) {
              ++smooth;
              double const off = std::abs(dual[i].slope(place) - fine[i]) / std::max(1.0, std::abs(fine[i]));
              worst = std::max(worst, off);
              differences_off += off <= 1e-9 ? 0 : 1;
            }
          }
        }
      }
    }
    CAPTURE(std::string(entry.name));
    CAPTURE(worst);
    CHECK(values_off == 0);
    CHECK(auto_off == 0);
    CHECK(no_auto < compared / 10);
    CHECK(differences_off == 0);
    CHECK(smooth > compared * 6 / 10);  // of the three quarters that are not odd
  });
}

TEST_CASE("a loop's command has the derivatives of its central differences") {
  constexpr auto loop = loop_of(field_list::composed);
  Random random(77);
  int smooth = 0, off = 0, compared = 0;
  for (int k = 0; k < 400; ++k) {
    Row<double> const row = random.row(false);
    auto const wheels = [&]<typename S>(Row<S> const& at) {
      auto const scene = scene_of(at);
      wend::memory_t<decltype(loop), S> memory;
      auto const command = loop.tick(wend::Situation<S>{scene.pose, scene.goal, scene.dt}, scene.discs, memory);
      return std::array<S, 2>{command.wheels.left, command.wheels.right};
    };
    for (std::size_t i : {0U, 1U, 4U, 5U, 6U, 8U, 18U}) {
      Row<Dual<1>> seeded = converted<Dual<1>>(row);
      seeded[i] = Dual<1>::variable(row[i], 0);
      auto const dual = wheels(seeded);
      auto const difference = [&](double step) {
        Row<double> up = row, down = row;
        up[i] += step, down[i] -= step;
        auto const a = wheels(up);
        auto const b = wheels(down);
        return std::array<double, 2>{(a[0] - b[0]) / (2.0 * step), (a[1] - b[1]) / (2.0 * step)};
      };
      auto const coarse = difference(2e-5);
      auto const fine = difference(1e-5);
      for (std::size_t side = 0; side < 2; ++side) {
        ++compared;
        if (near(coarse[side], fine[side], 1e-6)) {
          ++smooth;
          off += near(dual[side].slope(0), fine[side], 2e-6) ? 0 : 1;
        }
      }
    }
  }
  CHECK(off == 0);
  CHECK(smooth > compared * 8 / 10);
}
