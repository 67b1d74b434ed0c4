// The whole loop, from any readings, pose, goal, times and memory: what goes to the wheels is finite and within limits,
// nothing moves that has to stand, and what cannot be trusted is not remembered.
#include <array>
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <numbers>
#include <span>

#include "../../examples/policies.hpp"
#include "target.hpp"
#include "wend/wend.hpp"

namespace {

using namespace wend;

constexpr int beams = 12;
constexpr Ring<beams> ring{.directions = even_bearings<beams>(0.0, 2.0 * std::numbers::pi / beams),
                           .min_range = 0.05F,
                           .max_range = 6.0F,
                           .noise = 0.02F};

void check(Command<float> const& command, DifferentialDrive const& drive) {
  float const limit = drive.max_rate;
  fuzz::hold(std::isfinite(command.wheels.left) && std::isfinite(command.wheels.right), "wheel rates are finite");
  fuzz::hold(std::abs(command.wheels.left) <= limit && std::abs(command.wheels.right) <= limit,
             "wheel rates are within the drive's limit");
  fuzz::hold(std::isfinite(command.body.speed) && std::isfinite(command.body.turn_rate), "the body's motion is finite");
  fuzz::hold(command.body.speed >= 0.0F, "the machine does not back up");
  auto const& f = command.findings;
  if (f.stale || f.blind || f.arrived || f.no_course) {
    fuzz::hold(command.wheels.left == 0.0F && command.wheels.right == 0.0F, "wheels stand when they must");
  }
  if (f.blocked) {
    fuzz::hold(command.body.speed == 0.0F, "no speed without room");
  }
  float const size = command.course.direction.norm();
  bool const none = command.course.confidence == 0.0F && size == 0.0F;
  fuzz::hold(none || (command.course.confidence > 0.0F && command.course.confidence <= 1.0F &&
                      std::abs(size - 1.0F) < 1.0e-6F),
             "a course is a unit direction with a confidence in (0, 1], or none");
  if (f.stale || f.blind) {
    fuzz::hold(none, "no course from what cannot be trusted");
  }
}

template <typename Loop>
void drive(Loop const& loop, bool by_ranges, fuzz::Bytes& bytes) {
  memory_t<Loop, float> memory{};
  bytes.take(memory);
  do {  // a few ticks of anything
    memory_t<Loop, float> const before = memory;
    auto const now = bytes.next<Situation<float>>();
    Command<float> command;
    if (by_ranges) {
      std::array<float, beams> ranges;
      for (float& range : ranges) {
        bytes.take(range);
      }
      command = loop.tick(now, std::span<float const, beams>(ranges), memory);
    } else {
      MovingDiscSet<float, 3> discs;
      for (int i = bytes.next<std::uint8_t>() % 5; i > 0; --i) {
        auto const disc = bytes.next<Disc<float>>();
        discs.add(disc, bytes.next<Vec2<float>>(), now.pose.position);
      }
      command = loop.tick(now, discs, memory);
    }
    check(command, loop.drive);
    if (command.findings.stale || command.findings.blind) {
      fuzz::hold(fuzz::same_bits(memory, before), "what cannot be trusted is not remembered");
    }
  } while (bytes.left() > 0);

  // And from whatever is remembered now, a tick in good order decides something that can be driven.
  Situation<float> now;
  now.goal = {3.0F, 1.0F};
  DiscSet<float, 2> discs;
  discs.add({{1.5F, 0.2F}, 0.3F});
  Command<float> const command = loop.tick(now, discs, memory);
  check(command, loop.drive);
  fuzz::hold(!command.findings.stale && !command.findings.blind, "a sound tick is trusted");
}

template <typename Policy>
void drive_with(Policy const& policy, bool by_ranges, fuzz::Bytes& bytes) {
  drive(Loop<Policy, Ring<beams>>{.policy = policy, .sensing = ring}, by_ranges, bytes);
}

}  // namespace

extern "C" int LLVMFuzzerTestOneInput(std::uint8_t const* data, std::size_t size) {
  fuzz::Bytes bytes(data, size);
  auto const choice = bytes.next<std::uint8_t>();
  bool const by_ranges = (choice & 1U) != 0;
  switch ((choice >> 1U) % 4U) {
    case 0: drive_with(policies::composed, by_ranges, bytes); break;
    case 1: drive_with(policies::two_thresholds, by_ranges, bytes); break;
    case 2: drive_with(policies::blended, by_ranges, bytes); break;
    default:
      drive_with(priority(only_when(below(clearance, 0.3F, 0.5F), past_disc{}), potential_field{}), by_ranges, bytes);
  }
  return 0;
}
