// tests/fuzz/target.hpp - bytes from anywhere, taken apart; and what happens when a property does not hold.
//
// Each <name>_fuzz.cpp defines fuzz_one. Built with clang's fuzzer it is driven by that; with any compiler it is run
// over the committed corpus by corpus.cpp.
#pragma once

#include <cstddef>
#include <cstdint>
#include <cstdio>
#include <cstdlib>
#include <cstring>
#include <type_traits>

#include "wend/members.hpp"
#include "wend/plane.hpp"

extern "C" int LLVMFuzzerTestOneInput(std::uint8_t const* data, std::size_t size);

namespace fuzz {

/// Bytes in order; zeros once there are no more.
class Bytes {
 public:
  Bytes(std::uint8_t const* data, std::size_t size) : data_(data), left_(size) {}

  [[nodiscard]] std::size_t left() const { return left_; }

  /// Any bits at all, also those of a number that is none.
  template <typename T>
    requires std::is_arithmetic_v<T>
  void take(T& value) {
    unsigned char raw[sizeof(T)] = {};
    std::size_t const count = left_ < sizeof(T) ? left_ : sizeof(T);
    std::memcpy(raw, data_, count);
    data_ += count;
    left_ -= count;
    if constexpr (std::is_same_v<T, bool>) {
      value = (raw[0] & 1U) != 0;  // a bool with other bits than 0 or 1 cannot be had without undefined behaviour
    } else {
      std::memcpy(&value, raw, sizeof(T));
    }
  }
  template <typename S>
  void take(wend::Vec2<S>& vector) {
    take(vector.x());
    take(vector.y());
  }
  /// A plain struct, member by member.
  template <typename T>
    requires std::is_aggregate_v<T>
  void take([[maybe_unused]] T& value) {
    wend::for_each_member(value, value, [this](auto& member, auto&) noexcept { this->take(member); });
  }
  template <typename T>
  [[nodiscard]] T next() {
    T value{};
    take(value);
    return value;
  }

 private:
  std::uint8_t const* data_;
  std::size_t left_;
};

/// Ends the run where a property does not hold.
inline void hold(bool property, char const* what) {
  if (!property) {
    std::fprintf(stderr, "fuzz: does not hold: %s\n", what);
    std::abort();
  }
}

/// All bits of a plain struct of floats and bools, for comparing two of them: as they are, not as numbers.
template <typename T>
[[nodiscard]] bool same_bits(T const& a, T const& b) {
  if constexpr (std::is_arithmetic_v<T>) {
    return std::memcmp(&a, &b, sizeof(T)) == 0;
  } else if constexpr (requires { a.x(); }) {
    return same_bits(a.x(), b.x()) && same_bits(a.y(), b.y());
  } else {
    [[maybe_unused]] bool same = true;
    wend::for_each_member(a, b, [&same](auto const& m, auto const& n) noexcept { same = same && same_bits(m, n); });
    return same;
  }
}

}  // namespace fuzz
