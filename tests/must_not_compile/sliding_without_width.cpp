// expects: wend_sliding_needs_a_width_over_zero
#include "wend/wend.hpp"

#ifdef MENDED
constexpr wend::Parameter width = 0.1F;
#else
constexpr wend::Parameter width = 0.0F;
#endif

[[maybe_unused]] constexpr auto policy = wend::sliding(0.35F, width, wend::away_from_discs{}, wend::toward_goal{});
