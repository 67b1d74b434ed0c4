// What a heading field is, and what must hold for each line of field_list.hpp on each number.
#include <cmath>
#include <cstddef>
#include <tuple>
#include <type_traits>
#include <vector>

#include <doctest/doctest.h>

#include "field_checks.hpp"
#include "field_list.hpp"
#include "numbers.hpp"
#include "scenes.hpp"
#include "subjects.hpp"
#include "wend/field.hpp"

namespace {

using scenes::Plain;
using scenes::Scene;

// The ticks on which the last thing remembered changes: for guarded_field, which of the two is asked.
std::vector<int> switches(field_checks::Trace const& trace) {
  std::vector<int> at;
  for (std::size_t i = 1; i < trace.size(); ++i) {
    if (trace[i].back() != trace[i - 1].back()) {
      at.push_back(static_cast<int>(i));
    }
  }
  return at;
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

WEND_CHECK_FIELDS(field_list::all)

TEST_CASE("the lanes compared above switch often, and at ticks of their own") {
  constexpr std::tuple one{subjects::entry("composed", field_list::composed)};
  auto const together = field_checks::traces(*subjects::on<wend::lab::Pack<8>>(one).front(), 7);
  for (std::size_t k = 0; k < together.size(); ++k) {
    CHECK(switches(together[k]).size() >= 10);
    for (std::size_t other = 0; other < k; ++other) {
      CHECK(switches(together[k]) != switches(together[other]));
    }
  }
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
    CHECK(field_checks::all_sound<S>(course(nothing, 1.0F, 0.5F)));
    CHECK(field_checks::all_sound<S>(course(nothing, nothing, 1.0F)));
    CHECK_FALSE(numbers::first(course(nothing, nothing, 1.0F).confidence) > 0);
  }
}
