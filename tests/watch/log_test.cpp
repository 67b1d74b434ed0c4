// The decision log: what is kept, how its bytes lie, and that no interrupt makes half a record.
#include <array>
#include <bit>
#include <csignal>
#include <cstddef>
#include <cstdint>
#include <cstring>
#include <memory>
#include <numbers>
#include <span>
#include <string_view>
#include <type_traits>
#include <vector>

#include <sys/time.h>

#include <doctest/doctest.h>

#include "wend/arbiters/blend.hpp"
#include "wend/arbiters/guard.hpp"
#include "wend/arbiters/guarded.hpp"
#include "wend/arbiters/signal.hpp"
#include "wend/fields/away_from_discs.hpp"
#include "wend/fields/past_disc.hpp"
#include "wend/fields/toward_goal.hpp"
#include "wend/loop.hpp"
#include "wend/sensing/ring.hpp"
#include "wend/watch/log.hpp"
#include "wend/watch/packed.hpp"

namespace {

using wend::Command;
using wend::Crc32;
using wend::DecisionLog;
using wend::DiscSet;
using wend::DumpLayout;
using wend::Loop;
using wend::MovingDiscSet;
using wend::Readings;
using wend::Situation;

// The policy and loop of the quickstart.
constexpr auto policy =
    wend::guarded(wend::below(wend::clearance, 0.30F, 0.50F), wend::past_disc{}, wend::toward_goal{});
using Policy = std::remove_const_t<decltype(policy)>;
constexpr Loop<Policy> loop{.policy = policy};
using Memory = wend::memory_t<Loop<Policy>, float>;
template <int Capacity>
using Log = DecisionLog<decltype(loop), DiscSet<float, 8>, Capacity>;

constexpr wend::Ring<16> ring{wend::even_bearings<16>(0.0, std::numbers::pi / 8.0), 0.05F, 6.0F, 0.01F};
constexpr Loop<Policy, wend::Ring<16>> ranging{.policy = policy, .sensing = ring};

// What a record takes, so that nobody is surprised. Situation 8 numbers; 8 discs of 3 numbers, their count, the dropped
// and a mask; memory 4 numbers and 3 masks; command 8 numbers and 7 masks.
static_assert(Log<1>::payload_bytes == 8 * 4 + (8 * 3 * 4 + 5) + (4 * 4 + 3) + (8 * 4 + 7));
static_assert(Log<1>::record_bytes == 195);
static_assert(Log<1>::dumped_bytes == 200);
static_assert(sizeof(Log<64>) == 64 * 195 + 8);
static_assert(DecisionLog<decltype(ranging), Readings<float, 16>, 1>::record_bytes == 158);
static_assert(DecisionLog<decltype(ranging), Readings<float, 16>, 1>::dumped_bytes == 163);
static_assert(DecisionLog<decltype(loop), MovingDiscSet<float, 8>, 1>::record_bytes == 195 + 8 * 8);
static_assert(DecisionLog<decltype(loop), DiscSet<double, 8>, 1>::record_bytes == 195 + (8 + 24 + 4 + 8) * 4);
static_assert(std::is_trivially_copyable_v<Log<4>> && std::is_trivially_destructible_v<Log<4>>);

struct Bytes {
  std::vector<std::byte> all;
  void operator()(std::byte byte) { all.push_back(byte); }
};
template <typename T>
std::vector<std::byte> packed(T const& x) {
  Bytes bytes;
  wend::pack(x, bytes);
  return bytes.all;
}
std::vector<std::byte> hex(std::initializer_list<int> values) {
  std::vector<std::byte> bytes;
  for (int const value : values) {
    bytes.push_back(static_cast<std::byte>(value));
  }
  return bytes;
}

template <typename L, typename Of>
std::vector<std::byte> dumped(L const& log, Of const& of) {
  Bytes bytes;
  log.dump(of, bytes);
  return bytes.all;
}
std::uint32_t word(std::vector<std::byte> const& bytes, std::size_t at) {
  std::uint32_t value = 0;
  for (std::size_t i = 0; i < 4; ++i) {
    value |= std::to_integer<std::uint32_t>(bytes.at(at + i)) << (8U * i);
  }
  return value;
}

// Long division by the polynomial of IEEE 802.3, clause 3.2.9 (x^32 + x^26 + x^23 + x^22 + x^16 + x^12 + x^11 + x^10 +
// x^8 + x^7 + x^5 + x^4 + x^2 + x + 1), bit by bit: first 32 bits complemented, lowest bit of each byte first, result
// complemented.
std::uint32_t by_long_division(std::span<std::byte const> bytes) {
  std::uint32_t rest = 0xffffffffU;  // highest power in the highest bit
  for (std::byte const byte : bytes) {
    for (unsigned bit = 0; bit < 8; ++bit) {
      std::uint32_t const in = (std::to_integer<std::uint32_t>(byte) >> bit) & 1U;
      std::uint32_t const out = rest >> 31U;
      rest = (rest << 1U) ^ ((in ^ out) != 0 ? 0x04c11db7U : 0U);
    }
  }
  std::uint32_t reflected = 0;
  for (unsigned bit = 0; bit < 32; ++bit) {
    reflected |= ((rest >> bit) & 1U) << (31U - bit);
  }
  return ~reflected;
}

Situation<float> situation(float x) {
  Situation<float> now;
  now.pose.position = {x, 0.0F};
  now.goal = {4.0F, 0.0F};
  return now;
}
DiscSet<float, 8> one_disc() {
  DiscSet<float, 8> discs;
  discs.add({{0.7F, 0.1F}, 0.3F});
  return discs;
}

template <typename L, typename Change>
std::uint32_t changed(L parameters, Change const& change) {
  change(parameters);
  return wend::parameters_checksum(parameters);
}

}  // namespace

TEST_CASE("Crc32 gives the published check value") {
  // CRC-32/ISO-HDLC in the Catalogue of parametrised CRC algorithms (G. Cook): check 0xcbf43926; from memory.
  Crc32 sum;
  for (char const c : std::string_view("123456789")) {
    sum(static_cast<std::byte>(c));
  }
  CHECK(sum.value() == 0xcbf43926U);
  CHECK(Crc32{}.value() == 0U);
}

TEST_CASE("Crc32 is the remainder of a long division") {
  std::vector<std::byte> bytes;
  std::uint32_t state = 1;
  for (int size = 0; size < 300; ++size) {
    Crc32 sum;
    for (std::byte const byte : bytes) {
      sum(byte);
    }
    CHECK(sum.value() == by_long_division(bytes));
    state = state * 1664525U + 1013904223U;
    bytes.push_back(static_cast<std::byte>(state >> 24U));
  }
}

TEST_CASE("pack writes little-endian bytes without padding") {
  // IEEE 754-2019, table 3.5: 1 is 0x3f800000, -2.5 is 0xc0200000; in double 1 is 0x3ff0000000000000.
  CHECK(packed(1.0F) == hex({0x00, 0x00, 0x80, 0x3f}));
  CHECK(packed(-2.5F) == hex({0x00, 0x00, 0x20, 0xc0}));
  CHECK(packed(1.0) == hex({0, 0, 0, 0, 0, 0, 0xf0, 0x3f}));
  CHECK(packed(true) == hex({1}));
  CHECK(packed(false) == hex({0}));
  CHECK(packed(std::uint16_t{0x1234}) == hex({0x34, 0x12}));
  CHECK(packed(wend::Vec2<float>(1.0F, -2.5F)) == hex({0, 0, 0x80, 0x3f, 0, 0, 0x20, 0xc0}));
  CHECK(packed(std::array<std::uint8_t, 3>{1, 2, 3}) == hex({1, 2, 3}));
  wend::past_disc::Memory<float> const memory{{1.0F, -2.5F}, true};
  CHECK(packed(memory) == hex({0, 0, 0x80, 0x3f, 0, 0, 0x20, 0xc0, 1}));
}

TEST_CASE("pack writes every place of a set of discs, and what it says of itself") {
  DiscSet<float, 2> discs;
  discs.add({{1.0F, 0.0F}, -1.0F});  // cannot be one
  CHECK(packed(discs) ==
        hex({0x00, 0x24, 0x74, 0x49, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0, 1, 0, 0, 0, 1}));
  MovingDiscSet<float, 1> moving;
  moving.add({{1.0F, 0.0F}, 1.0F}, {0.0F, 1.0F});
  moving.add({{2.0F, 0.0F}, 1.0F}, {0.0F, 1.0F});
  CHECK(packed(moving) ==
        hex({0, 0, 0x80, 0x3f, 0, 0, 0, 0, 0, 0, 0x80, 0x3f, 0, 0, 0, 0, 0, 0, 0x80, 0x3f, 1, 0, 1, 0, 0}));
}

TEST_CASE("a log decides as its loop does") {
  Log<4> log;
  Memory alone;
  Memory logged;
  auto const discs = one_disc();
  for (int i = 0; i < 20; ++i) {
    auto const now = situation(0.05F * static_cast<float>(i));
    Command<float> const a = loop.tick(now, discs, alone);
    Command<float> const b = log.tick(loop, now, discs, logged);
    CHECK(packed(a) == packed(b));
    CHECK(packed(alone) == packed(logged));
  }
  CHECK(log.size() == 4);
  CHECK(log.ticks() == 20);
}

TEST_CASE("a dump holds the last decisions in order, however often the ring went round") {
  for (std::uint32_t ticks = 0; ticks <= 17; ++ticks) {
    CAPTURE(ticks);
    Log<5> log;
    Memory memory;
    auto const discs = one_disc();
    for (std::uint32_t i = 0; i < ticks; ++i) {
      log.tick(loop, situation(0.01F * static_cast<float>(i)), discs, memory);
    }
    auto const bytes = dumped(log, loop);
    std::uint32_t const kept = ticks < 5 ? ticks : 5;
    REQUIRE(bytes.size() == 38 + 200 * kept);
    CHECK(std::memcmp(bytes.data(), "wendlog\x01", 8) == 0);
    CHECK(word(bytes, 8) == wend::parameters_checksum(loop));
    CHECK(word(bytes, 12) == 191);
    CHECK(word(bytes, 16) == ticks - kept);
    CHECK(word(bytes, 20) == kept);
    CHECK(word(bytes, 34) == by_long_division(std::span(bytes).first(34)));
    for (std::uint32_t i = 0; i < kept; ++i) {
      std::size_t const at = 38 + 200 * i;
      CHECK(word(bytes, at) == ticks - kept + i);
      CHECK(bytes[at + 4] == std::byte{1});
      CHECK(word(bytes, at + 5) == std::bit_cast<std::uint32_t>(0.01F * static_cast<float>(ticks - kept + i)));
      CHECK(word(bytes, at + 196) == by_long_division(std::span(bytes).subspan(at, 196)));
    }
  }
}

TEST_CASE("a sink is given single bytes or whole blocks, the same ones") {
  DecisionLog<decltype(ranging), Readings<float, 16>, 3> log;
  wend::memory_t<decltype(ranging), float> memory;
  Readings<float, 16> readings;
  readings.ranges.fill(2.0F);
  for (int i = 0; i < 4; ++i) {
    readings.ranges[3] = static_cast<float>(i);
    log.tick(ranging, situation(0.0F), readings, memory);
  }
  std::vector<std::byte> blocks;
  int calls = 0;
  log.dump(ranging, [&](std::span<std::byte const> block) {
    ++calls;
    blocks.insert(blocks.end(), block.begin(), block.end());
  });
  CHECK(calls == 4);
  CHECK(blocks == dumped(log, ranging));
  CHECK(word(blocks, 38 + 5 + 32 + 3 * 4) == std::bit_cast<std::uint32_t>(1.0F));  // of the oldest: ranges[3]
}

TEST_CASE("ticks between the bytes of a dump leave records whole, or told as overwritten") {
  // Record k of 8 is copied after 38 + 200 k bytes, and is lost when there were more than k ticks by then.
  struct Case {
    std::size_t every;  // bytes sent between two ticks
    int kept;
  };
  for (Case const& now : {Case{1, 0}, {50, 1}, {120, 2}, {170, 5}, {199, 8}, {2000, 8}}) {
    std::size_t const every = now.every;
    int const expected = now.kept;
    CAPTURE(every);
    Log<8> log;
    Memory memory;
    auto const discs = one_disc();
    for (int i = 0; i < 11; ++i) {
      log.tick(loop, situation(0.01F * static_cast<float>(i)), discs, memory);
    }
    auto const before = dumped(log, loop);
    std::vector<std::byte> bytes;
    log.dump(loop, [&](std::byte byte) {
      bytes.push_back(byte);
      if (bytes.size() % every == 0) {
        log.tick(loop, situation(9.0F), discs, memory);
      }
    });
    REQUIRE(bytes.size() == before.size());
    int kept = 0;
    for (std::size_t at = 38; at < bytes.size(); at += 200) {
      CHECK(word(bytes, at) == word(before, at));
      CHECK(word(bytes, at + 196) == by_long_division(std::span(bytes).subspan(at, 196)));
      if (bytes[at + 4] == std::byte{1}) {
        ++kept;
        CHECK(std::memcmp(&bytes[at], &before[at], 200) == 0);
      } else {
        for (std::size_t i = 4; i < 196; ++i) {
          CHECK(bytes[at + i] == std::byte{0});
        }
      }
    }
    CHECK(kept == expected);
  }
}

namespace {

// For a dump inside a tick: a real interrupt, as far as a process has one. All marks of a record say its number.
Log<3>* interrupted = nullptr;
int volatile dumps = 0;
int volatile halves = 0;

void dump_now(int) {
  std::array<std::byte, 38 + 3 * 200> bytes{};
  std::size_t size = 0;
  interrupted->dump(loop, [&](std::byte byte) { bytes[size++] = byte; });
  for (std::size_t at = 38; at < size; at += 200) {
    std::uint32_t number = 0;
    std::uint32_t first = 0;  // the pose's x
    std::uint32_t last = 0;  // the last number of the command
    std::memcpy(&number, &bytes[at], 4);
    std::memcpy(&first, &bytes[at + 5], 4);
    std::memcpy(&last, &bytes[at + 196 - 7 - 4], 4);
    if (bytes[at + 4] == std::byte{1} && (first != number || last != number)) {
      halves = halves + 1;
    }
  }
  dumps = dumps + 1;
}

}  // namespace

TEST_CASE("a dump in the middle of a tick holds no half record") {
  if constexpr (std::endian::native == std::endian::little) {
    auto const log = std::make_unique<Log<3>>();
    interrupted = log.get();
    struct sigaction how{};
    struct sigaction before{};
    how.sa_handler = dump_now;
    REQUIRE(sigaction(SIGALRM, &how, &before) == 0);
    itimerval const often{{0, 200}, {0, 200}};  // microseconds
    REQUIRE(setitimer(ITIMER_REAL, &often, nullptr) == 0);
    auto const discs = one_disc();
    Situation<float> now;
    Command<float> command;
    for (std::uint32_t i = 0; i < 20'000'000U && dumps < 300; ++i) {
      now.pose.position.x() = std::bit_cast<float>(i);
      command.course.speed_share = std::bit_cast<float>(i);
      log->add(now, discs, Memory{}, command);
    }
    itimerval const never{};
    setitimer(ITIMER_REAL, &never, nullptr);
    sigaction(SIGALRM, &before, nullptr);
    CHECK(dumps >= 300);
    CHECK(halves == 0);
  }
}

TEST_CASE("parameters_checksum tells every parameter of a loop apart") {
  using L = std::remove_const_t<decltype(ranging)>;
  std::uint32_t const as_it_is = wend::parameters_checksum(ranging);
  L const copy = ranging;
  CHECK(wend::parameters_checksum(copy) == as_it_is);
  std::vector<std::uint32_t> const others{
      changed(copy, [](L& l) { l.policy.guard.enter = 0.31F; }),
      changed(copy, [](L& l) { l.policy.guard.leave = 0.51F; }),
      changed(copy, [](L& l) { l.sensing.noise = 0.02F; }),
      changed(copy, [](L& l) { l.sensing.no_echo = 0.0F; }),
      changed(copy, [](L& l) { l.sensing.directions[15].x += 1e-6F; }),
      changed(copy, [](L& l) { l.sensing.mounting.x = 0.1F; }),
      changed(copy, [](L& l) { l.drive.track = 0.31F; }),
      changed(copy, [](L& l) { l.steering.gain = 2.0F; }),
      changed(copy, [](L& l) { l.pace.behind = 0.6F; }),
      changed(copy, [](L& l) { l.freshness.max_dt = 0.6F; }),
      changed(copy, [](L& l) { l.progress.patience = 21.0F; }),
      changed(copy, [](L& l) { l.robot_radius = 0.21F; }),
      changed(copy, [](L& l) { l.arrive_within = 0.16F; }),
      changed(copy, [](L& l) { l.min_alive = 0.6F; }),
  };
  for (std::size_t i = 0; i < others.size(); ++i) {
    CAPTURE(i);
    CHECK(others[i] != as_it_is);
    for (std::size_t k = 0; k < i; ++k) {
      CHECK(others[i] != others[k]);
    }
  }
}

TEST_CASE("parameters_checksum tells policies of another shape apart, and heeds no padding") {
  CHECK(wend::parameters_checksum(
            wend::blend(wend::ramp(wend::clearance, 0.3F, 0.5F), wend::past_disc{}, wend::toward_goal{})) !=
        wend::parameters_checksum(wend::below(wend::clearance, 0.3F, 0.5F)));
  struct Holed {
    bool flag = true;
    float value = 1.0F;
  };
  std::array<std::uint32_t, 2> sums{};
  for (int fill : {0, 1}) {
    alignas(Holed) std::array<std::byte, sizeof(Holed)> room;
    room.fill(static_cast<std::byte>(fill * 0xa5));
    sums[static_cast<std::size_t>(fill)] = wend::parameters_checksum(*new (room.data()) Holed);
  }
  CHECK(sums[0] == sums[1]);
  constexpr std::uint32_t while_compiling = wend::parameters_checksum(policy);
  CHECK(wend::parameters_checksum(Policy(policy)) == while_compiling);
}
