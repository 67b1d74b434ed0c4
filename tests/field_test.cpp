// What must hold for every heading field, asked of each line of field_list.hpp on each number.
#include <algorithm>
#include <bit>
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <string>
#include <type_traits>
#include <vector>

#include <doctest/doctest.h>

#include "field_list.hpp"
#include "numbers.hpp"
#include "wend/field.hpp"

namespace {

using field_list::for_each;
using scenes::Plain;
using scenes::Scene;
using scenes::Wanderer;

constexpr int ticks = 400;

// Unit direction and confidence in (0, 1], or (0, 0) and 0. To 4 roundings of single precision: a root, a division, a
// product, and the length that is formed here.
template <wend::PlainNumber S>
bool is_sound(wend::Course<S> const& course) {
  double const x = static_cast<double>(course.direction.x());
  double const y = static_cast<double>(course.direction.y());
  double const confidence = static_cast<double>(course.confidence);
  if (confidence == 0.0) {
    return x == 0.0 && y == 0.0;
  }
  return confidence > 0.0 && confidence <= 1.0 && std::abs(std::hypot(x, y) - 1.0) < 2.4e-7;
}

template <wend::Number S>
wend::Course<numbers::plain_t<S>> lane(wend::Course<S> const& course, int k) {
  return {numbers::lane(course.direction, k), numbers::lane(course.confidence, k)};
}

template <wend::Number S>
bool all_sound(wend::Course<S> const& course) {
  for (int k = 0; k < numbers::lanes<S>(); ++k) {
    if (!is_sound(lane(course, k))) {
      return false;
    }
  }
  return true;
}

// What a field answers and remembers over a run, in one lane, as bits.
using Trace = std::vector<std::vector<std::uint64_t>>;

// Runs a field for as many wanderers as S has lanes, the first with the given seed, and returns the trace of each.
template <wend::Number S, typename Field>
std::vector<Trace> traces(Field const& field, std::uint32_t seed) {
  constexpr int width = numbers::lanes<S>();
  std::vector<Wanderer> wanderers;
  for (int k = 0; k < width; ++k) {
    wanderers.emplace_back(seed + static_cast<std::uint32_t>(k), true);
  }
  std::vector<Trace> result(width);
  wend::memory_t<Field, S> memory;
  for (int tick = 0; tick < ticks; ++tick) {
    std::vector<Plain> now;
    for (Wanderer& wanderer : wanderers) {
      now.push_back(wanderer.step());
    }
    Scene<S> const scene = scenes::gather<S>([&now](int k) { return now[static_cast<std::size_t>(k)]; });
    wend::Course<S> const course = scenes::answer(field, scene, memory);
    for (int k = 0; k < width; ++k) {
      std::vector<std::uint64_t> bits = scenes::bits_of<S>(course, k);
      std::vector<std::uint64_t> const remembered = scenes::bits_of<S>(memory, k);
      bits.insert(bits.end(), remembered.begin(), remembered.end());
      result[static_cast<std::size_t>(k)].push_back(bits);
    }
  }
  return result;
}

// The ticks on which the last thing remembered changes: for guarded_field, which of the two is asked.
std::vector<int> switches(Trace const& trace) {
  std::vector<int> at;
  for (std::size_t i = 1; i < trace.size(); ++i) {
    if (trace[i].back() != trace[i - 1].back()) {
      at.push_back(static_cast<int>(i));
    }
  }
  return at;
}

// Scenes in which something is degenerate, or not a number that a sensor should ever give.
std::vector<Plain> odd_scenes() {
  std::vector<Plain> odd;
  Plain plain;
  plain.discs = {{{1.0F, 0.0F, 0.3F}, {0.0F, 1.0F, 0.2F}, {-1.0F, 0.5F, 0.1F}, {0.3F, -1.0F, 0.4F}}};
  auto const also = [&](auto const& change) {
    odd.push_back(plain);
    change(odd.back());
  };
  also([](Plain& p) { p.goal = p.position; });
  also([](Plain& p) { p.position = {1.0F, 0.0F}; });                    // at a disc's centre
  also([](Plain& p) { p.position = p.goal = {0.0F, 1.0F}; });           // and on the goal
  also([](Plain& p) { p.discs.fill({1.0F, 0.0F, 0.3F}); });             // all at one place
  also([](Plain& p) { p.discs.fill({0.0F, 0.0F, 0.0F}); });             // all points, and at the machine's centre
  also([](Plain& p) { p.discs.fill({wend::far_away, 0.0F, 0.0F}); });   // as good as none
  also([](Plain& p) { p.position = {1.3F, 0.0F}; });                    // centre on a disc's edge
  also([](Plain& p) { p.discs.fill({1.0F, 0.0F, 3.0e5F}); });           // inside a huge one
  also([](Plain& p) { p.heading = {0.0F, 0.0F}; });
  also([](Plain& p) { p.dt = 0.0F; });
  also([](Plain& p) { p.dt = -1.0F; });
  also([](Plain& p) { p.robot_radius = 1.0e30F; });
  for (float const x : {scenes::nan, -scenes::nan, scenes::infinity, -scenes::infinity, 3.0e38F, -3.0e38F, 1.0e-44F}) {
    for (std::size_t i = 0; i < 2; ++i) {
      also([x, i](Plain& p) { p.position[i] = x; });
      if (!(std::abs(x) > 1.0e18F)) {  // the own fields use course_along, which is not for vectors that overflow
        also([x, i](Plain& p) { p.heading[i] = x; });
      }
      also([x, i](Plain& p) { p.goal[i] = x; });
    }
    for (std::size_t i = 0; i < 3; ++i) {
      also([x, i](Plain& p) { p.discs[0][i] = x; });
    }
    also([x](Plain& p) { p.robot_radius = x; });
    also([x](Plain& p) { p.dt = x; });
    also([x](Plain& p) { p.position = {x, x}, p.goal = {x, x}, p.dt = x; });
  }
  return odd;
}

// The first of these scenes in which a field breaks its promise, with a fresh memory or with one carried along; -1 if
// none does. Lanes are in different scenes.
template <wend::Number S, typename Field>
int first_unsound(Field const& field, std::vector<Plain> const& odd) {
  wend::memory_t<Field, S> carried;
  for (std::size_t i = 0; i < odd.size(); ++i) {
    Scene<S> const scene =
        scenes::gather<S>([&](int k) { return odd[(i + static_cast<std::size_t>(k)) % odd.size()]; });
    wend::memory_t<Field, S> fresh;
    if (!all_sound(scenes::answer(field, scene, fresh)) || !all_sound(scenes::answer(field, scene, carried))) {
      return static_cast<int>(i);
    }
  }
  return -1;
}

// With an empty set of discs, of another capacity than elsewhere: on the goal and off it.
template <wend::Number S, typename Field>
bool sound_without_discs(Field const& field) {
  Scene<S, 1> scene;
  wend::memory_t<Field, S> memory;
  bool const on_goal = all_sound(scenes::answer(field, scene, memory));
  scene.goal = {S(1.0F), S(-2.0F)};
  return on_goal && all_sound(scenes::answer(field, scene, memory));
}

// Would-be fields, each with one thing wrong, and one without.
struct gives_an_angle {
  template <wend::Number S, int N>
  S operator()(wend::Percept<S, N> const&) const;
};
struct forgets_const {
  template <wend::Number S, int N>
  wend::Course<S> operator()(wend::Percept<S, N> const&);
};
struct hides_its_memory {
  template <wend::Number S>
  struct Remembered {};
  template <wend::Number S, int N>
  wend::Course<S> operator()(wend::Percept<S, N> const&, Remembered<S>&) const;
};
struct remembers_an_angle {
  template <wend::Number S>
  struct Memory {};
  template <wend::Number S, int N>
  S operator()(wend::Percept<S, N> const&, Memory<S>&) const;
};
struct only_single {
  template <int N>
  wend::Course<float> operator()(wend::Percept<float, N> const&) const;
};
struct not_to_be_copied {
  not_to_be_copied(not_to_be_copied const&) = delete;
  template <wend::Number S, int N>
  wend::Course<S> operator()(wend::Percept<S, N> const&) const;
};

static_assert(wend::HeadingField<field_list::ahead> && wend::HeadingField<field_list::shy>);
static_assert(!wend::HeadingField<gives_an_angle>);
static_assert(!wend::HeadingField<forgets_const>);
static_assert(!wend::HeadingField<hides_its_memory>);
static_assert(!wend::HeadingField<remembers_an_angle>);
static_assert(!wend::HeadingField<not_to_be_copied>);
static_assert(!wend::HeadingField<int>);
static_assert(wend::HeadingField<only_single, float> && !wend::HeadingField<only_single, double>);
static_assert(!wend::HeadingField<wend::signals::clearance>);
static_assert(!wend::HeadingField<std::remove_const_t<decltype(field_list::near_a_disc)>>);

// The concept on every line of the list and every number.
template <typename... S>
consteval bool all_are_fields_on() {
  return std::apply(
      [](auto const&... entries) {
        auto const on_all = []<typename Field>(Field const&) { return (wend::HeadingField<Field, S> && ...); };
        return (on_all(entries.field) && ...);
      },
      field_list::all);
}
static_assert(all_are_fields_on<WEND_TEST_NUMBERS>());

// Sizes: what a machine has to keep in RAM.
template <typename Field>
constexpr bool takes_no_byte = std::is_empty_v<wend::memory_t<Field, float>>;
template <typename Field>
constexpr std::size_t bytes = sizeof(wend::memory_t<Field, float>);

constexpr auto two_shares = wend::blend(wend::share(1.0F, wend::toward_goal{}), wend::share(1.0F, wend::toward_goal{}));
constexpr auto nested_shares =
    wend::blend(wend::share(1.0F, two_shares), wend::share(1.0F, two_shares), wend::share(1.0F, wend::toward_goal{}));
constexpr auto of_no_memory = wend::priority(nested_shares, two_shares, nested_shares, wend::toward_goal{});

static_assert(bytes<wend::past_disc> == 12, "a direction of two floats, and the side");
static_assert(bytes<decltype(field_list::composed)> == 16, "the guard before it and the field taken after it");
static_assert(takes_no_byte<wend::toward_goal> && takes_no_byte<wend::away_from_discs>);
static_assert(takes_no_byte<wend::potential_field> && takes_no_byte<field_list::ahead>);
static_assert(takes_no_byte<decltype(wend::blend(wend::ramp(wend::clearance, 0.5F, 1.2F), wend::away_from_discs{},
                                                 wend::toward_goal{}))>);
static_assert(takes_no_byte<decltype(two_shares)> && takes_no_byte<decltype(nested_shares)>);
static_assert(takes_no_byte<decltype(of_no_memory)>);
static_assert(bytes<decltype(wend::only_when(field_list::near_a_disc, wend::toward_goal{}))> == 2);
static_assert(bytes<decltype(wend::guarded(field_list::near_a_disc, of_no_memory, of_no_memory))> == 2);
static_assert(bytes<decltype(wend::priority(wend::toward_goal{}, wend::past_disc{}, wend::toward_goal{}))> == 12);
static_assert(bytes<decltype(wend::guarded(wend::negated(wend::both(field_list::near_a_disc, field_list::near_a_disc)),
                                           wend::toward_goal{}, wend::toward_goal{}))> == 3);

// evaluate without a memory is for those who need none.
template <typename Field>
concept NeedsNoMemory = requires(Field const& f, wend::Percept<float, 1> const& p) { wend::evaluate(f, p); };
static_assert(NeedsNoMemory<wend::toward_goal> && NeedsNoMemory<decltype(of_no_memory)>);
static_assert(!NeedsNoMemory<wend::past_disc> && !NeedsNoMemory<decltype(field_list::composed)>);

}  // namespace

TEST_CASE_TEMPLATE("every field gives a unit direction with a confidence in (0, 1], or no opinion", S,
                   WEND_TEST_NUMBERS) {
  for_each([]<typename Field>(field_list::Entry<Field> const& entry) {
    std::vector<Wanderer> wanderers;
    for (int k = 0; k < numbers::lanes<S>(); ++k) {
      wanderers.emplace_back(static_cast<std::uint32_t>(100 + k), true);
    }
    wend::memory_t<Field, S> memory;
    int unsound = 0;
    int opinions = 0;
    for (int tick = 0; tick < ticks; ++tick) {
      std::vector<Plain> now;
      for (Wanderer& wanderer : wanderers) {
        now.push_back(wanderer.step());
      }
      Scene<S> const scene = scenes::gather<S>([&now](int k) { return now[static_cast<std::size_t>(k)]; });
      wend::Course<S> const course = scenes::answer(entry.field, scene, memory);
      unsound += all_sound(course) ? 0 : 1;
      opinions += numbers::first(course.confidence) > 0 ? 1 : 0;
    }
    INFO(doctest::String(entry.name));
    CHECK(unsound == 0);
    CHECK((opinions > ticks / 20) == (std::string(entry.name) != "no_opinion"));
  });
}

TEST_CASE_TEMPLATE("each lane of a pack does and remembers what a float alone would", S, wend::lab::Pack<4>,
                   wend::lab::Pack<8>) {
  for_each([]<typename Field>(field_list::Entry<Field> const& entry) {
    std::vector<Trace> const together = traces<S>(entry.field, 7);
    INFO(doctest::String(entry.name));
    for (std::size_t k = 0; k < together.size(); ++k) {
      CAPTURE(k);
      CHECK(together[k] == traces<float>(entry.field, static_cast<std::uint32_t>(7 + k)).front());
    }
  });
}

TEST_CASE("the lanes compared above switch often, and at ticks of their own") {
  std::vector<Trace> const together = traces<wend::lab::Pack<8>>(field_list::composed, 7);
  for (std::size_t k = 0; k < together.size(); ++k) {
    CHECK(switches(together[k]).size() >= 10);
    for (std::size_t other = 0; other < k; ++other) {
      CHECK(switches(together[k]) != switches(together[other]));
    }
  }
}

TEST_CASE("the course turns and shifts with the scene") {
  for_each([]<typename Field>(field_list::Entry<Field> const& entry) {
    double const angle = 2.4;
    wend::Vec2<double> const by{std::cos(angle), std::sin(angle)};
    wend::Vec2<double> const shift{3.7, -11.2};
    auto const moved = [&](wend::Vec2<double> const& p) -> wend::Vec2<double> {
      return wend::turned_out_of(by, p) + shift;
    };
    Wanderer wanderer(31, false);
    wend::memory_t<Field, double> memory;
    wend::memory_t<Field, double> memory_there;
    double worst = 0.0;
    for (int tick = 0; tick < ticks; ++tick) {
      Plain const now = wanderer.step();
      Scene<double> const here = scenes::gather<double>([&now](int) { return now; });
      Scene<double> there = here;
      there.pose = {moved(here.pose.position), wend::turned_out_of(by, here.pose.heading)};
      there.goal = moved(here.goal);
      there.discs = {};
      for (auto const& disc : here.discs) {
        there.discs.add({moved(disc.centre), disc.radius}, there.pose.position);
      }
      auto const course = scenes::answer(entry.field, here, memory);
      auto const course_there = scenes::answer(entry.field, there, memory_there);
      // Weighed with the confidence: where fields nearly cancel, the direction hangs on the last bits.
      wend::Vec2<double> const expected = wend::turned_out_of(by, course.direction) * course.confidence;
      wend::Vec2<double> const off = course_there.direction * course_there.confidence - expected;
      worst = std::max(worst, wend::length(off));
      worst = std::max(worst, std::abs(course.confidence - course_there.confidence));
    }
    INFO(doctest::String(entry.name));
    CHECK(worst < 1.0e-12);
  });
}

TEST_CASE_TEMPLATE("no scene and no number, however odd, brings a field off its promise", S, WEND_TEST_NUMBERS) {
  std::vector<Plain> const odd = odd_scenes();
  for_each([&odd]<typename Field>(field_list::Entry<Field> const& entry) {
    INFO(doctest::String(entry.name));
    CHECK(first_unsound<S>(entry.field, odd) == -1);
  });
}

TEST_CASE_TEMPLATE("every field runs without any disc, and on the goal", S, WEND_TEST_NUMBERS) {
  for_each([]<typename Field>(field_list::Entry<Field> const& entry) {
    INFO(doctest::String(entry.name));
    CHECK(sound_without_discs<S>(entry.field));
  });
}

TEST_CASE("a copied memory goes on as the original does") {
  for_each([]<typename Field>(field_list::Entry<Field> const& entry) {
    Wanderer wanderer(53, true);
    wend::memory_t<Field, float> memory;
    auto const tick = [&entry](Plain const& now, auto& of) {
      Scene<float> const scene = scenes::gather<float>([&now](int) { return now; });
      return scenes::bits_of<float>(scenes::answer(entry.field, scene, of), 0);
    };
    for (int i = 0; i < ticks / 2; ++i) {
      tick(wanderer.step(), memory);
    }
    wend::memory_t<Field, float> copy = memory;
    INFO(doctest::String(entry.name));
    int differences = 0;
    for (int i = 0; i < ticks / 2; ++i) {
      Plain const now = wanderer.step();
      differences += tick(now, memory) == tick(now, copy) ? 0 : 1;
    }
    CHECK(differences == 0);
  });
}

TEST_CASE_TEMPLATE("a memory starts out all zero and no, but for the distances", S, WEND_TEST_NUMBERS) {
  for_each([]<typename Field>(field_list::Entry<Field> const& entry) {
    INFO(doctest::String(entry.name));
    for (std::uint64_t const bits : scenes::bits_of<S>(wend::memory_t<Field, S>{}, 0)) {
      bool const zero = bits == 0;
      bool const far = bits == std::bit_cast<std::uint64_t>(static_cast<double>(wend::far_away));
      CHECK((zero || far));
    }
  });
}

TEST_CASE_TEMPLATE("evaluate needs no memory where nothing is remembered", S, WEND_TEST_NUMBERS) {
  Scene<S> const scene = scenes::gather<S>([](int k) {
    Plain plain;
    plain.goal = {1.0F + static_cast<float>(k), 2.0F};
    return plain;
  });
  wend::memory_t<wend::toward_goal, S> memory;
  wend::Course<S> const with = scenes::answer(wend::toward_goal{}, scene, memory);
  wend::Course<S> const without = scenes::answer(wend::toward_goal{}, scene);
  for (int k = 0; k < numbers::lanes<S>(); ++k) {
    CHECK(numbers::same(numbers::lane(with.direction, k), numbers::lane(without.direction, k)));
    CHECK(numbers::lane(without.confidence, k) == 1);
  }
}

TEST_CASE_TEMPLATE("course_along makes a unit direction of any vector that has one", S, WEND_TEST_NUMBERS) {
  auto const course = [](float x, float y, float confidence) {
    return wend::course_along(wend::Vec2<S>{S(x), S(y)}, S(confidence));
  };
  // 3-4-5, and the same far from 1.
  for (float const scale : {1.0F, 1.0e-15F, 1.0e15F}) {
    auto const c = course(3.0F * scale, -4.0F * scale, 0.5F);
    CHECK(std::abs(static_cast<double>(numbers::first(c.direction.x())) - 0.6) < 1.2e-7);
    CHECK(std::abs(static_cast<double>(numbers::first(c.direction.y())) + 0.8) < 1.2e-7);
    CHECK(numbers::all<S>(c.confidence <= S(0.5F)));
    CHECK(numbers::all<S>(c.confidence >= S(0.5F)));
  }
  for (float const nothing : {0.0F, scenes::nan, 1.0e-20F}) {
    CHECK(all_sound(course(nothing, 1.0F, 0.5F)));
    CHECK(all_sound(course(nothing, nothing, 1.0F)));
    CHECK_FALSE(numbers::first(course(nothing, nothing, 1.0F).confidence) > 0);
  }
}
