// wend/sensing/calibration.hpp - from what a ranger gives, volts or counts, to metres. The rim: plain comparisons, on
// float or double and on no guest.
#pragma once

#include <array>
#include <cstddef>
#include <limits>
#include <span>

#include "wend/number.hpp"
#include "wend/promise.hpp"

namespace wend::inline v0 {

/// One line of a calibration table.
struct CalibrationPoint {
  Parameter reading;  ///< in the ranger's own unit: volts, counts, microseconds
  Parameter metres;  ///< the distance it stands for, positive
};

/// A table with straight lines between its points, made by `calibration`, which checks it.
template <int Points>
struct Calibration {
  std::array<CalibrationPoint, static_cast<std::size_t>(Points)> points;  ///< readings rising, metres rising or falling

  /// Readings below and above which the ranger is broken (a wire off, a short circuit): not-a-number, so that the beam
  /// does not count as alive.
  Parameter least_reading = -std::numeric_limits<Parameter>::max();
  Parameter greatest_reading = std::numeric_limits<Parameter>::max();  ///< in the ranger's own unit
  Parameter no_echo = std::numeric_limits<Parameter>::infinity();  ///< what the Ring behind it takes for no echo

  /// Metres for a reading. Beyond the far end of the table there is nothing: `no_echo`. Beyond the near end something
  /// is nearer than the table knows: the least distance of the table, since it must not be overlooked; a ring that
  /// shall not take it for an echo has a greater min_range. Not-a-number for a reading that is not finite or that a
  /// sound ranger does not give.
  template <PlainNumber S>
  [[nodiscard]] constexpr S operator()(S const& reading) const noexcept {
    CalibrationPoint const& first = points.front();
    CalibrationPoint const& last = points.back();
    bool const far_first = first.metres > last.metres;
    if (!finite(reading) || reading < S(least_reading) || reading > S(greatest_reading)) {
      return std::numeric_limits<S>::quiet_NaN();
    }
    if (reading < S(first.reading)) {
      return far_first ? S(no_echo) : S(first.metres);
    }
    if (reading > S(last.reading)) {
      return far_first ? S(last.metres) : S(no_echo);
    }
    // The first stretch that ends at the reading or above it: there is one, and no more than Points steps find it.
    std::size_t low = 0;
    while (low + 2 < points.size() && reading > S(points[low + 1].reading)) {
      ++low;
    }
    CalibrationPoint const& a = points[low];
    CalibrationPoint const& b = points[low + 1];
    S const share = (reading - S(a.reading)) / (S(b.reading) - S(a.reading));
    return S(a.metres) + share * (S(b.metres) - S(a.metres));
  }
};

namespace detail {
inline void wend_calibration_needs_readings_that_rise_from_point_to_point() noexcept {}
inline void wend_calibration_needs_positive_metres_that_only_rise_or_only_fall() noexcept {}

// Whether b comes after a; false of not-a-number.
[[nodiscard]] constexpr bool in_order(Parameter a, Parameter b) noexcept { return a < b && finite(a) && finite(b); }
}  // namespace detail

/// A table as a constant: `calibration({{0.4F, 0.80F}, {0.8F, 0.35F}, {2.6F, 0.10F}})`. One whose readings do not rise,
/// or whose metres do not all rise or all fall, does not compile.
template <std::size_t Points>
[[nodiscard]] consteval Calibration<static_cast<int>(Points)> calibration(CalibrationPoint const (&points)[Points]) {
  static_assert(Points >= 2, "wend: a calibration needs two points at least");
  Calibration<static_cast<int>(Points)> table{};
  bool const rises = points[0].metres < points[1].metres;
  table.points[0] = points[0];
  detail::promise(points[0].metres > 0.0F, detail::wend_calibration_needs_positive_metres_that_only_rise_or_only_fall);
  for (std::size_t i = 1; i < Points; ++i) {
    table.points[i] = points[i];
    Parameter const before = points[i - 1].metres;
    Parameter const after = points[i].metres;
    detail::promise(detail::in_order(points[i - 1].reading, points[i].reading),
                    detail::wend_calibration_needs_readings_that_rise_from_point_to_point);
    detail::promise(after > 0.0F && (rises ? detail::in_order(before, after) : detail::in_order(after, before)),
                    detail::wend_calibration_needs_positive_metres_that_only_rise_or_only_fall);
  }
  return table;
}

/// A sensing whose readings come through a calibration: `calibrated(table, ring)`.
template <typename Table, typename Sensing>
struct Calibrated {
  Table table;  ///< from readings to metres
  Sensing sensing;  ///< what is asked with the metres

  /// As the sensing's own, of readings in the table's unit.
  template <PlainNumber S, std::size_t Beams, typename Discs>
  auto discs(std::span<S const, Beams> readings, Discs& discs) const noexcept {
    std::array<S, Beams> metres;
    for (std::size_t i = 0; i < Beams; ++i) {
      metres[i] = table(readings[i]);
    }
    return sensing.discs(std::span<S const, Beams>(metres), discs);
  }
};

/// See Calibrated. Steps that remember follow it: followed_by(calibrated(table, ring), Tracker<16>{}).
template <typename Table, typename Sensing>
[[nodiscard]] constexpr Calibrated<Table, Sensing> calibrated(Table const& table, Sensing const& sensing) noexcept {
  return {table, sensing};
}

}  // namespace wend::inline v0
