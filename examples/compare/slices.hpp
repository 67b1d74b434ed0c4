// The catalogue cut in slices, each compiled by itself: simulating a policy takes the compiler a while.
#pragma once

#include <array>
#include <cstddef>
#include <cstdint>
#include <functional>
#include <string>
#include <tuple>
#include <utility>
#include <vector>

#include <wend/lab/simulate.hpp>
#include <wend/loop.hpp>

#include "../catalogue.hpp"

namespace compare {

/// One method, its type forgotten.
struct Entrant {
  std::string name;
  bool placed;
  std::function<wend::lab::Run(wend::lab::Vehicle const&, wend::lab::World const&, wend::lab::Trip const&,
                               std::uint64_t run)>
      drive;
};

inline constexpr std::size_t slice_count = 4;
using Slice = std::vector<std::pair<std::size_t, Entrant>>;  ///< with the place in the catalogue

Slice slice_0();
Slice slice_1();
Slice slice_2();
Slice slice_3();

/// Every slice_count-th line of the catalogue, from the I-th.
template <std::size_t I>
Slice make_slice() {
  Slice slice;
  auto const add = [&slice]<std::size_t Place>() {
    if constexpr (Place % slice_count == I) {
      auto const& entry = std::get<Place>(catalogue::all);
      auto const drive = [&policy = entry.policy](auto const& vehicle, auto const& world, auto const& trip,
                                                  std::uint64_t run) {
        return wend::lab::simulate(wend::Loop<std::remove_cvref_t<decltype(policy)>>{.policy = policy}, vehicle, world,
                                   trip, 1, run);
      };
      slice.push_back({Place, {entry.name, entry.placed, drive}});
    }
  };
  [&add]<std::size_t... Places>(std::index_sequence<Places...>) {
    (add.template operator()<Places>(), ...);
  }(std::make_index_sequence<catalogue::size>{});
  return slice;
}

}  // namespace compare
