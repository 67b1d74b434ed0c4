// Tests of include/wend/lab/search.hpp on a set whose measure is known.
#include "wend/lab/search.hpp"

#include <cstdint>
#include <utility>
#include <vector>

#include <doctest/doctest.h>

namespace {

namespace lab = wend::lab;

struct Piece {
  double low, high;
};

std::pair<Piece, Piece> halves(Piece const& p) {
  double const middle = 0.5 * (p.low + p.high);
  return {{p.low, middle}, {middle, p.high}};
}

// Holds where x^2 < 1/4 for all of a piece of [0, 1].
lab::Finding under_half(Piece const& p) {
  if (p.high < 0.5) {
    return lab::Finding::holds;
  }
  return p.high - p.low < 1e-3 ? lab::Finding::too_small : lab::Finding::open;
}

}  // namespace

TEST_CASE("a search decides what can be decided and returns the rest, whatever the threads") {
  for (int const threads : {1, 2, 4}) {
    lab::SearchOptions options;
    options.threads = threads;
    auto const result = lab::search(std::vector<Piece>{{0.0, 1.0}}, under_half, halves, options);
    double measure = 0.0;
    for (Piece const& p : result.left) {
      measure += p.high - p.low;
    }
    CHECK_FALSE(result.failed);
    CHECK(measure >= 0.5);  // all of [1/2, 1] must be left, and no more of the rest than one smallest piece
    CHECK(measure < 0.5 + 1e-3);
    CHECK(result.boxes == 2 * 1024 - 1 - 2 * 511 + 2 * 9);  // a binary tree, cut below 1/2 where a piece holds
  }
}

namespace {

lab::SearchOptions within(std::int64_t boxes) {
  lab::SearchOptions options;
  options.box_budget = boxes;
  return options;
}

}  // namespace

TEST_CASE("a search stops at the first failure and at its budget") {
  auto const fails_high = [](Piece const& p) {
    return p.low > 0.9 ? lab::Finding::fails : p.high - p.low < 1e-3 ? lab::Finding::too_small : lab::Finding::open;
  };
  CHECK(lab::search(std::vector<Piece>{{0.0, 1.0}}, fails_high, halves, within(100'000)).failed);
  auto const never = [](Piece const&) { return lab::Finding::open; };
  auto const result = lab::search(std::vector<Piece>{{0.0, 1.0}}, never, halves, within(1000));
  CHECK(result.boxes >= 1000);
  CHECK(result.boxes < 1100);
  double measure = 0.0;
  for (Piece const& p : result.left) {
    measure += p.high - p.low;
  }
  CHECK(measure == 1.0);  // nothing is lost
}
