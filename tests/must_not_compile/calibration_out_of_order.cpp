// expects: wend_calibration_needs_readings_that_rise_from_point_to_point
#include "wend/sensing/calibration.hpp"

#ifdef MENDED
[[maybe_unused]] constexpr auto table = wend::calibration({{0.4F, 0.8F}, {0.8F, 0.35F}, {2.6F, 0.1F}});
#else
[[maybe_unused]] constexpr auto table = wend::calibration({{0.4F, 0.8F}, {2.6F, 0.1F}, {0.8F, 0.35F}});
#endif
