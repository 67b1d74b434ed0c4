// wend/lab/lane_draws.hpp - random numbers by counting, one of each lane, with the same bits for one lane or many.
#pragma once

#include <array>
#include <bit>
#include <cstddef>
#include <cstdint>
#include <type_traits>

#include "wend/lab/lanes.hpp"
#include "wend/lab/random.hpp"
#include "wend/number.hpp"

namespace wend::inline v0::lab {

namespace detail {

// What a campaign draws for on lanes; those under 16 are simulate's, and how a machine is built is the same in both.
enum LanePurpose : std::uint32_t { of_pose = 16, of_motion, of_disc, of_world };

template <Number S>
struct WordsOf {
  using type = typename Row<std::uint32_t, S::width()>::type;
  using Signed = typename Row<std::int32_t, S::width()>::type;
  using Floats = typename Row<float, S::width()>::type;
};
template <>
struct WordsOf<float> {
  using type = std::uint32_t;
};

}  // namespace detail

/// 32 bits for each lane of a number.
template <Number S>
using words_t = typename detail::WordsOf<S>::type;

namespace detail {

// Both halves of the products of all lanes with one factor.
template <typename Words>
void multiply(std::uint32_t factor, Words const& words, Words& high, Words& low) noexcept {
  if constexpr (std::is_same_v<Words, std::uint32_t>) {
    std::uint64_t const product = std::uint64_t{factor} * words;
    high = static_cast<std::uint32_t>(product >> 32U);
    low = static_cast<std::uint32_t>(product);
  } else {
    constexpr std::size_t width = sizeof(Words) / sizeof(std::uint32_t);
#if defined(__clang__)  // which knows a widening product of rows by this form, and g++ by the other
    using Wide = typename Row<std::uint64_t, static_cast<int>(width)>::type;
    Wide const product = __builtin_convertvector(words, Wide) * std::uint64_t{factor};
    high = __builtin_convertvector(product >> 32U, Words);
    low = __builtin_convertvector(product, Words);
#else
    for (std::size_t k = 0; k < width; ++k) {
      std::uint64_t const product = std::uint64_t{factor} * words[k];
      high[k] = static_cast<std::uint32_t>(product >> 32U);
      low[k] = static_cast<std::uint32_t>(product);
    }
#endif
  }
}

// Integers of up to 24 bits as numbers, exactly.
template <Number S>
S as_number(words_t<S> const& words) noexcept {
  if constexpr (std::is_same_v<S, float>) {
    return static_cast<float>(static_cast<std::int32_t>(words));
  } else {
    using Signed = typename WordsOf<S>::Signed;
    return S(__builtin_convertvector(reinterpret_cast<Signed>(words), typename WordsOf<S>::Floats));
  }
}

// The low bit of each lane as a mask.
template <Number S>
mask_t<S> low_bit(words_t<S> const& words) noexcept {
  if constexpr (std::is_same_v<S, float>) {
    return (words & 1U) != 0;
  } else {
    return mask_t<S>(-reinterpret_cast<typename WordsOf<S>::Signed>(words & 1U));
  }
}

// A number's bits, and back.
template <Number S>
words_t<S> bits_of(S const& x) noexcept {
  if constexpr (std::is_same_v<S, float>) {
    return std::bit_cast<std::uint32_t>(x);
  } else {
    return reinterpret_cast<words_t<S>>(x.lanes());
  }
}
template <Number S>
S from_bits(words_t<S> const& words) noexcept {
  if constexpr (std::is_same_v<S, float>) {
    return std::bit_cast<float>(words);
  } else {
    return S(reinterpret_cast<typename WordsOf<S>::Floats>(words));
  }
}

}  // namespace detail

/// `philox` on all lanes at once: the same words as one at a time.
template <typename LaneWords>
[[nodiscard]] std::array<LaneWords, 4> philox_lanes(std::array<LaneWords, 4> counter,
                                                    std::array<std::uint32_t, 2> key) noexcept {
  for (int round = 0; round < 10; ++round) {
    LaneWords high0{}, low0{}, high1{}, low1{};
    detail::multiply(0xD2511F53U, counter[0], high0, low0);
    detail::multiply(0xCD9E8D57U, counter[2], high1, low1);
    counter = {high1 ^ counter[1] ^ key[0], low1, high0 ^ counter[3] ^ key[1], low0};
    key = {key[0] + 0x9E3779B9U, key[1] + 0xBB67AE85U};
  }
  return counter;
}

/// A number drawn evenly from (0, 1), from the upper 23 bits of a word: no rounding.
template <Number S>
[[nodiscard]] S uniform_of(words_t<S> const& word) noexcept {
  return (detail::as_number<S>(word >> 9U) + S(0.5F)) * S(0x1p-23F);
}

/// A number drawn evenly from (-1, 1).
template <Number S>
[[nodiscard]] S even_of(words_t<S> const& word) noexcept {
  return S(2.0F) * uniform_of<S>(word) - S(1.0F);
}

/// ln x of a normal number over 0, to 2 units in the last place of single precision or 1e-7, whichever is more: x is
/// 2^e m with m in [sqrt(1/2), sqrt(2)), and ln m = 2 artanh((m - 1) / (m + 1)) as its series up to the ninth power.
template <Number S>
[[nodiscard]] S log_of(S const& x) noexcept {
  constexpr std::uint32_t one = 0x3f800000U;        // the bits of 1
  constexpr std::uint32_t half_root = 0x3f3504f3U;  // the bits of sqrt(1/2)
  words_t<S> const shifted = detail::bits_of<S>(x) + (one - half_root);
  S const exponent = detail::as_number<S>(shifted >> 23U);
  S const m = detail::from_bits<S>((shifted & 0x007fffffU) + half_root);
  S const s = (m - S(1.0F)) / (m + S(1.0F));
  S const z = s * s;
  S const series = ((((S(0.22222222F) * z + S(0.28571429F)) * z + S(0.4F)) * z + S(0.66666667F)) * z + S(2.0F)) * s;
  return (exponent - S(127.0F)) * S(0.69314718F) + series;
}

/// Two numbers from the standard normal distribution, independent of each other, from two words (Box and Muller 1958).
/// Sine and cosine are their series to 3e-8 on an eighth of a turn each way; bits of the word say which quarter. None
/// is over 5.8.
template <Number S>
struct NormalPair {
  S first;  ///< independent of the second
  S second;  ///< independent of the first
};
/// The pair of two words that are drawn apart.
template <Number S>
[[nodiscard]] NormalPair<S> normals_of(words_t<S> const& radius_word, words_t<S> const& angle_word) noexcept {
  S const radius = root(S(S(-2.0F) * log_of(uniform_of<S>(radius_word))));
  S const a = even_of<S>(angle_word) * S(0.78539816F);  // a quarter of pi
  S const z = a * a;
  S const sine =
      a * (S(1.0F) + z * (S(-1.6666667e-1F) + z * (S(8.3333333e-3F) + z * (S(-1.9841270e-4F) + z * S(2.7557319e-6F)))));
  S const cosine = S(1.0F) + z * (S(-0.5F) + z * (S(4.1666667e-2F) + z * (S(-1.3888889e-3F) + z * S(2.4801587e-5F))));
  mask_t<S> const astern = detail::low_bit<S>(angle_word);  // below the 23 bits that make the angle
  mask_t<S> const across = detail::low_bit<S>(angle_word >> 1U);
  S const along = radius * select(astern, S(-cosine), cosine);
  S const aside = radius * sine;
  return {select(across, aside, along), select(across, along, aside)};
}

/// Draws for one run a lane: each lane's words are those of `Draws(seed, run)` at the same address.
template <Number S>
class LaneDraws {
 public:
  /// One 32-bit word a lane.
  using LaneWords = words_t<S>;

  /// All lanes draw for run 0, from tick 0, until `start` says otherwise.
  explicit LaneDraws(std::uint64_t seed) noexcept
      : key_{static_cast<std::uint32_t>(seed), static_cast<std::uint32_t>(seed >> 32U)} {}

  /// From now on one lane draws for this run, from tick 0.
  void start(int lane, std::uint64_t run) noexcept {
    set(run_low_, lane, static_cast<std::uint32_t>(run));
    set(run_high_, lane, static_cast<std::uint32_t>(run >> 32U));
    set(tick_, lane, 0);
  }

  /// All lanes go on to their next tick.
  void next_tick() noexcept { tick_ = tick_ + 1U; }

  /// Four words a lane, for what `purpose` says, and which `item` of many; the same address gives the same words.
  [[nodiscard]] std::array<LaneWords, 4> words(std::uint32_t purpose, LaneWords const& item) const noexcept {
    return philox_lanes<LaneWords>({run_low_, tick_, item, run_high_ ^ (purpose << 16U)}, key_);
  }
  /// The words of item 0.
  [[nodiscard]] std::array<LaneWords, 4> words(std::uint32_t purpose) const noexcept {
    return words(purpose, LaneWords{});
  }

  /// One lane of a row of words.
  static void set(LaneWords& words, [[maybe_unused]] int lane, std::uint32_t value) noexcept {
    if constexpr (std::is_same_v<LaneWords, std::uint32_t>) {
      words = value;
    } else {
      words[lane] = value;
    }
  }

 private:
  std::array<std::uint32_t, 2> key_;
  LaneWords run_low_{};
  LaneWords run_high_{};
  LaneWords tick_{};
};

}  // namespace wend::inline v0::lab
