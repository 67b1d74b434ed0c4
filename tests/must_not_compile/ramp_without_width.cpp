// expects: wend_ramp_needs_low_under_high
#include "wend/wend.hpp"

#ifdef MENDED
constexpr auto weight = wend::ramp(wend::clearance, 0.5F, 1.2F);
#else
constexpr auto weight = wend::ramp(wend::clearance, 0.5F, 0.5F);
#endif

[[maybe_unused]] constexpr auto policy = wend::blend(weight, wend::away_from_discs{}, wend::toward_goal{});
