// wend/watch/packed.hpp - plain structs as bytes that mean the same on every machine: little-endian, without padding.
#pragma once

#include <array>
#include <bit>
#include <cstddef>
#include <cstdint>
#include <limits>
#include <tuple>
#include <type_traits>
#include <utility>

#include "wend/disc.hpp"
#include "wend/members.hpp"
#include "wend/moving_discs.hpp"
#include "wend/plane.hpp"

namespace wend::inline v0 {

/// CRC-32 as in IEEE 802.3 and ISO/IEC 13239 (polynomial 0x04c11db7, reflected). It finds every damage of up to 32 bits
/// in a row, and others but for one in 4e9; it is no seal against somebody who works it out anew.
class Crc32 {
 public:
  /// Takes one byte more.
  constexpr void operator()(std::byte byte) noexcept {
    state_ ^= std::to_integer<std::uint32_t>(byte);
    state_ = (state_ >> 4U) ^ table[state_ & 0xfU];  // half a byte a step: 64 bytes of table instead of 1 KiB
    state_ = (state_ >> 4U) ^ table[state_ & 0xfU];
  }
  /// The checksum of all bytes so far; 0 of none.
  [[nodiscard]] constexpr std::uint32_t value() const noexcept { return ~state_; }

 private:
  static constexpr std::array<std::uint32_t, 16> table = [] {
    std::array<std::uint32_t, 16> entries{};
    for (std::uint32_t i = 0; i < 16; ++i) {
      std::uint32_t entry = i;
      for (int bit = 0; bit < 4; ++bit) {
        entry = (entry >> 1U) ^ ((entry & 1U) != 0 ? 0xedb88320U : 0U);
      }
      entries[i] = entry;
    }
    return entries;
  }();
  std::uint32_t state_ = 0xffffffffU;
};

namespace detail {

template <typename T>
struct IsVec2 : std::false_type {};
template <typename S>
struct IsVec2<Vec2<S>> : std::true_type {};

template <typename T>
struct DiscsIn : std::false_type {};
template <typename S, int N>
struct DiscsIn<DiscSet<S, N>> : std::true_type {
  static constexpr std::size_t each = 3 * sizeof(S);
};
template <typename S, int N>
struct DiscsIn<MovingDiscSet<S, N>> : std::true_type {
  static constexpr std::size_t each = 5 * sizeof(S);
};

template <typename T>
concept TupleLike = requires { std::tuple_size<T>::value; };

// As member_count, but for the longer structs that parameters come in: a loop's, a ring's. 17 stands for more than 16.
template <typename T, typename... Members>
consteval int part_count() {
  if constexpr (sizeof...(Members) > 16) {
    return 17;
  } else if constexpr (requires { T{Members{}..., ConvertsToAnything{}}; }) {
    return part_count<T, Members..., ConvertsToAnything>();
  } else {
    return static_cast<int>(sizeof...(Members));
  }
}

// f of all members of a plain struct at once; of up to sixteen.
template <typename T, typename F>
constexpr auto with_parts(T const& x, F const& f) noexcept {
  constexpr int count = part_count<T>();
  static_assert(count > 0 && count <= 16,
                "wend: a struct that is logged or compared may have up to sixteen members; group some of them in one");
  if constexpr (count == 1) {
    auto const& [a] = x;
    return f(a);
  } else if constexpr (count == 2) {
    auto const& [a, b] = x;
    return f(a, b);
  } else if constexpr (count == 3) {
    auto const& [a, b, c] = x;
    return f(a, b, c);
  } else if constexpr (count == 4) {
    auto const& [a, b, c, d] = x;
    return f(a, b, c, d);
  } else if constexpr (count == 5) {
    auto const& [a, b, c, d, e] = x;
    return f(a, b, c, d, e);
  } else if constexpr (count == 6) {
    auto const& [a, b, c, d, e, g] = x;
    return f(a, b, c, d, e, g);
  } else if constexpr (count == 7) {
    auto const& [a, b, c, d, e, g, h] = x;
    return f(a, b, c, d, e, g, h);
  } else if constexpr (count == 8) {
    auto const& [a, b, c, d, e, g, h, i] = x;
    return f(a, b, c, d, e, g, h, i);
  } else if constexpr (count == 9) {
    auto const& [a, b, c, d, e, g, h, i, j] = x;
    return f(a, b, c, d, e, g, h, i, j);
  } else if constexpr (count == 10) {
    auto const& [a, b, c, d, e, g, h, i, j, k] = x;
    return f(a, b, c, d, e, g, h, i, j, k);
  } else if constexpr (count == 11) {
    auto const& [a, b, c, d, e, g, h, i, j, k, l] = x;
    return f(a, b, c, d, e, g, h, i, j, k, l);
  } else if constexpr (count == 12) {
    auto const& [a, b, c, d, e, g, h, i, j, k, l, m] = x;
    return f(a, b, c, d, e, g, h, i, j, k, l, m);
  } else if constexpr (count == 13) {
    auto const& [a, b, c, d, e, g, h, i, j, k, l, m, n] = x;
    return f(a, b, c, d, e, g, h, i, j, k, l, m, n);
  } else if constexpr (count == 14) {
    auto const& [a, b, c, d, e, g, h, i, j, k, l, m, n, o] = x;
    return f(a, b, c, d, e, g, h, i, j, k, l, m, n, o);
  } else if constexpr (count == 15) {
    auto const& [a, b, c, d, e, g, h, i, j, k, l, m, n, o, p] = x;
    return f(a, b, c, d, e, g, h, i, j, k, l, m, n, o, p);
  } else {
    auto const& [a, b, c, d, e, g, h, i, j, k, l, m, n, o, p, q] = x;
    return f(a, b, c, d, e, g, h, i, j, k, l, m, n, o, p, q);
  }
}

template <typename... Parts>
struct PartTypes {};
struct TypesOf {
  template <typename... Parts>
  constexpr PartTypes<Parts...> operator()(Parts const&...) const noexcept {
    return {};
  }
};

template <typename T>
consteval std::size_t packed_size_of();
template <typename... Parts>
consteval std::size_t packed_size_of_all(PartTypes<Parts...>) {
  return (packed_size_of<Parts>() + ... + 0U);
}

template <typename T>
consteval std::size_t packed_size_of() {
  if constexpr (DiscsIn<T>::value) {
    return static_cast<std::size_t>(T::capacity()) * DiscsIn<T>::each + 5;
  } else if constexpr (IsVec2<T>::value) {
    return 2 * sizeof(typename T::Scalar);
  } else if constexpr (std::is_arithmetic_v<T> || std::is_enum_v<T>) {
    return std::is_same_v<T, bool> ? 1 : sizeof(T);
  } else if constexpr (TupleLike<T>) {
    return packed_size_of_all(decltype(std::apply(TypesOf{}, std::declval<T const&>())){});
  } else if constexpr (std::is_empty_v<T>) {
    return 0;
  } else {
    static_assert(std::is_aggregate_v<T>,
                  "wend: this can not be written as bytes; a memory is a plain struct of numbers, masks and such "
                  "structs, without constructors or private members");
    return packed_size_of_all(decltype(with_parts(std::declval<T const&>(), TypesOf{})){});
  }
}

// Bytes of a whole number, lowest first.
template <std::size_t Bytes, typename Out>
constexpr void pack_bits(std::uint64_t bits, Out& out) noexcept {
  for (std::size_t i = 0; i < Bytes; ++i) {
    out(static_cast<std::byte>(bits >> (8U * i)));
  }
}

}  // namespace detail

/// How many bytes `pack` writes for a T, whatever its value.
template <typename T>
inline constexpr std::size_t packed_size = detail::packed_size_of<std::remove_cv_t<T>>();

/// Hands the bytes of x to `out`, one call a byte. Numbers as their IEEE-754 bits, a mask as one byte 0 or 1, integers
/// and enumerations in their own size (a memory holds those of fixed width), structs member by member, sets of discs
/// with all their places, unused ones as zeros.
template <typename T, typename Out>
constexpr void pack(T const& x, Out& out) noexcept {
  if constexpr (detail::DiscsIn<T>::value) {
    for (int i = 0; i < T::capacity(); ++i) {
      if (i < x.size()) {
        pack(x[i], out);
        if constexpr (requires { x.velocities(); }) {
          pack(x.velocities()[i], out);
        }
      } else {
        for (std::size_t k = 0; k < detail::DiscsIn<T>::each; ++k) {
          out(std::byte{0});
        }
      }
    }
    constexpr int most = std::numeric_limits<std::uint16_t>::max();  // more than that are as many
    pack(static_cast<std::uint16_t>(x.size()), out);
    pack(static_cast<std::uint16_t>(x.dropped() < most ? x.dropped() : most), out);
    pack(x.rejected(), out);
  } else if constexpr (detail::IsVec2<T>::value) {
    pack(x.x(), out);
    pack(x.y(), out);
  } else if constexpr (std::is_same_v<T, bool>) {
    out(std::byte{static_cast<unsigned char>(x ? 1 : 0)});
  } else if constexpr (std::is_same_v<T, float>) {
    detail::pack_bits<4>(std::bit_cast<std::uint32_t>(x), out);
  } else if constexpr (std::is_same_v<T, double>) {
    detail::pack_bits<8>(std::bit_cast<std::uint64_t>(x), out);
  } else if constexpr (std::is_integral_v<T> || std::is_enum_v<T>) {
    detail::pack_bits<sizeof(T)>(static_cast<std::uint64_t>(x), out);
  } else if constexpr (detail::TupleLike<T>) {
    std::apply([&out](auto const&... parts) noexcept { (pack(parts, out), ...); }, x);
  } else if constexpr (!std::is_empty_v<T>) {
    detail::with_parts(x, [&out](auto const&... parts) noexcept { (pack(parts, out), ...); });
  }
}

namespace detail {

template <typename T>
constexpr void checksum_parts(T const& x, Crc32& sum) noexcept {
  if constexpr (std::is_pointer_v<T> || std::is_null_pointer_v<T> || std::is_empty_v<T>) {
    return;  // where something lies says nothing of what it is
  } else if constexpr (IsVec2<T>::value || std::is_same_v<T, bool> || std::is_floating_point_v<T>) {
    pack(x, sum);
  } else if constexpr (std::is_integral_v<T> || std::is_enum_v<T>) {
    pack_bits<8>(static_cast<std::uint64_t>(x), sum);  // a std::size_t is not as wide everywhere
  } else if constexpr (requires { x.begin(), x.end(); }) {
    for (auto const& part : x) {
      checksum_parts(part, sum);
    }
  } else if constexpr (TupleLike<T>) {
    std::apply([&sum](auto const&... parts) noexcept { (checksum_parts(parts, sum), ...); }, x);
  } else if constexpr (std::is_aggregate_v<T>) {
    sum(std::byte{static_cast<unsigned char>(part_count<T>())});
    with_parts(x, [&sum](auto const&... parts) noexcept { (checksum_parts(parts, sum), ...); });
  } else {
    static_assert(std::is_trivially_copyable_v<T>,
                  "wend: the parameters of this policy can not be read; make it a plain struct of its parameters");
    for (std::byte const byte : std::bit_cast<std::array<std::byte, sizeof(T)>>(x)) {
      sum(byte);  // a closure with captures, for example
    }
  }
}

}  // namespace detail

/// A checksum over the values of all parameters of a policy or loop, and over how many members its structs have: other
/// thresholds give another one. What two types without parameters do is not in it, nor what a pointer points to.
template <typename Parameters>
[[nodiscard]] constexpr std::uint32_t parameters_checksum(Parameters const& parameters) noexcept {
  Crc32 sum;
  detail::checksum_parts(parameters, sum);
  return sum.value();
}

}  // namespace wend::inline v0
