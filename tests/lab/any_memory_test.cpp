// Sets of memories: everything a policy could remember, halves of that, and members of it.
#include <type_traits>

#include <doctest/doctest.h>

#include "../field_list.hpp"
#include "wend/lab/any_memory.hpp"
#include "wend/lab/interval.hpp"
#include "wend/loop.hpp"

namespace {

using wend::lab::any_memory;
using wend::lab::decide_first_mask;
using wend::lab::FloatInterval;
using wend::lab::Interval;
using wend::lab::one_memory;
using wend::lab::Trilean;

template <typename I>
struct Count {
  int masks = 0;
  int undecided = 0;
  int numbers = 0;
  int whole = 0;

  void operator()(Trilean const& mask) { ++masks, undecided += mask.undecided() ? 1 : 0; }
  void operator()(I const& x) { ++numbers, whole += x.bounded() ? 0 : 1; }
};
template <typename I, typename Memory>
Count<I> count(Memory const& memory) {
  Count<I> counts;
  scenes::for_each_leaf<I>(memory, [&counts](auto const& leaf) { counts(leaf); });
  return counts;
}

}  // namespace

TEST_CASE_TEMPLATE("any_memory leaves no mask decided and no number bounded, at any depth", I, Interval,
                   FloatInterval) {
  int remembering = 0;
  field_list::for_each([&remembering](auto const& entry) {
    CAPTURE(entry.name);
    using Loop = wend::Loop<std::remove_cvref_t<decltype(entry.field)>>;
    auto const counts = count<I>(any_memory<Loop, I>());
    CHECK(counts.undecided == counts.masks);
    CHECK(counts.whole == counts.numbers);
    CHECK(counts.numbers >= 2);  // a loop's progress
    remembering += counts.masks > 0 ? 1 : 0;
  });
  CHECK(remembering >= 20);
}

TEST_CASE_TEMPLATE("halving a set of memories mask by mask ends with none undecided", I, Interval, FloatInterval) {
  field_list::for_each([](auto const& entry) {
    CAPTURE(entry.name);
    using Loop = wend::Loop<std::remove_cvref_t<decltype(entry.field)>>;
    auto memory = any_memory<Loop, I>();
    int const masks = count<I>(memory).masks;
    for (int decided = 0; decided < masks; ++decided) {
      CHECK(count<I>(memory).undecided == masks - decided);
      CHECK(decide_first_mask<I>(memory, decided % 2 == 0));
    }
    CHECK(count<I>(memory).undecided == 0);
    CHECK_FALSE(decide_first_mask<I>(memory, true));
    CHECK(count<I>(memory).whole == count<I>(memory).numbers);  // numbers are left alone
  });
}

TEST_CASE("decide_first_mask answers as it is told") {
  using Field = std::remove_cvref_t<decltype(field_list::composed)>;
  auto yes = any_memory<Field, Interval>();
  auto no = yes;
  CHECK(decide_first_mask<Interval>(yes, true));
  CHECK(decide_first_mask<Interval>(no, false));
  CHECK(yes.guard.on.surely());
  CHECK(no.guard.on.surely_not());
}

TEST_CASE("one_memory gives a member of the set") {
  using Memory = field_list::shy::Memory<Interval>;
  Memory set;
  set.from_tightest = {Interval(1.0, 2.0), Interval(-3.0, -1.0)};
  set.least_clearance = Interval(0.5, 0.5);
  set.since = Interval(5.0, Interval::whole().high());  // no member at 0
  set.shaken = Trilean::both();
  auto const a = one_memory<field_list::shy, double>(set, true);
  CHECK(a.from_tightest.x() == 1.5);
  CHECK(a.from_tightest.y() == -2.0);
  CHECK(a.least_clearance == 0.5);
  CHECK(a.since == 5.0);
  CHECK(a.shaken);
  CHECK_FALSE(one_memory<field_list::shy, float>(set, false).shaken);
  set.shaken = Trilean::no();
  set.since = Interval::whole();
  auto const b = one_memory<field_list::shy, float>(set, true);
  CHECK_FALSE(b.shaken);
  CHECK(b.since == 0.0F);
}
