// expects: wend_kept_clear_needs_a_speed_over_zero
#include "wend/wend.hpp"

#ifdef MENDED
constexpr wend::Parameter speed = 0.6F;
#else
constexpr wend::Parameter speed = 0.0F;
#endif

[[maybe_unused]] constexpr auto policy = wend::kept_clear(wend::toward_goal{}, speed);
