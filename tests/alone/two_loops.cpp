// A loop has no hidden state: the same inputs give the same commands, whatever ran before, in between or beside it.
// Built with the thread sanitizer too: `sh cmake/matrix.sh threads`.
#include <array>
#include <cstring>
#include <numbers>
#include <span>
#include <thread>
#include <vector>

#include "check.hpp"
#include "wend/lab/random.hpp"
#include "wend/wend.hpp"

namespace {

using namespace wend;

constexpr int beams = 36;
constexpr auto policy = guarded(held(below(clearance, 0.3F, 0.5F), 0.3F), past_disc{},
                                blend(ramp(clearance, 0.5F, 1.2F), away_from_discs{}, toward_goal{}));
// One constant for all threads, as in flash.
constexpr Loop<decltype(policy), Ring<beams>> loop{
    .policy = policy,
    .sensing = {.directions = even_bearings<beams>(0.0, 2.0 * std::numbers::pi / beams),
                .min_range = 0.05F,
                .max_range = 6.0F,
                .noise = 0.01F}};

// One machine that turns about among things, tick by tick.
class Machine {
 public:
  explicit Machine(std::uint64_t number) : draws_(7, number) {}

  void tick() {
    std::array<float, beams> ranges;
    for (std::uint32_t k = 0; k < beams; ++k) {
      ranges[k] = static_cast<float>(draws_.between(0.2, 3.0, {1, tick_ / 8, k / 3}));
    }
    Situation<float> now;
    now.goal = {2.0F, static_cast<float>(draws_.between(-2.0, 2.0, {2, tick_ / 50}))};
    Command<float> const command = loop.tick(now, std::span<float const, beams>(ranges), memory_);
    commands_.push_back(command.wheels.left);
    commands_.push_back(command.wheels.right);
    ++tick_;
  }

  [[nodiscard]] std::vector<float> const& commands() const { return commands_; }

 private:
  lab::Draws draws_;
  std::uint32_t tick_ = 0;
  memory_t<decltype(loop), float> memory_;
  std::vector<float> commands_;
};

constexpr int ticks = 4000;

std::vector<float> alone_in_the_world(std::uint64_t number) {
  Machine machine(number);
  for (int i = 0; i < ticks; ++i) {
    machine.tick();
  }
  return machine.commands();
}

bool same(std::vector<float> const& a, std::vector<float> const& b) {
  return a.size() == b.size() && std::memcmp(a.data(), b.data(), a.size() * sizeof(float)) == 0;
}

}  // namespace

int main() {
  std::vector<float> const first = alone_in_the_world(1);
  std::vector<float> const second = alone_in_the_world(2);
  alone::check(!same(first, second), "two machines decide differently");
  alone::check(same(first, alone_in_the_world(1)), "the same again, though another one ran in between");

  Machine a(1);
  Machine b(2);
  for (int i = 0; i < ticks; ++i) {
    a.tick();
    b.tick();
  }
  alone::check(same(a.commands(), first) && same(b.commands(), second), "tick about: as each alone");

  std::vector<float> in_thread_1;
  std::vector<float> in_thread_2;
  {
    std::jthread one([&] { in_thread_1 = alone_in_the_world(1); });
    std::jthread two([&] { in_thread_2 = alone_in_the_world(2); });
  }
  alone::check(same(in_thread_1, first) && same(in_thread_2, second), "in two threads at once: as each alone");
  return alone::failures == 0 ? 0 : 1;
}
