// Philox4x32-10 against the known answers of Salmon, Moraes, Dror and Shaw (2011), "Parallel random numbers: as easy as
// 1, 2, 3", as the file kat_vectors of their library Random123 gives them (written down from memory).
#include <array>
#include <cstdint>

#include <doctest/doctest.h>

#include "wend/lab/random.hpp"

namespace {

using Counter = std::array<std::uint32_t, 4>;
using Key = std::array<std::uint32_t, 2>;

struct KnownAnswer {
  Counter counter;
  Key key;
  Counter answer;
};

constexpr std::array<KnownAnswer, 3> known{{
    {{0, 0, 0, 0}, {0, 0}, {0x6627e8d5U, 0xe169c58dU, 0xbc57ac4cU, 0x9b00dbd8U}},
    {{0xffffffffU, 0xffffffffU, 0xffffffffU, 0xffffffffU},
     {0xffffffffU, 0xffffffffU},
     {0x408f276dU, 0x41c83b0eU, 0xa20bc7c6U, 0x6d5451fdU}},
    {{0x243f6a88U, 0x85a308d3U, 0x13198a2eU, 0x03707344U},  // the digits of pi
     {0xa4093822U, 0x299f31d0U},
     {0xd16cfe09U, 0x94fdccebU, 0x5001e420U, 0x24126ea1U}},
}};

}  // namespace

TEST_CASE("philox gives the known answers of its authors") {
  for (KnownAnswer const& k : known) {
    CHECK(wend::lab::philox(k.counter, k.key) == k.answer);
  }
}

TEST_CASE("philox can be worked out by the compiler") {
  static_assert(wend::lab::philox(known[2].counter, known[2].key) == known[2].answer);
  CHECK(wend::lab::philox(known[2].counter, known[2].key) == known[2].answer);
}
