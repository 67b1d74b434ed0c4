// wend/lab/unpack.hpp - plain structs and sets of discs from the bytes that `pack` made of them.
#pragma once

#include <array>
#include <bit>
#include <cstddef>
#include <cstdint>
#include <limits>
#include <string_view>
#include <tuple>
#include <type_traits>

#include "wend/members.hpp"
#include "wend/watch/log.hpp"

namespace wend::inline v0::lab::detail {

// Takes bytes from the front; good until they run out or one cannot be what it should be.
struct DumpReader {
  std::string_view bytes;
  bool good = true;

  [[nodiscard]] std::uint64_t bits(std::size_t count) {
    good = good && count <= bytes.size();
    std::uint64_t value = 0;
    for (std::size_t i = 0; good && i < count; ++i) {
      value |= static_cast<std::uint64_t>(static_cast<unsigned char>(bytes[i])) << (8U * i);
    }
    bytes.remove_prefix(good ? count : 0);
    return value;
  }
};

template <typename T>
void unpack(DumpReader& in, T& x);

// A set is filled by `add`, as it was on the machine, so that it comes out the same: with a disc that cannot be one
// where it says that there was one, and with as many too many as it says were dropped.
template <typename Set>
void unpack_discs(DumpReader& in, Set& discs) {
  using S = typename v0::detail::SeenOf<Set>::Scalar;
  constexpr S not_a_number = std::numeric_limits<S>::quiet_NaN();
  constexpr bool moves = requires { discs.velocities(); };
  std::array<Disc<S>, static_cast<std::size_t>(Set::capacity())> places;
  std::array<Vec2<S>, static_cast<std::size_t>(Set::capacity())> velocities;
  for (std::size_t i = 0; i < places.size(); ++i) {
    unpack(in, places[i]);
    velocities[i] = zero2<S>();
    if constexpr (moves) {
      unpack(in, velocities[i]);
    }
  }
  auto const size = in.bits(2);
  auto const dropped = static_cast<int>(in.bits(2));
  bool rejected = false;
  unpack(in, rejected);
  in.good = in.good && size <= places.size();
  if (!in.good) {
    return;
  }
  auto const add = [&](Disc<S> const& disc, Vec2<S> const& velocity, Vec2<S> const& viewpoint) {
    if constexpr (moves) {
      discs.add(disc, velocity, viewpoint);
    } else {
      discs.add(disc, viewpoint);
    }
  };
  // From so far away no disc is farther than another, and none gives way.
  Vec2<S> const out_of_sight{std::numeric_limits<S>::max(), S(0.0F)};
  for (std::size_t i = 0; i < size; ++i) {
    Disc<S> disc = places[i];
    bool const stand_in = disc.centre == Disc<S>{}.centre && disc.radius == S(0.0F);
    bool const unsound = rejected && !discs.rejected();
    disc.radius = unsound && stand_in ? not_a_number : disc.radius;
    Vec2<S> velocity = velocities[i];
    velocity.x() = unsound && moves && velocity == zero2<S>() ? not_a_number : velocity.x();
    add(disc, velocity, out_of_sight);
    in.good = in.good && finite(disc.centre) && (finite(disc.radius) || unsound) && finite(velocities[i]);
  }
  for (int i = 0; i < dropped && size == places.size(); ++i) {
    bool const unsound = rejected && !discs.rejected();
    add({{S(0.0F), S(0.0F)}, unsound ? not_a_number : S(0.0F)}, zero2<S>(), out_of_sight);
  }
  in.good = in.good && discs.dropped() == dropped && discs.rejected() == rejected;
}

template <typename T>
void unpack(DumpReader& in, T& x) {
  if constexpr (v0::detail::DiscsIn<T>::value) {
    unpack_discs(in, x);
  } else if constexpr (v0::detail::IsVec2<T>::value) {
    unpack(in, x.x());
    unpack(in, x.y());
  } else if constexpr (std::is_same_v<T, bool>) {
    auto const byte = in.bits(1);
    in.good = in.good && byte <= 1;
    x = byte == 1;
  } else if constexpr (std::is_same_v<T, float>) {
    x = std::bit_cast<float>(static_cast<std::uint32_t>(in.bits(4)));
  } else if constexpr (std::is_same_v<T, double>) {
    x = std::bit_cast<double>(in.bits(8));
  } else if constexpr (std::is_integral_v<T> || std::is_enum_v<T>) {
    x = static_cast<T>(in.bits(sizeof(T)));
  } else if constexpr (v0::detail::TupleLike<T>) {
    std::apply([&in](auto&... parts) { (unpack(in, parts), ...); }, x);
  } else if constexpr (!std::is_empty_v<T>) {
    v0::for_each_member(x, x, [&in](auto& member, auto&) { unpack(in, member); });
  }
}

}  // namespace wend::inline v0::lab::detail
