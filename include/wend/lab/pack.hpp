// wend/lab/pack.hpp - W machines in lockstep: a number whose value is a row of SIMD lanes.
#pragma once

#include <cmath>
#include <cstdint>
#include <type_traits>

#if defined(__SSE__)
#include <immintrin.h>
#endif

#include <Eigen/Core>

#include "wend/number.hpp"

// g++ warns that wide vectors are returned in another way with AVX than without. It matters only between objects built
// with different options, and nothing here is ever called out of line.
#if defined(__GNUC__) && !defined(__clang__)
#pragma GCC diagnostic push
#pragma GCC diagnostic ignored "-Wpsabi"
#endif

namespace wend::inline v0::lab {

namespace detail {

// In the old notation, and over a type: g++ 12 drops a vector_size in a `using`, or on a type that is not a parameter.
template <typename T, int W>
struct Row {
  typedef T type __attribute__((vector_size(W * sizeof(T))));
};

}  // namespace detail

/// How many numbers fit the widest registers that the compiler may use. g++ 12 takes comparisons of longer rows apart,
/// so that more lanes than these are slower.
#if defined(__AVX512F__)
inline constexpr int native_lanes = 16;
#elif defined(__AVX__)
inline constexpr int native_lanes = 8;
#else
inline constexpr int native_lanes = 4;
#endif

/// W single-precision numbers side by side (the compilers' vector extension, which g++ and clang share). Each lane does
/// what a float alone would do, bit for bit, as long as the compiler may not contract a product and a sum into one
/// rounding (-ffp-contract=off).
template <int W>
class Pack {
  static_assert(W >= 2 && (W & (W - 1)) == 0, "wend: lab::Pack<W> needs a power of two of lanes; write lab::Pack<8>");

  using Lanes = typename detail::Row<float, W>::type;
  using Bits = typename detail::Row<std::int32_t, W>::type;

 public:
  /// One yes or no a lane.
  class Mask {
   public:
    /// No in all lanes.
    Mask() = default;
    /// Of a row of integers, each 0 for no or -1 for yes.
    explicit Mask(Bits const& bits) noexcept : bits_(bits) {}
    /// The same answer in all lanes.
    explicit Mask(bool all) noexcept : bits_(Bits{} - (all ? 1 : 0)) {}

    /// The answer in one lane, in [0, W).
    [[nodiscard]] bool operator[](int lane) const noexcept { return bits_[lane] != 0; }
    /// @name Logic
    /// @{

    /// Lane by lane.
    [[nodiscard]] friend Mask operator&&(Mask const& a, Mask const& b) noexcept { return Mask(a.bits_ & b.bits_); }
    [[nodiscard]] friend Mask operator||(Mask const& a, Mask const& b) noexcept { return Mask(a.bits_ | b.bits_); }
    [[nodiscard]] friend Mask operator!(Mask const& a) noexcept { return Mask(~a.bits_); }
    [[nodiscard]] friend Mask select(Mask const& m, Mask const& a, Mask const& b) noexcept {
      return Mask((m.bits_ & a.bits_) | (~m.bits_ & b.bits_));
    }
    /// @}

    /// A row of integers, each 0 for no or -1 for yes.
    [[nodiscard]] Bits const& bits() const noexcept { return bits_; }

   private:
    Bits bits_{};
  };

  /// 0 in all lanes.
  Pack() = default;
  /// The same number in all lanes.
  explicit Pack(float all) noexcept : lanes_(Lanes{} + all) {}
  /// Lane k is f(k).
  template <typename F>
    requires std::is_invocable_r_v<float, F, int>
  explicit Pack(F const& f) noexcept {
    for (int lane = 0; lane < W; ++lane) {
      lanes_[lane] = f(lane);
    }
  }

  /// From and to the compilers' own row of numbers, for what has to work on bits.
  explicit Pack(Lanes const& lanes) noexcept : lanes_(lanes) {}
  /// The compilers' own row of numbers.
  [[nodiscard]] Lanes const& lanes() const noexcept { return lanes_; }

  /// How many lanes there are.
  [[nodiscard]] static constexpr int width() noexcept { return W; }
  /// The number in one lane, in [0, W).
  [[nodiscard]] float operator[](int lane) const noexcept { return lanes_[lane]; }
  /// Another value in one lane.
  void set(int lane, float value) noexcept { lanes_[lane] = value; }

  /// @name Arithmetic
  /// @{

  /// Lane by lane, as a float alone.
  [[nodiscard]] friend Pack operator+(Pack const& a, Pack const& b) noexcept { return Pack(a.lanes_ + b.lanes_); }
  [[nodiscard]] friend Pack operator-(Pack const& a, Pack const& b) noexcept { return Pack(a.lanes_ - b.lanes_); }
  [[nodiscard]] friend Pack operator*(Pack const& a, Pack const& b) noexcept { return Pack(a.lanes_ * b.lanes_); }
  [[nodiscard]] friend Pack operator/(Pack const& a, Pack const& b) noexcept { return Pack(a.lanes_ / b.lanes_); }
  [[nodiscard]] friend Pack operator-(Pack const& a) noexcept { return Pack(-a.lanes_); }
  Pack& operator+=(Pack const& b) noexcept { return *this = *this + b; }  // Eigen's sums ask for these
  Pack& operator*=(Pack const& b) noexcept { return *this = *this * b; }
  /// @}

  /// @name Comparison
  /// @{

  /// Lane by lane; no where a number is not one.
  [[nodiscard]] friend Mask operator<(Pack const& a, Pack const& b) noexcept { return Mask(a.lanes_ < b.lanes_); }
  [[nodiscard]] friend Mask operator>(Pack const& a, Pack const& b) noexcept { return Mask(a.lanes_ > b.lanes_); }
  [[nodiscard]] friend Mask operator<=(Pack const& a, Pack const& b) noexcept { return Mask(a.lanes_ <= b.lanes_); }
  [[nodiscard]] friend Mask operator>=(Pack const& a, Pack const& b) noexcept { return Mask(a.lanes_ >= b.lanes_); }
  /// @}

  /// Each lane from a or b.
  [[nodiscard]] friend Pack select(Mask const& m, Pack const& a, Pack const& b) noexcept {
    return Pack(m.bits() ? a.lanes_ : b.lanes_);
  }
  /// Lane by lane, correctly rounded; not-a-number for what is negative.
  [[nodiscard]] friend Pack sqrt(Pack const& a) noexcept { return Pack(roots(a.lanes_)); }
  /// Lane by lane, by the bits of the exponents.
  [[nodiscard]] friend Mask finite(Pack const& a) noexcept {
    constexpr std::int32_t exponent = 0x7f800000;
    return Mask((reinterpret_cast<Bits>(a.lanes_) & exponent) != exponent);
  }

 private:
  // Neither compiler surely makes one instruction of a loop over std::sqrt.
  [[nodiscard]] static Lanes roots(Lanes const& x) noexcept {
#if defined(__AVX512F__)
    if constexpr (W == 16) {
      return _mm512_sqrt_ps(x);
    }
#endif
#if defined(__AVX__)
    if constexpr (W == 8) {
      return _mm256_sqrt_ps(x);
    }
#endif
#if defined(__SSE__)
    if constexpr (W == 4) {
      return _mm_sqrt_ps(x);
    }
#endif
    Lanes result{};
    for (int lane = 0; lane < W; ++lane) {
      result[lane] = std::sqrt(x[lane]);
    }
    return result;
  }

  Lanes lanes_{};
};

}  // namespace wend::inline v0::lab

namespace Eigen {

/// Lets a Pack be the scalar of an Eigen vector.
template <int W>
struct NumTraits<wend::lab::Pack<W>> : GenericNumTraits<wend::lab::Pack<W>> {
  enum {
    IsInteger = 0,
    IsSigned = 1,
    IsComplex = 0,
    RequireInitialization = 1,
    ReadCost = 1,
    AddCost = 1,
    MulCost = 1
  };
};

}  // namespace Eigen

#if defined(__GNUC__) && !defined(__clang__)
#pragma GCC diagnostic pop
#endif
