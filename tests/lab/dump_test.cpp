// Dumps of decision logs: read back as they were, refused where they are damaged, decided again bit by bit.
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <limits>
#include <numbers>
#include <string>
#include <string_view>
#include <type_traits>
#include <vector>

#include <doctest/doctest.h>

#include "../field_list.hpp"
#include "wend/lab/decide_again.hpp"
#include "wend/lab/dump.hpp"
#include "wend/lab/random.hpp"
#include "wend/loop.hpp"
#include "wend/sensing/ring.hpp"
#include "wend/watch/log.hpp"

namespace {

using wend::DecisionLog;
using wend::DiscSet;
using wend::Loop;
using wend::MovingDiscSet;
using wend::Readings;
using wend::Situation;
using wend::lab::decide_again;
using wend::lab::Draws;
using wend::lab::FileError;
using wend::lab::read_dump;

constexpr auto policy =
    wend::guarded(wend::below(wend::clearance, 0.30F, 0.50F), wend::past_disc{}, wend::toward_goal{});
constexpr Loop<std::remove_const_t<decltype(policy)>> loop{.policy = policy};
using Discs = DiscSet<float, 8>;

constexpr std::size_t header = wend::DumpLayout::header_bytes;
template <typename L, typename Seen>
constexpr std::size_t record = DecisionLog<L, Seen, 1>::dumped_bytes;

template <typename Log, typename L>
std::string dumped(Log const& log, L const& of) {
  std::string bytes;
  log.dump(of, [&bytes](std::byte byte) { bytes += static_cast<char>(byte); });
  return bytes;
}

// Whatever may come in, and now and then what must not.
void draw(Draws const& draws, std::uint32_t tick, Situation<float>& now) {
  double const angle = draws.between(-3.0, 3.0, {0, tick, 0});
  now.pose = {{static_cast<float>(draws.between(-1.0, 1.0, {1, tick, 0})),
               static_cast<float>(draws.between(-1.0, 1.0, {1, tick, 1}))},
              {static_cast<float>(std::cos(angle)), static_cast<float>(std::sin(angle))}};
  now.goal = {3.0F, 1.0F};
  now.dt = tick % 7 == 3 ? -1.0F : 0.05F;
  now.age = tick % 11 == 5 ? std::numeric_limits<float>::quiet_NaN() : 0.01F;
  now.pose.position.x() = tick % 13 == 9 ? std::numeric_limits<float>::infinity() : now.pose.position.x();
}
template <int N>
void draw(Draws const& draws, std::uint32_t tick, DiscSet<float, N>& discs) {
  for (std::uint32_t i = 0; i < tick % (N + 3); ++i) {  // too many, sometimes
    float const radius = tick % 5 == 2 && i == 1 ? -1.0F : 0.2F;
    discs.add({{static_cast<float>(draws.between(-2.0, 2.0, {2, tick, i})),
                static_cast<float>(draws.between(-2.0, 2.0, {3, tick, i}))},
               radius});
  }
}
template <int N>
void draw(Draws const& draws, std::uint32_t tick, MovingDiscSet<float, N>& discs) {
  for (std::uint32_t i = 0; i < tick % (N + 3); ++i) {
    float const speed = tick % 5 == 2 && i == 1 ? std::numeric_limits<float>::infinity() : 0.3F;
    discs.add(
        {{static_cast<float>(draws.between(-2.0, 2.0, {2, tick, i})), 1.0F}, tick % 3 == 1 && i == 2 ? -1.0F : 0.2F},
        {speed, 0.1F});
  }
}
template <int N>
void draw(Draws const& draws, std::uint32_t tick, Readings<float, N>& readings) {
  for (std::uint32_t i = 0; i < N; ++i) {
    double const range = draws.between(-0.2, 4.0, {4, tick, i});
    readings.ranges[i] = i == tick % N ? std::numeric_limits<float>::signaling_NaN() : static_cast<float>(range);
  }
}

template <typename Seen, int Capacity, typename L>
DecisionLog<L, Seen, Capacity> logged(L const& of, std::uint32_t ticks) {
  DecisionLog<L, Seen, Capacity> log;
  wend::memory_t<L, float> memory;
  Draws const draws(7, 0);
  for (std::uint32_t tick = 0; tick < ticks; ++tick) {
    Situation<float> now;
    Seen seen;
    draw(draws, tick, now);
    draw(draws, tick, seen);
    log.tick(of, now, seen, memory);
  }
  return log;
}

template <typename T>
std::string packed(T const& x) {
  std::string bytes;
  auto out = [&bytes](std::byte byte) { bytes += static_cast<char>(byte); };
  wend::pack(x, out);
  return bytes;
}

// The checksum of a block set right again, as somebody would who changes a record on purpose.
void reseal(std::string& bytes, std::size_t at, std::size_t size) {
  wend::Crc32 sum;
  for (std::size_t i = 0; i < size - 4; ++i) {
    sum(static_cast<std::byte>(bytes[at + i]));
  }
  bytes.replace(at + size - 4, 4, packed(sum.value()));
}

// What read_dump has to say, the number of good records, and whether it refused the dump as a whole.
struct Outcome {
  std::string what;
  std::size_t good = 0;
  bool refused = false;
};
template <typename Seen, typename L>
Outcome read(std::string const& bytes, L const& of) {
  try {
    auto const dump = read_dump<Seen>("dump", bytes, of);
    return {dump.damage, dump.decisions.size(), false};
  } catch (FileError const& error) {
    return {error.what(), 0, true};
  }
}
bool begins(std::string const& text, std::string const& with) { return text.rfind(with, 0) == 0; }

template <typename Seen, typename L>
void check_round_trip(L const& of) {
  auto const log = logged<Seen, 40>(of, 60);
  std::string const bytes = dumped(log, of);
  auto const dump = read_dump<Seen>("dump", bytes, of);
  CHECK(dump.damage.empty());
  CHECK(dump.overwritten.empty());
  CHECK(dump.header.first == 20);
  REQUIRE(dump.decisions.size() == 40);
  for (std::size_t i = 0; i < 40; ++i) {
    auto const& d = dump.decisions[i];
    CHECK(d.number == 20 + i);
    std::string const payload = packed(d.now) + packed(d.seen) + packed(d.before) + packed(d.command);
    CHECK(payload == bytes.substr(header + i * record<L, Seen> + 5, payload.size()));
  }
  CHECK(decide_again(of, dump).empty());
}

}  // namespace

TEST_CASE("a dump is read as it was logged, and is decided again bit by bit") {
  auto const on_everything = [](auto const& one) {
    using Policy = std::remove_cvref_t<decltype(one)>;
    Loop<Policy> const on_discs{.policy = one};
    Loop<Policy, wend::Ring<16>> const on_readings{
        .policy = one, .sensing = {wend::even_bearings<16>(0.0, std::numbers::pi / 8.0), 0.05F, 6.0F, 0.01F}};
    check_round_trip<DiscSet<float, 8>>(on_discs);
    check_round_trip<MovingDiscSet<float, 3>>(on_discs);
    check_round_trip<Readings<float, 16>>(on_readings);
  };
  on_everything(policy);
  on_everything(wend::toward_goal{});
  on_everything(field_list::composed);
  on_everything(wend::priority(field_list::shy{},
                               wend::only_when(wend::held(field_list::far_from_goal, 0.1F), wend::past_disc{}),
                               field_list::ahead{}));
}

TEST_CASE("a changed bit anywhere in a dump is found, and the records before it are still read") {
  using L = std::remove_const_t<decltype(loop)>;
  std::string const bytes = dumped(logged<Discs, 3>(loop, 5), loop);
  REQUIRE(bytes.size() == header + 3 * record<L, Discs>);
  REQUIRE(read<Discs>(bytes, loop).what.empty());
  for (std::size_t at = 0; at < bytes.size(); ++at) {
    for (unsigned change : {1U, 2U, 4U, 8U, 16U, 32U, 64U, 128U, 255U}) {
      std::string tampered = bytes;
      tampered[at] = static_cast<char>(static_cast<unsigned char>(tampered[at]) ^ change);
      Outcome const outcome = read<Discs>(tampered, loop);
      if (at < header) {
        CHECK(outcome.refused);
      } else {
        std::size_t const in = (at - header) / record<L, Discs>;
        bool const good = !outcome.refused && outcome.good == in &&
                          begins(outcome.what, "record " + std::to_string(in + 1) + " of 3 (tick " +
                                                   std::to_string(in + 2) + ") is damaged");
        CHECK_MESSAGE(good, at << ": " << outcome.what);
      }
    }
  }
}

TEST_CASE("a dump cut short anywhere is found, and the records before the cut are still read") {
  using L = std::remove_const_t<decltype(loop)>;
  std::string const bytes = dumped(logged<Discs, 3>(loop, 3), loop);
  for (std::size_t size = 0; size < bytes.size(); ++size) {
    Outcome const outcome = read<Discs>(bytes.substr(0, size), loop);
    if (size < header) {
      CHECK(outcome.refused);
    } else {
      std::size_t const whole = (size - header) / record<L, Discs>;
      bool const good = !outcome.refused && outcome.good == whole &&
                        begins(outcome.what, "record " + std::to_string(whole + 1) + " of 3 (tick " +
                                                 std::to_string(whole) + ") is cut short");
      CHECK_MESSAGE(good, size << ": " << outcome.what);
    }
  }
  CHECK(read<Discs>(bytes + "x", loop).what == "1 bytes follow the last of 3 records");
  CHECK(read<Discs>(bytes + "x", loop).good == 3);
  CHECK(read<Discs>(dumped(logged<Discs, 3>(loop, 0), loop), loop).what.empty());
}

TEST_CASE("records out of order, and records that no machine writes, are refused") {
  using L = std::remove_const_t<decltype(loop)>;
  constexpr std::size_t size = record<L, Discs>;
  std::string const bytes = dumped(logged<Discs, 4>(loop, 4), loop);
  std::string swapped = bytes;
  swapped.replace(header + size, size, bytes, header + 2 * size, size);
  CHECK(read<Discs>(swapped, loop).what == "record 2 of 4 (tick 1) is out of order: it says that it is tick 2");
  CHECK(read<Discs>(swapped, loop).good == 1);

  std::size_t const findings = header + 2 * size + size - 4 - 7;
  std::size_t const count = header + 2 * size + 5 + 32 + 96;  // of the discs
  for (auto const& [at, byte] : {std::pair{findings, '\x02'}, std::pair{count, '\x09'}, std::pair{count + 4, '\x02'}}) {
    std::string forged = bytes;
    forged[at] = byte;
    reseal(forged, header + 2 * size, size);
    CHECK(begins(read<Discs>(forged, loop).what, "record 3 of 4 (tick 2) holds what no machine writes"));
    CHECK(read<Discs>(forged, loop).good == 2);
  }
}

TEST_CASE("records overwritten during the dump are passed over, and told") {
  auto log = logged<Discs, 4>(loop, 4);
  wend::memory_t<std::remove_const_t<decltype(loop)>, float> memory;
  std::string bytes;
  log.dump(loop, [&](std::byte byte) {
    bytes += static_cast<char>(byte);
    if (bytes.size() == header || bytes.size() == header + 1) {
      log.tick(loop, {}, Discs{}, memory);
    }
  });
  auto const dump = read_dump<Discs>("dump", bytes, loop);
  CHECK(dump.damage.empty());
  CHECK(dump.overwritten == std::vector<std::uint32_t>{0, 1});
  CHECK(dump.decisions.size() == 2);
  CHECK(decide_again(loop, dump).empty());
}

TEST_CASE("a dump is replayed on no other parameters, inputs or bytes") {
  std::string const bytes = dumped(logged<Discs, 3>(loop, 3), loop);
  auto other = loop;
  other.policy.guard.enter = 0.31F;
  Outcome const thresholds = read<Discs>(bytes, other);
  CHECK(thresholds.refused);
  CHECK(begins(thresholds.what, "dump: was decided with other parameters: their checksum is 0x"));
  CHECK(read<DiscSet<float, 9>>(bytes, loop).what == "dump: expected 9 for the capacity of the discs, found 8");
  CHECK(read<MovingDiscSet<float, 8>>(bytes, loop).refused);
  CHECK(read<DiscSet<double, 8>>(bytes, loop).what == "dump: expected 8 for the bytes of a number, found 4");
  CHECK(read<Discs>(bytes, Loop<wend::toward_goal>{}).what == "dump: expected 8 for the bytes of the memory, found 19");
  CHECK(read<Discs>("what is this", loop).what == "dump: expected a dump of decisions, which begins with 'wendlog'");
  std::string later = bytes;
  later[7] = '\x02';
  CHECK(read<Discs>(later, loop).what == "dump: expected a dump of version 1, found version 2");
}

TEST_CASE("every changed bit of a command or a memory decides differently, and which one is told") {
  using L = std::remove_const_t<decltype(loop)>;
  constexpr std::size_t size = record<L, Discs>;
  constexpr std::size_t memory = 5 + 32 + 101;  // in a record, of 19 bytes; behind it the command, of 39
  constexpr std::size_t at = header + 1 * size;  // the second record of three
  DecisionLog<L, Discs, 3> log;
  wend::memory_t<L, float> remembered;
  Discs discs;
  discs.add({{0.7F, 0.1F}, 0.3F});
  for (int i = 0; i < 5; ++i) {
    Situation<float> now;
    now.goal = {4.0F, 0.0F};
    log.tick(loop, now, discs, remembered);
  }
  std::string const bytes = dumped(log, loop);
  REQUIRE(decide_again(loop, read_dump<Discs>("dump", bytes, loop)).empty());
  // Packed one after another: the guard's answer, where the field was and on which side, on which side of the guard the
  // policy is, and the progress. The command: two wheels, two of the body, four of the course, seven findings.
  std::vector<std::string> const names{"memory.policy.guard.on",      "memory.policy.inside.away.x",
                                       "memory.policy.inside.away.y", "memory.policy.inside.disc_on_right",
                                       "memory.policy.is_inside",     "memory.progress.nearest",
                                       "memory.progress.since",       "command.wheels.left",
                                       "command.wheels.right",        "command.body.speed",
                                       "command.body.turn_rate",      "command.course.direction.x",
                                       "command.course.direction.y",  "command.course.confidence",
                                       "command.course.speed_share",  "command.findings.stale",
                                       "command.findings.blind",      "command.findings.arrived",
                                       "command.findings.no_course",  "command.findings.blocked",
                                       "command.findings.stuck",      "command.findings.discs_dropped"};
  std::vector<std::size_t> const widths{1, 4, 4, 1, 1, 4, 4, 4, 4, 4, 4, 4, 4, 4, 4, 1, 1, 1, 1, 1, 1, 1};
  std::size_t place = memory;
  for (std::size_t member = 0; member < names.size(); ++member) {
    for (std::size_t bit = 0; bit < (widths[member] == 1 ? 1U : 32U); ++bit) {
      std::string forged = bytes;
      char& byte = forged[at + place + bit / 8];
      byte = static_cast<char>(static_cast<unsigned char>(byte) ^ (1U << (bit % 8)));
      reseal(forged, at, size);
      auto const dump = read_dump<Discs>("dump", forged, loop);
      REQUIRE(dump.damage.empty());
      bool told = false;
      for (std::string const& line : decide_again(loop, dump)) {
        std::string const before = begins(names[member], "memory") ? "before it, " : "";
        told = told || begins(line, "tick 3: decides differently: " + before + names[member] + ": logged ");
      }
      CHECK_MESSAGE(told, names[member] << ", bit " << bit);
    }
    place += widths[member];
  }
  CHECK(place == size - 4);
}

TEST_CASE("what was logged and what is decided are told with their bits") {
  auto dump = read_dump<Discs>("dump", dumped(logged<Discs, 3>(loop, 3), loop), loop);
  auto const right = dump.decisions[0].command;
  REQUIRE(right.findings.blocked == false);
  dump.decisions[0].command.course.speed_share = 0.5F;
  dump.decisions[0].command.findings.blocked = true;
  auto const lines = decide_again(loop, dump);
  REQUIRE(lines.size() == 2);
  // IEEE 754: 0.5 is 0x3f000000 and 1 is 0x3f800000.
  CHECK(lines[0] ==
        "tick 0: decides differently: command.course.speed_share: logged 0.5 (0x3f000000), decided 1 (0x3f800000)");
  CHECK(lines[1] == "tick 0: decides differently: command.findings.blocked: logged yes, decided no");
}

TEST_CASE("a fresh memory between two records is a new goal, and no difference") {
  DecisionLog<std::remove_const_t<decltype(loop)>, Discs, 4> log;
  Discs discs;
  discs.add({{0.7F, 0.1F}, 0.3F});
  for (int trip = 0; trip < 2; ++trip) {
    wend::memory_t<std::remove_const_t<decltype(loop)>, float> memory;
    Situation<float> now;
    now.goal = {4.0F, static_cast<float>(trip)};
    log.tick(loop, now, discs, memory);
    log.tick(loop, now, discs, memory);
  }
  CHECK(decide_again(loop, read_dump<Discs>("dump", dumped(log, loop), loop)).empty());
}

TEST_CASE("across a missing record, nothing is said of what was remembered") {
  DecisionLog<std::remove_const_t<decltype(loop)>, Discs, 4> log;
  wend::memory_t<std::remove_const_t<decltype(loop)>, float> memory;
  for (int i = 0; i < 4; ++i) {
    Situation<float> now;
    now.goal = {4.0F, 0.0F};
    log.tick(loop, now, Discs{}, memory);  // each tick remembers how long there was no progress
  }
  auto dump = read_dump<Discs>("dump", dumped(log, loop), loop);
  dump.decisions.erase(dump.decisions.begin() + 1);
  CHECK(decide_again(loop, dump).empty());
  dump.decisions[1].number = 1;  // as if it had followed
  CHECK(decide_again(loop, dump).size() == 1);
}

TEST_CASE("members of one's own are named by their place, those of the library by their names") {
  struct Own {
    float warmth = 1.0F;
    wend::Vec2<float> away{2.0F, 3.0F};
    bool since = false;
  };
  std::vector<std::string> names;
  Own const own;
  wend::lab::for_each_named_member(
      own, own, [&names](std::string const& name, auto const&, auto const&) { names.push_back(name); });
  CHECK(names == std::vector<std::string>{"member 1", "away", "since"});
}
