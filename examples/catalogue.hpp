// Every method of the library that can drive by itself, under the name it is compared by. Arbiters are shown with the
// fields that they are usually given. Those whose parameters are places are set up for a trip from (0, 0) to (8, 0).
#pragma once

#include <cstddef>
#include <tuple>

#include <wend/wend.hpp>

#include "policies.hpp"

namespace catalogue {

using namespace wend;

template <typename Policy>
struct Named {
  char const* name;
  Policy policy;
  bool placed = false;  ///< set up for that trip and for no other
};
template <typename Policy>
[[nodiscard]] constexpr Named<Policy> named(char const* name, Policy policy) {
  return {name, policy};
}
template <typename Policy>
[[nodiscard]] constexpr Named<Policy> placed(char const* name, Policy policy) {
  return {name, policy, true};
}

inline constexpr std::tuple all{
    // Fields.
    named("toward_goal", toward_goal{}),
    named("past_disc", past_disc{}),
    named("potential_field", potential_field{}),
    // Arbiters.
    named("guarded, one threshold", policies::hard_switch),
    named("guarded, two", policies::two_thresholds),
    named("blend", policies::blended),
    named("composed", policies::composed),
    named("priority", priority(only_when(below(clearance, 0.3F, 0.5F), past_disc{}), toward_goal{})),
};

inline constexpr std::size_t size = std::tuple_size_v<decltype(all)>;

}  // namespace catalogue
