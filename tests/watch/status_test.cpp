// Status: which finding is told first, what stops the wheels, and the words.
#include <set>
#include <string>

#include <doctest/doctest.h>

#include "../numbers.hpp"
#include "wend/watch/status.hpp"

using wend::Findings;
using wend::Status;

namespace {

// In the order of precedence that the header promises, most urgent first.
constexpr bool Findings<float>::* in_order[] = {
    &Findings<float>::stale,   &Findings<float>::blind, &Findings<float>::arrived,      &Findings<float>::no_course,
    &Findings<float>::blocked, &Findings<float>::stuck, &Findings<float>::discs_dropped};
constexpr Status statuses[] = {Status::stale,   Status::blind, Status::arrived,      Status::no_course,
                               Status::blocked, Status::stuck, Status::discs_dropped};

}  // namespace

TEST_CASE("of all the findings that hold, the first in the order of precedence is the status") {
  for (unsigned pattern = 0; pattern < 128; ++pattern) {
    Findings<float> findings;
    Status expected = Status::ok;
    for (int k = 6; k >= 0; --k) {
      if (((pattern >> static_cast<unsigned>(k)) & 1U) != 0U) {
        findings.*in_order[k] = true;
        expected = statuses[k];
      }
    }
    CAPTURE(pattern);
    CHECK(status_of(findings) == expected);
    // stale, blind, arrived and no_course stop the machine: the first four
    CHECK(must_stop(findings) == ((pattern & 0xFU) != 0U));
  }
}

TEST_CASE("each status has words of its own, in small letters") {
  std::set<std::string> words;
  for (int k = 0; k < 8; ++k) {
    std::string const word = text(static_cast<Status>(k));
    CHECK(word.find_first_not_of("abcdefghijklmnopqrstuvwxyz ") == std::string::npos);
    words.insert(word);
  }
  CHECK(words.size() == 8);
  CHECK(std::string(text(Status::ok)) == "ok");
  CHECK(std::string(text(Status::no_course)) == "no course");
  CHECK(std::string(text(Status::stale)) == "stale");
  CHECK(words.count(text(static_cast<Status>(200))) == 0);  // no status, but words all the same
}

TEST_CASE("a lane is stopped for its own findings alone") {
  using S = wend::lab::Pack<4>;
  Findings<S> findings;
  CHECK(numbers::none<S>(must_stop(findings)));
  findings.blind = numbers::make_mask<S>([](int k) { return k == 1; });
  findings.blocked = numbers::make_mask<S>([](int) { return true; });
  for (int k = 0; k < 4; ++k) {
    CHECK(numbers::holds(must_stop(findings), k) == (k == 1));
  }
}
