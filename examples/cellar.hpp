// The scene: a tray cart crosses the vaulted cellar of a mushroom grower, among round pillars and tubs. All invented.
#pragma once

#include <numbers>

#include <wend/lab/simulate.hpp>
#include <wend/lab/vehicle.hpp>
#include <wend/lab/world.hpp>
#include <wend/wend.hpp>

namespace cellar {

/// Fifteen pillars and tubs in a cellar of 12 m by 8 m.
inline wend::lab::World world() {
  wend::lab::World cellar;
  cellar.add(2.6, 1.2, 0.35);
  cellar.add(2.2, 3.1, 0.30);
  cellar.add(2.7, 5.2, 0.40);
  cellar.add(4.3, 2.2, 0.30);
  cellar.add(4.1, 4.0, 0.45);
  cellar.add(4.6, 6.4, 0.35);
  cellar.add(6.2, 1.1, 0.40);
  cellar.add(6.1, 3.0, 0.30);
  cellar.add(6.4, 4.9, 0.35);
  cellar.add(8.0, 2.1, 0.35);
  cellar.add(8.1, 4.0, 0.45);
  cellar.add(8.0, 6.2, 0.30);
  cellar.add(9.8, 1.2, 0.30);
  cellar.add(9.9, 3.2, 0.35);
  cellar.add(9.8, 5.1, 0.40);
  return cellar;
}

/// From the lift to the washing place.
inline wend::lab::Trip trip() { return {{{0.6, 4.0}, {1.0, 0.0}}, {11.5, 4.0}, 180.0}; }

/// Where the cart's middle may be.
inline wend::lab::Region const region{{0.0, 0.0}, {12.0, 8.0}};

/// A ranger with 180 beams all round, as cheap ones are: 20 mm of noise.
inline constexpr wend::Ring<180> ring{.directions = wend::even_bearings<180>(0.0, std::numbers::pi / 90.0),
                                      .min_range = 0.05F,
                                      .max_range = 6.0F,
                                      .noise = 0.02F};

/// The cart: what its ranger, its pose estimate and its drive get wrong.
inline wend::lab::Vehicle cart() {
  wend::lab::Vehicle cart;
  cart.jitter = 0.1;
  cart.range_noise = 0.02;
  cart.dropout = 0.02;
  cart.position_noise = 0.01;
  cart.heading_noise = 0.01;
  return cart;
}

}  // namespace cellar
