// wend/lab/claims.hpp - what somebody says of a machine in a scene, to be held against what is found.
#pragma once

#include <optional>

namespace wend::inline v0::lab {

/// What is claimed of a machine in a scene; nothing, where nothing is.
struct Claims {
  std::optional<double> keeps_clear{};  ///< metres between the body's edge and a disc's, at the least: see KeepsClear
  std::optional<double> seen_within{};  ///< metres that a disc's edge may be seen off, for that; none: 0
  std::optional<double> arrives{};  ///< share of the drawn runs that arrive, at the least, in [0, 1]
  std::optional<double> contacts{};  ///< probability that a drawn run touches a disc, at the most, in [0, 1]
};

}  // namespace wend::inline v0::lab
