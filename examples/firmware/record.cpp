// record FILE: writes the recorded run that firmware is built with. A cart goes round between the tables and pots of a
// plant nursery (all invented), steered by the loop that firmware runs; its rangers are cheap, and sometimes fail.
//
// Nothing but + - * / and square roots, noise from counted integers: the file is the same on every machine.
#include <array>
#include <cmath>
#include <cstdint>
#include <cstdio>
#include <vector>

#include <wend/lab/random.hpp>

#include "control.hpp"

namespace {

using wend::Disc;
using wend::Vec2;

std::vector<Disc<double>> const things{{{2.5, 1.4}, 0.30}, {{3.0, 3.2}, 0.40}, {{2.4, 5.2}, 0.35}, {{4.6, 2.2}, 0.35},
                                       {{4.9, 4.4}, 0.45}, {{4.4, 6.6}, 0.30}, {{6.8, 1.2}, 0.40}, {{6.7, 3.3}, 0.30},
                                       {{6.9, 5.6}, 0.40}, {{8.9, 2.3}, 0.35}, {{9.1, 4.4}, 0.45}, {{8.6, 6.6}, 0.30},
                                       {{11.2, 3.6}, 0.3}, {{0.6, 3.9}, 0.35}};

enum Purpose : std::uint32_t { range_noise = 1, dropout, position_noise, lateness };

// Even noise of the given standard deviation: a sum of two even draws.
double noise(wend::lab::Draws const& draws, double sigma, Purpose purpose, std::uint32_t tick, std::uint32_t item) {
  constexpr double per_sigma = 2.449489742783178;  // square root of 6: the sum of two draws from (-1/2, 1/2)
  double const sum = draws.uniform({purpose, tick, 2 * item}) + draws.uniform({purpose, tick, 2 * item + 1}) - 1.0;
  return per_sigma * sigma * sum;
}

std::int16_t to_int16(double x) { return static_cast<std::int16_t>(std::lround(x)); }

struct Cart {
  Vec2<double> position{1.0, 1.0};
  Vec2<double> heading{1.0, 0.0};

  void move(double speed, double turn_rate, double dt) {
    double const h = 0.5 * turn_rate * dt;  // stands for the tangent of half the angle
    Vec2<double> const turn{(1.0 - h * h) / (1.0 + h * h), 2.0 * h / (1.0 + h * h)};
    position += speed * dt * heading;
    heading = wend::turned_out_of(heading, turn);
    heading = wend::polar(heading).direction;
  }
};

recorded::Tick measured(Cart const& cart, std::uint32_t k, std::uint8_t goal) {
  wend::lab::Draws const draws(20, 0);
  recorded::Tick tick{};
  tick.x_mm = to_int16(1000.0 * (cart.position.x() + noise(draws, 0.01, position_noise, k, 0)));
  tick.y_mm = to_int16(1000.0 * (cart.position.y() + noise(draws, 0.01, position_noise, k, 1)));
  tick.heading_x = to_int16(static_cast<double>(recorded::heading_one) * cart.heading.x());
  tick.heading_y = to_int16(static_cast<double>(recorded::heading_one) * cart.heading.y());
  tick.goal = goal;
  tick.dt_ms = recorded::period_ms;
  tick.age_ms = static_cast<std::uint16_t>(10.0 + 20.0 * draws.uniform({lateness, k}));
  bool const dark = k % 1500 >= 1400 && k % 1500 < 1410;  // half a second without a ranger
  if (k % 1700 >= 1650 && k % 1700 < 1655) {
    tick.age_ms = 400;  // a bus that was late
  }
  for (int i = 0; i < recorded::beams; ++i) {
    wend::Bearing const& beam = recorded::ring.directions[static_cast<std::size_t>(i)];
    Vec2<double> const way =
        wend::turned_out_of(cart.heading, Vec2<double>(static_cast<double>(beam.x), static_cast<double>(beam.y)));
    double range = 1.0e6;
    for (Disc<double> const& thing : things) {
      range = std::fmin(range, wend::ray_to_disc(cart.position, way, thing));
    }
    range += noise(draws, 0.015, range_noise, k, static_cast<std::uint32_t>(i));
    bool const dropped = draws.uniform({dropout, k, static_cast<std::uint32_t>(i)}) < 0.02;
    tick.range_mm[i] = dark || dropped ? std::uint16_t{0}
                       : range > 4.0   ? recorded::no_echo_mm
                                       : static_cast<std::uint16_t>(std::lround(1000.0 * std::fmax(range, 0.0)));
  }
  return tick;
}

}  // namespace

int main(int argc, char** argv) {
  std::FILE* const file = argc == 2 ? std::fopen(argv[1], "wb") : nullptr;
  if (file == nullptr) {
    std::fputs("usage: record FILE\n", stderr);
    return 2;
  }
  Cart cart;
  ControlMemory memory;
  std::uint8_t goal = 1;
  bool whole = true;
  for (std::uint32_t k = 0; k < recorded::ticks; ++k) {
    recorded::Tick const tick = measured(cart, k, goal);
    whole = std::fwrite(&tick, sizeof tick, 1, file) == 1 && whole;
    wend::Situation<float> now;
    std::array<float, recorded::beams> ranges{};
    recorded::unpack(tick, now, ranges);
    wend::Command<float> const command = wend_tick(now, ranges, memory);
    cart.move(static_cast<double>(command.body.speed), static_cast<double>(command.body.turn_rate), 0.05);
    if (command.findings.arrived) {
      goal = static_cast<std::uint8_t>((goal + 1) & 3);
      memory = {};
    }
  }
  whole = std::fclose(file) == 0 && whole;
  return whole ? 0 : 1;
}
