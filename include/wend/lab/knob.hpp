// wend/lab/knob.hpp - parameters of a loop that are to be turned: named, found inside of it, and changed in a copy.
#pragma once

#include <array>
#include <cstddef>
#include <cstring>
#include <functional>
#include <new>
#include <stdexcept>
#include <string>
#include <type_traits>
#include <vector>

#include "wend/number.hpp"

namespace wend::inline v0::lab {

/// A parameter to turn: its name, and where it is in the loop object that is asked about.
struct Knob {
  std::string name;     ///< for reports
  Parameter const* at;  ///< inside of that very loop, not of a copy
};

namespace detail {

// Bytes from the loop's start to a parameter of it. Throws where it is not inside; `who` and `what` are for the
// message.
template <typename Loop>
[[nodiscard]] std::size_t place_in(char const* who, Loop const& loop, Parameter const* at, std::string const& what) {
  auto const* const start = reinterpret_cast<std::byte const*>(&loop);
  auto const* const place = reinterpret_cast<std::byte const*>(at);
  std::less<> const before;
  if (at == nullptr || before(place, start) || before(start + sizeof loop, place + sizeof(Parameter))) {
    throw std::invalid_argument(std::string("wend: ") + who + ": " + what +
                                " is not inside the loop that is asked about; write {\"top speed\", " +
                                "&loop.pace.top_speed, ...}, say, with that very loop and not a copy");
  }
  return static_cast<std::size_t>(place - start);
}

template <typename Loop>
[[nodiscard]] Parameter parameter_at(Loop const& loop, std::size_t place) {
  Parameter value = 0.0F;
  std::memcpy(&value, reinterpret_cast<std::byte const*>(&loop) + place, sizeof value);
  return value;
}

// A copy of a loop with other parameters at some places. Made as bytes, and then a loop: its policy may be a constant,
// in which nothing may be written.
template <typename Loop>
[[nodiscard]] Loop with_values(Loop const& loop, std::vector<std::size_t> const& places,
                               std::vector<Parameter> const& values) {
  static_assert(std::is_trivially_copy_constructible_v<Loop> && std::is_trivially_destructible_v<Loop>,
                "wend: a loop is parameters only, so it can be copied");
  alignas(Loop) std::array<std::byte, sizeof(Loop)> bytes;
  std::memcpy(bytes.data(), &loop, sizeof loop);
  for (std::size_t k = 0; k < places.size(); ++k) {
    std::memcpy(bytes.data() + places[k], &values[k], sizeof values[k]);
  }
  return *std::launder(reinterpret_cast<Loop const*>(bytes.data()));
}

}  // namespace detail

}  // namespace wend::inline v0::lab
