// Walking the members of plain structs, and the one branch that numbers have.
#include <array>
#include <cstddef>
#include <tuple>
#include <utility>

#include <doctest/doctest.h>

#include "numbers.hpp"
#include "wend/disc.hpp"
#include "wend/members.hpp"
#include "wend/number.hpp"
#include "wend/plane.hpp"

namespace {

struct Nothing {};
struct OtherNothing {};

template <typename S>
struct Timer {
  S seconds{S(0.0F)};
  wend::mask_t<S> running{};
};

// What a composed policy remembers: masks, numbers, vectors, structs in structs, and members that take no byte.
template <typename S>
struct Memory {
  [[no_unique_address]] Nothing nothing;
  Timer<S> timer;
  wend::Vec2<S> anchor{S(0.0F), S(0.0F)};
  wend::mask_t<S> committed{};
  [[no_unique_address]] OtherNothing also_nothing;
  wend::Disc<S> disc;
};

template <int Count>
struct Row;
template <>
struct Row<1> {
  int a;
};
template <>
struct Row<2> {
  int a, b;
};
template <>
struct Row<3> {
  int a, b, c;
};
template <>
struct Row<4> {
  int a, b, c, d;
};
template <>
struct Row<5> {
  int a, b, c, d, e;
};
template <>
struct Row<6> {
  int a, b, c, d, e, f;
};
template <>
struct Row<7> {
  int a, b, c, d, e, f, g;
};
template <>
struct Row<8> {
  int a, b, c, d, e, f, g, h;
};
struct NineOfThem {
  int a, b, c, d, e, f, g, h, i;
};

template <typename T>
constexpr int count_of = wend::detail::member_count<T>();
static_assert(count_of<Row<1>> == 1 && count_of<Row<4>> == 4 && count_of<Row<8>> == 8);
static_assert(count_of<NineOfThem> == 9, "told apart from eight, so that for_each_member refuses it");
static_assert(count_of<Memory<float>> == 6 && count_of<Memory<wend::lab::Pack<4>>> == 6);
static_assert(count_of<Timer<double>> == 2 && count_of<wend::Disc<wend::lab::Pack<8>>> == 2);

// Of any length, beside other members, and of structs.
template <typename S>
struct Tracks {
  std::array<Timer<S>, 20> timers{};
  S last{S(0.0F)};
  std::array<S, 3> ranges{};
};
static_assert(count_of<Tracks<float>> == 3 && count_of<Tracks<wend::lab::Pack<4>>> == 3);

template <typename S>
Memory<S> filled(float sign) {
  auto const number = [sign](float start) {
    return numbers::make<S>([=](int k) { return sign * (start + 10.0F * static_cast<float>(k)); });
  };
  auto const mask = [sign](int odd) {
    return numbers::make_mask<S>([=](int k) { return (k % 2 == odd) == (sign > 0.0F); });
  };
  Memory<S> m;
  m.timer = {number(1.0F), mask(0)};
  m.anchor = {number(2.0F), number(3.0F)};
  m.committed = mask(1);
  m.disc = {{number(4.0F), number(5.0F)}, number(6.0F)};
  return m;
}

// All that one machine remembers, in a form that compares.
template <typename S>
auto machine(Memory<S> const& m, int k) {
  return std::tuple(numbers::lane(m.timer.seconds, k), numbers::holds(m.timer.running, k),
                    numbers::lane(m.anchor.x(), k), numbers::lane(m.anchor.y(), k), numbers::holds(m.committed, k),
                    numbers::lane(m.disc.centre.x(), k), numbers::lane(m.disc.centre.y(), k),
                    numbers::lane(m.disc.radius, k));
}

// The members are set by the language, first to last, and must come back as 1, 2, 3 and as -1, -2, -3.
template <int Count>
void visit_in_order() {
  auto const counted = []<int... I>(int sign, std::integer_sequence<int, I...>) {
    return Row<Count>{sign * (I + 1)...};
  };
  Row<Count> a = counted(1, std::make_integer_sequence<int, Count>{});
  Row<Count> const b = counted(-1, std::make_integer_sequence<int, Count>{});
  int seen = 0;
  bool in_order = true;
  wend::for_each_member(a, b, [&](int& x, int const& y) {
    ++seen;
    in_order = in_order && x == seen && y == -seen;
    x = 0;
  });
  CHECK(seen == Count);
  CHECK(in_order);
  bool all_written = true;
  wend::for_each_member(a, a, [&](int const& x, int const&) { all_written = all_written && x == 0; });
  CHECK(all_written);
}

}  // namespace

TEST_CASE("for_each_member visits one to eight members, in pairs and in order") {
  visit_in_order<1>();
  visit_in_order<2>();
  visit_in_order<3>();
  visit_in_order<4>();
  visit_in_order<5>();
  visit_in_order<6>();
  visit_in_order<7>();
  visit_in_order<8>();
}

TEST_CASE("for_each_member has nothing to visit in an empty struct") {
  Nothing a;
  Nothing b;
  int visits = 0;
  wend::for_each_member(a, b, [&visits](auto&, auto&) { ++visits; });
  CHECK(visits == 0);
}

TEST_CASE("for_each_member visits every element of an array, however many, in pairs and in order") {
  std::array<int, 20> a{};
  std::array<int, 20> b{};
  for (std::size_t i = 0; i < a.size(); ++i) {
    a[i] = static_cast<int>(i);
    b[i] = -static_cast<int>(i);
  }
  std::array<int, 20> const before = b;
  int seen = 0;
  bool in_order = true;
  wend::for_each_member(a, before, [&](int& x, int const& y) {
    in_order = in_order && x == seen && y == -seen;
    x = 7;
    ++seen;
  });
  CHECK(seen == 20);
  CHECK(in_order);
  CHECK(a[0] == 7);
  CHECK(a[19] == 7);
  std::array<int, 0> none{};
  wend::for_each_member(none, none, [&](int&, int&) { ++seen; });
  CHECK(seen == 20);
}

TEST_CASE_TEMPLATE("assign_where changes arrays in a memory in the lanes of the mask and in no other", S,
                   WEND_TEST_NUMBERS) {
  wend::mask_t<S> const even = numbers::make_mask<S>([](int k) { return k % 2 == 0; });
  Tracks<S> to;
  Tracks<S> from;
  for (std::size_t i = 0; i < 20; ++i) {
    from.timers[i] = {S(static_cast<float>(i + 1)), S(1.0F) > S(0.0F)};
  }
  from.last = S(5.0F);
  from.ranges.fill(S(6.0F));
  wend::assign_where(even, to, from);
  for (int k = 0; k < numbers::lanes<S>(); ++k) {
    bool const hit = k % 2 == 0;
    bool good = numbers::lane(to.last, k) == (hit ? 5 : 0) && numbers::lane(to.ranges[2], k) == (hit ? 6 : 0);
    for (std::size_t i = 0; i < 20; ++i) {
      good = good && numbers::holds(to.timers[i].running, k) == hit &&
             static_cast<int>(numbers::lane(to.timers[i].seconds, k)) == (hit ? static_cast<int>(i + 1) : 0);
    }
    CHECK(good);
  }
}

TEST_CASE("for_each_member pairs a struct on lanes with the same struct on floats") {
  Timer<wend::lab::Pack<4>> lanes;
  lanes.seconds = numbers::make<wend::lab::Pack<4>>([](int k) { return 3.0F + static_cast<float>(k); });
  lanes.running = numbers::make_mask<wend::lab::Pack<4>>([](int k) { return k == 2; });
  Timer<float> one;
  wend::for_each_member(lanes, one, [](auto const& all, auto& alone) { alone = all[2]; });
  CHECK(one.seconds == 5.0F);
  CHECK(one.running);
}

TEST_CASE_TEMPLATE("assign_where changes a nested memory in the lanes of the mask and in no other", S,
                   WEND_TEST_NUMBERS) {
  Memory<S> const before = filled<S>(-1.0F);
  Memory<S> const after = filled<S>(1.0F);
  for (int pattern = 0; pattern < (1 << numbers::lanes<S>()); ++pattern) {
    auto const bit = [pattern](int k) { return ((pattern >> k) & 1) != 0; };
    Memory<S> memory = before;
    wend::assign_where(numbers::make_mask<S>(bit), memory, after);
    bool good = true;
    for (int k = 0; k < numbers::lanes<S>(); ++k) {
      REQUIRE(machine(before, k) != machine(after, k));
      good = good && machine(memory, k) == machine(bit(k) ? after : before, k);
    }
    CHECK(good);
  }
}

TEST_CASE_TEMPLATE("assign_where works on numbers, masks and vectors by themselves", S, WEND_TEST_NUMBERS) {
  wend::mask_t<S> const even = numbers::make_mask<S>([](int k) { return k % 2 == 0; });
  S number = S(1.0F);
  wend::mask_t<S> const yes = S(1.0F) > S(0.0F);
  wend::mask_t<S> mask = !yes;
  wend::Vec2<S> vector{S(3.0F), S(4.0F)};
  wend::assign_where(even, number, S(2.0F));
  wend::assign_where(even, mask, yes);
  wend::assign_where(even, vector, wend::Vec2<S>(S(5.0F), S(6.0F)));
  for (int k = 0; k < numbers::lanes<S>(); ++k) {
    bool const hit = k % 2 == 0;
    CHECK(numbers::lane(number, k) == (hit ? 2 : 1));
    CHECK(numbers::holds(mask, k) == hit);
    CHECK(numbers::lane(vector.x(), k) == (hit ? 5 : 3));
    CHECK(numbers::lane(vector.y(), k) == (hit ? 6 : 4));
  }
}

TEST_CASE_TEMPLATE("choose calls one function on a bool, and both on lanes", S, WEND_TEST_NUMBERS) {
  for (bool const all : {false, true}) {
    int first_calls = 0;
    int second_calls = 0;
    wend::mask_t<S> const mask = numbers::make_mask<S>([all](int) { return all; });
    S const got = wend::choose(
        mask,
        [&] {
          ++first_calls;
          return S(1.0F);
        },
        [&] {
          ++second_calls;
          return S(2.0F);
        });
    bool const plain = numbers::lanes<S>() == 1;
    CHECK(first_calls == (plain && !all ? 0 : 1));
    CHECK(second_calls == (plain && all ? 0 : 1));
    CHECK(numbers::all<S>(got >= S(all ? 1.0F : 2.0F) && got <= S(all ? 1.0F : 2.0F)));
  }
}

TEST_CASE_TEMPLATE("choose selects whole structs lane by lane", S, WEND_TEST_NUMBERS) {
  Memory<S> const yes = filled<S>(1.0F);
  Memory<S> const no = filled<S>(-1.0F);
  for (int odd : {0, 1}) {
    wend::mask_t<S> const mask = numbers::make_mask<S>([odd](int k) { return k % 2 == odd; });
    Memory<S> const got = wend::choose(mask, [&] { return yes; }, [&] { return no; });
    for (int k = 0; k < numbers::lanes<S>(); ++k) {
      CHECK((machine(got, k) == machine(k % 2 == odd ? yes : no, k)));
    }
  }
}
