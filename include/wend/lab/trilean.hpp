// wend/lab/trilean.hpp - the answer to a comparison of sets: yes for all, no for all, or both occur.
#pragma once

namespace wend::inline v0::lab {

/// A yes or no about every member of a set (Kleene's three-valued logic). Starts as no.
struct Trilean {
  bool can_be = false;      ///< some member says yes
  bool can_be_not = true;   ///< some member says no

  /// Yes for every member.
  [[nodiscard]] static constexpr Trilean yes() noexcept { return {true, false}; }
  /// No for every member.
  [[nodiscard]] static constexpr Trilean no() noexcept { return {false, true}; }
  /// Yes for some, no for others; or not known.
  [[nodiscard]] static constexpr Trilean both() noexcept { return {true, true}; }

  /// Whether every member says yes.
  [[nodiscard]] constexpr bool surely() const noexcept { return can_be && !can_be_not; }
  /// Whether every member says no.
  [[nodiscard]] constexpr bool surely_not() const noexcept { return !can_be; }
  /// Whether both occur, or may.
  [[nodiscard]] constexpr bool undecided() const noexcept { return can_be && can_be_not; }

  /// @name Logic
  /// @{

  /// Of all answers that can be, taken for independent of each other.
  [[nodiscard]] friend constexpr Trilean operator!(Trilean a) noexcept { return {a.can_be_not, a.can_be}; }
  [[nodiscard]] friend constexpr Trilean operator&&(Trilean a, Trilean b) noexcept {
    return {a.can_be && b.can_be, a.can_be_not || b.can_be_not};
  }
  [[nodiscard]] friend constexpr Trilean operator||(Trilean a, Trilean b) noexcept {
    return {a.can_be || b.can_be, a.can_be_not && b.can_be_not};
  }
  /// @}

  /// a where m says yes, b where it says no, and all that either can be where m is undecided.
  [[nodiscard]] friend constexpr Trilean select(Trilean m, Trilean a, Trilean b) noexcept {
    return {(m.can_be && a.can_be) || (m.can_be_not && b.can_be),
            (m.can_be && a.can_be_not) || (m.can_be_not && b.can_be_not)};
  }
  /// Whether both tell the same.
  [[nodiscard]] friend constexpr bool operator==(Trilean, Trilean) noexcept = default;
};

}  // namespace wend::inline v0::lab
