// Three-valued logic, against sets of truth values: each Trilean is a set, and an operation on sets is the set of what
// the operation gives for their members (Kleene 1952, Introduction to Metamathematics, section 64: strong tables).
#include <array>
#include <set>

#include <doctest/doctest.h>

#include "wend/lab/trilean.hpp"

namespace {

using wend::lab::Trilean;

constexpr std::array<Trilean, 3> all{Trilean::yes(), Trilean::no(), Trilean::both()};

std::set<bool> members(Trilean t) {
  std::set<bool> found;
  if (t.can_be) {
    found.insert(true);
  }
  if (t.can_be_not) {
    found.insert(false);
  }
  return found;
}

}  // namespace

TEST_CASE("and, or and not of sets of truth values are those of their members") {
  for (Trilean const a : all) {
    std::set<bool> negated;
    for (bool const x : members(a)) {
      negated.insert(!x);
    }
    CHECK(members(!a) == negated);
    for (Trilean const b : all) {
      std::set<bool> both;
      std::set<bool> either;
      for (bool const x : members(a)) {
        for (bool const y : members(b)) {
          both.insert(x && y);
          either.insert(x || y);
        }
      }
      CHECK(members(a && b) == both);
      CHECK(members(a || b) == either);
    }
  }
}

TEST_CASE("select on sets of truth values gives what it can give for their members") {
  for (Trilean const m : all) {
    for (Trilean const a : all) {
      for (Trilean const b : all) {
        std::set<bool> chosen;
        for (bool const x : members(m)) {
          for (bool const y : members(x ? a : b)) {
            chosen.insert(y);
          }
        }
        CHECK(members(select(m, a, b)) == chosen);
      }
    }
  }
}

TEST_CASE("an answer is exactly one of sure, surely not and undecided, and starts as no") {
  for (Trilean const a : all) {
    CHECK(static_cast<int>(a.surely()) + static_cast<int>(a.surely_not()) + static_cast<int>(a.undecided()) == 1);
    CHECK(a.surely() == (members(a) == std::set<bool>{true}));
    CHECK(a.surely_not() == (members(a) == std::set<bool>{false}));
  }
  static_assert(Trilean{} == Trilean::no(), "as a bool of a memory does");
}
