// expects: wend_calibration_needs_positive_metres_that_only_rise_or_only_fall
#include "wend/sensing/calibration.hpp"

#ifdef MENDED
[[maybe_unused]] constexpr auto table = wend::calibration({{0.4F, 0.8F}, {0.8F, 0.35F}, {2.6F, 0.1F}});
#else
[[maybe_unused]] constexpr auto table = wend::calibration({{0.4F, 0.8F}, {0.8F, 0.35F}, {2.6F, 0.5F}});
#endif
