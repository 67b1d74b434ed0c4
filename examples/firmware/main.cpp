// firmware: the control loop on a microcontroller, with no operating system and no start-up code but its own. It runs
// the recorded run at a fixed tick and prints each command as bits, so that machines can be compared tick by tick; then
// what decisions cost in instructions and stack. The same source runs on a laptop, which counts nothing.
#include <array>
#include <cstdint>

#include "control.hpp"
#include "decisions.hpp"
#include "line.hpp"
#include "machines/machine.hpp"
#include "stack.hpp"

extern "C" recorded::Tick const recorded_run[recorded::ticks];

namespace {

void print(int tick, wend::Command<float> const& command) noexcept {
  wend::Findings<float> const& f = command.findings;
  std::uint32_t const findings = (f.stale ? 1U : 0U) | (f.blind ? 2U : 0U) | (f.arrived ? 4U : 0U) |
                                 (f.no_course ? 8U : 0U) | (f.blocked ? 16U : 0U) | (f.stuck ? 32U : 0U) |
                                 (f.discs_dropped ? 64U : 0U);
  Line line;
  line.word("command").number(static_cast<std::uint32_t>(tick)).bits(command.wheels.left).bits(command.wheels.right);
  line.bits(command.body.speed).bits(command.body.turn_rate).bits(command.course.direction.x());
  line.bits(command.course.direction.y()).bits(command.course.confidence).bits(command.course.speed_share);
  line.bits(findings).print();
}

// One tick of the run, with all that it is given.
struct Moment {
  wend::Situation<float> now;
  std::array<float, recorded::beams> ranges{};
  ControlMemory memory;
};

struct Timed {
  wend::Command<float> command;
  std::uint32_t instructions;
};

Timed timed(Moment& moment) noexcept {
  std::uint32_t const start = machine::reading();
  wend::Command<float> const command = wend_tick(moment.now, moment.ranges, moment.memory);
  return {command, machine::instructions(start, machine::reading())};
}

Moment moment;
Moment worst;

bool run() noexcept {
  Line line;
  line.word("fields tick wheels.left wheels.right body.speed body.turn_rate course.direction.x course.direction.y")
      .word("course.confidence course.speed_share findings")
      .print();
  std::uint32_t most = 0;
  std::uint32_t deepest = 0;
  std::uint32_t late = 0;
  std::uint8_t goal = recorded_run[0].goal;
  machine::start_ticks(recorded::period_ms);
  for (int k = 0; k < recorded::ticks; ++k) {
    late += machine::wait_for_tick() ? 0U : 1U;
    recorded::Tick const& tick = recorded_run[k];
    recorded::unpack(tick, moment.now, moment.ranges);
    if (tick.goal != goal) {
      goal = tick.goal;
      moment.memory = {};
    }
    Moment const before = moment;
    Timed const done = timed(moment);
    print(k, done.command);
    if (done.instructions > most) {
      most = done.instructions;
      worst = before;
    }
    Moment again = before;
    std::uint32_t const depth = stack_of([&again]() noexcept { wend_tick(again.now, again.ranges, again.memory); });
    deepest = depth > deepest ? depth : deepest;
  }
  machine::stop_ticks();
  line.word("late").number(late).print();
  if (machine::counts) {
    constexpr std::uint32_t times = 64;  // the worst one again, often enough to smooth out the counter's grain
    std::uint32_t total = 0;
    for (std::uint32_t i = 0; i < times; ++i) {
      Moment again = worst;
      total += timed(again).instructions;
    }
    line.word("count worst_tick 0").number(total).number(times).print();
    line.word("stack tick").number(deepest).print();
  }
  line.word("bytes memory_wend").number(sizeof(DecisionMemory)).print();
  line.word("bytes memory_example").number(sizeof(ExampleMemory)).print();
  line.word("bytes memory_tick").number(sizeof(ControlMemory)).print();
  return late == 0;
}

}  // namespace

int main() {
  bool const in_time = run();
  bool const agreed = compare_decisions();
  return in_time && agreed ? 0 : 1;
}
