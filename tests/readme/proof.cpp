// Around the README's call of prove.
#include <wend/lab/prove.hpp>
#include <wend/wend.hpp>

#include "examples/policies.hpp"
#include "examples/cellar.hpp"

void proves();

void proves() {
  constexpr wend::Loop<decltype(policies::composed)> loop{.policy = policies::composed};
  wend::lab::World world;
  world.add(6.0, 4.0, 0.5);
  wend::Vec2<double> const goal{11.5, 4.0};
  // HERE
  static_cast<void>(proof.verdict);
}
