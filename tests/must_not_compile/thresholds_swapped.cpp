// expects: wend_below_needs_enter_at_most_leave_so_swap_the_thresholds
#include "wend/wend.hpp"

#ifdef MENDED
constexpr auto near = wend::below(wend::clearance, 0.30F, 0.50F);
#else
constexpr auto near = wend::below(wend::clearance, 0.50F, 0.30F);
#endif

[[maybe_unused]] constexpr auto policy = wend::guarded(near, wend::past_disc{}, wend::toward_goal{});
